//! Small systems for the tests of balances, written by hand.
#![allow(dead_code)]

pub mod made;

use lyate::balance::recipe::{Held, Reagent, Recipe};
use lyate::balance::split::split_into_species;
use lyate::balance::{Balance, Part};
use lyate::problem::stoichiometry::{SpeciesRow, Stoichiometry};
use num_rational::Rational64;

pub fn r(n: i64) -> Rational64 {
    Rational64::from(n)
}

pub type Counts<'a> = &'a [(&'a str, i64)];

/// A system with its recipe.
#[derive(Clone, Debug, Default)]
pub struct System {
    pub stoichiometry: Stoichiometry,
    pub recipe: Recipe,
    pub reagents: Vec<String>,
    pub held: Vec<String>,
}

impl System {
    /// Components besides the proton, with their charges; each is a species too. Water
    /// brings OH-.
    pub fn new(components: &[(&str, i32)]) -> System {
        let mut system = System::default();
        for (name, charge) in [("H+", 1)].iter().chain(components) {
            system.stoichiometry.components.push((*name).to_owned());
            system.stoichiometry.component_charges.push(*charge);
            system.recipe.totals.push(None);
        }
        for (name, _) in [("H+", 1)].iter().chain(components) {
            if *name != "e-" {
                system = system.species(name, &[(name, 1)]);
            }
        }
        system.species("OH-", &[("H+", -1)])
    }

    pub fn component(&self, name: &str) -> usize {
        self.stoichiometry.components.iter().position(|c| c == name).expect(name)
    }

    pub fn row(&self, counts: Counts) -> Vec<(usize, Rational64)> {
        let mut row: Vec<_> =
            counts.iter().map(|(name, n)| (self.component(name), r(*n))).collect();
        row.sort();
        row
    }

    /// A species over the components; its charge follows.
    pub fn species(mut self, name: &str, counts: Counts) -> System {
        let row = self.row(counts);
        let charge = counts
            .iter()
            .map(|(name, n)| self.stoichiometry.component_charges[self.component(name)] * *n as i32)
            .sum();
        self.stoichiometry.species.push(SpeciesRow { name: name.to_owned(), charge, row });
        self
    }

    /// A reagent by what it brings, split into species by the rule.
    pub fn add(mut self, name: &str, counts: Counts, amount: f64) -> System {
        let brings = self.row(counts);
        let split = split_into_species(&brings, &self.stoichiometry);
        let forms = split.map(|split| split.forms).unwrap_or_default();
        self.recipe.reagents.push(Reagent { brings, forms, amount: Some(amount) });
        self.reagents.push(name.to_owned());
        self
    }

    pub fn total(mut self, name: &str, total: f64) -> System {
        let component = self.component(name);
        self.recipe.totals[component] = Some(total);
        self
    }

    pub fn hold(mut self, name: &str, counts: Counts, charge: i32) -> System {
        self.recipe.held.push(Held { brings: self.row(counts), charge, amount: None });
        self.held.push(name.to_owned());
        self
    }

    pub fn species_index(&self, name: &str) -> usize {
        self.stoichiometry.species.iter().position(|s| s.name == name).expect(name)
    }

    /// A balance in one line, in the order of the species, as a file would have it.
    pub fn show(&self, balance: &Balance) -> String {
        let mut left: Vec<String> = Vec::new();
        let mut right: Vec<String> = Vec::new();
        let mut push = |coefficient: Rational64, text: String, on_left: bool| {
            let positive = coefficient > r(0);
            let size = if positive { coefficient } else { -coefficient };
            let text = if size == r(1) { text } else { format!("{size} {text}") };
            if positive == on_left { left.push(text) } else { right.push(text) }
        };
        for (species, coefficient) in &balance.terms {
            let name = &self.stoichiometry.species[*species].name;
            push(*coefficient, format!("[{name}]"), true);
        }
        for (part, coefficient) in &balance.parts {
            let text = match part {
                Part::Total(c) => format!("total {}", self.stoichiometry.components[*c]),
                Part::Added(r) => format!("added {}", self.reagents[*r]),
                Part::Held(h) => format!("held {}", self.held[*h]),
                Part::Precipitated(k) => format!("precipitated {k}"),
            };
            push(*coefficient, text, false);
        }
        let side =
            |terms: Vec<String>| if terms.is_empty() { "0".into() } else { terms.join(" + ") };
        format!("{} = {}", side(left), side(right))
    }
}

/// Ammonia, sulfate and sodium, with (NH4)2SO4 and NaOH: a scrubber's sump.
pub fn sump() -> System {
    System::new(&[("NH3", 0), ("SO4^2-", -2), ("Na+", 1)])
        .species("NH4+", &[("NH3", 1), ("H+", 1)])
        .species("HSO4-", &[("SO4^2-", 1), ("H+", 1)])
        .add("(NH4)2SO4", &[("NH3", 2), ("H+", 2), ("SO4^2-", 1)], 12e-3)
        .add("NaOH", &[("Na+", 1), ("H+", -1)], 9e-3)
}

/// The species of carbonate over CO3^2-.
pub fn carbonate(system: System) -> System {
    system
        .species("HCO3-", &[("CO3^2-", 1), ("H+", 1)])
        .species("H2CO3*", &[("CO3^2-", 1), ("H+", 2)])
}
