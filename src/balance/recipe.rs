//! What was put in: the amounts behind the constants of balances.

use num_rational::Rational64;
use num_traits::ToPrimitive;

use super::Part;
use super::split::split_into_species;
use crate::problem::exact::Exact;
use crate::problem::model::{self, AmountSource, HeldWhat, Presence, Problem, Solid};
use crate::problem::scope::PROTON;

impl Held {
    fn of(problem: &Problem, held: &model::Held, amount: Option<f64>) -> Held {
        let scope = &problem.scope;
        let one = Rational64::from(1);
        let component = |j: usize| (vec![(j, one)], scope.components[j].formula.charge);
        let (brings, charge) = match held.what {
            HeldWhat::Ph(_) => component(PROTON),
            HeldWhat::Pe(_) => scope.component("e-").map(component).unwrap_or_default(),
            HeldWhat::Pressure { species, .. } => (row_of(problem, species), 0),
            HeldWhat::Activity { .. } | HeldWhat::Concentration { .. } => {
                held.releases.map(component).unwrap_or_default()
            }
        };
        Held { brings, charge, amount }
    }

    fn of_solid(problem: &Problem, solid: &Solid, amount: Option<f64>) -> Held {
        Held { brings: row_of(problem, solid.species), charge: 0, amount }
    }
}

/// What a species of the scope is made of.
fn row_of(problem: &Problem, species: usize) -> Row {
    let made = problem.scope.belonging.made[species].as_ref();
    made.map(|made| made.row.clone()).unwrap_or_default()
}

/// A row over the components: (index, coefficient), by rising index, no zeros.
pub type Row = Vec<(usize, Rational64)>;

/// The sources of every component. A component takes its amount from `totals`, or else
/// from the reagents and held phases that bring it.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Recipe {
    pub reagents: Vec<Reagent>,
    /// Of each component: its total where one was given, mol per litre or kilogram.
    pub totals: Vec<Option<f64>>,
    /// Held values, and behind them the solids in excess.
    pub held: Vec<Held>,
    pub precipitates: Vec<Precipitate>,
}

#[derive(Clone, Debug, Default, PartialEq)]
pub struct Reagent {
    /// What one mole brings of each component, the proton included.
    pub brings: Row,
    /// The dissolved species that one mole splits into; empty where it splits into none.
    pub forms: Vec<(usize, Rational64)>,
    /// mol per litre or kilogram of the mixture; none while a target has yet to find it.
    pub amount: Option<f64>,
}

/// A gas, a solid or a species whose activity or concentration is held.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Held {
    /// What one mole of it is over the components.
    pub brings: Row,
    pub charge: i32,
    /// What it brought, once that is known.
    pub amount: Option<f64>,
}

/// A solid that may form.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Precipitate {
    /// What one mole of it holds of each component.
    pub holds: Row,
    /// What formed, mol per litre or kilogram, once that is known.
    pub amount: Option<f64>,
}

impl Recipe {
    /// What a problem puts in. `brought` is what each held value, each solid in excess and each
    /// that may form brought, once solved.
    pub fn of(problem: &Problem, brought: Option<&[f64]>) -> Recipe {
        let stoichiometry = &problem.scope.stoichiometry;
        let dilution = problem.dilution();
        let known = |reagent: &model::Reagent| {
            (reagent.target.is_none() || problem.found.is_some()).then_some(reagent.amount)
        };
        let reagents = problem.reagents.iter().map(|reagent| Reagent {
            brings: reagent.row.clone(),
            forms: reagent.giving.clone().unwrap_or_else(|| {
                split_into_species(&reagent.row, stoichiometry).unwrap_or_default().forms
            }),
            amount: known(reagent).map(|amount| amount / dilution),
        });
        let totals = problem.amounts.iter().map(|amount| match amount.source {
            AmountSource::Total | AmountSource::Found(_) | AmountSource::Blend => {
                amount.total.map(|total| total / dilution)
            }
            AmountSource::Nothing | AmountSource::Reagents | AmountSource::Held(_) => None,
        });
        let mut recipe =
            Recipe { reagents: reagents.collect(), totals: totals.collect(), ..Recipe::default() };
        if let Some(proton) = recipe.totals.first_mut() {
            *proton = None;
        }
        let mut brought = (0..).map(|index| brought?.get(index).copied());
        let mut amount = || brought.next().flatten();
        let held = problem.held.iter().map(|held| Held::of(problem, held, amount()));
        let mut phases: Vec<Held> = held.collect();
        let excess = problem.solids_that_are(Presence::Excess);
        phases.extend(excess.map(|solid| Held::of_solid(problem, solid, amount())));
        recipe.precipitates = problem
            .solids_that_are(Presence::Forms)
            .map(|solid| {
                let holds = row_of(problem, solid.species);
                // A plain zero where nothing formed.
                Precipitate { holds, amount: amount().map(|brought| 0.0 - brought) }
            })
            .collect();
        for held in phases {
            // What only a held gas or a solid in excess brings has that for its source.
            for &(j, _) in &held.brings {
                if problem.amounts[j].source == AmountSource::Nothing {
                    recipe.totals[j] = None;
                }
            }
            recipe.held.push(held);
        }
        for (j, amount) in problem.amounts.iter().enumerate().skip(1) {
            let brings = |held: &Held| held.brings.iter().any(|(column, _)| *column == j);
            // Listed and never brought in: absent.
            if amount.source == AmountSource::Nothing && !recipe.held.iter().any(brings) {
                recipe.totals[j] = Some(0.0);
            }
        }
        recipe
    }

    /// The sources of a component's amount: `total = Σ coefficient · part`. Where it has
    /// none, its total stands for itself.
    pub fn sources(&self, component: usize) -> Vec<(Part, Rational64)> {
        if self.totals.get(component).copied().flatten().is_some() {
            return vec![(Part::Total(component), Rational64::from(1))];
        }
        let of = |row: &Row| {
            let at = row.iter().find(|(column, _)| *column == component);
            at.map(|(_, coefficient)| *coefficient)
        };
        let reagents = self.reagents.iter().enumerate().filter_map(|(index, reagent)| {
            of(&reagent.brings).map(|coefficient| (Part::Added(index), coefficient))
        });
        let held = self.held.iter().enumerate().filter_map(|(index, held)| {
            of(&held.brings).map(|coefficient| (Part::Held(index), coefficient))
        });
        let found: Vec<_> = reagents.chain(held).collect();
        if found.is_empty() { vec![(Part::Total(component), Rational64::from(1))] } else { found }
    }

    /// How often each solid that may form holds a component.
    pub fn precipitated_in(
        &self,
        component: usize,
    ) -> impl Iterator<Item = (Part, Rational64)> + '_ {
        self.precipitates.iter().enumerate().filter_map(move |(index, solid)| {
            let (_, n) = solid.holds.iter().find(|(column, _)| *column == component)?;
            Some((Part::Precipitated(index), *n))
        })
    }

    /// The amount of a part, mol per litre or kilogram; none where it is not known.
    pub fn value(&self, part: Part) -> Option<f64> {
        match part {
            Part::Added(reagent) => self.reagents.get(reagent)?.amount,
            Part::Held(held) => self.held.get(held)?.amount,
            Part::Precipitated(solid) => self.precipitates.get(solid)?.amount,
            Part::Total(component) => match self.totals.get(component).copied().flatten() {
                // A held gas adds to what was given, or takes from it.
                Some(total) => Some(total + self.exchanged(component)?),
                None => match self.sources(component).as_slice() {
                    [(Part::Total(_), _)] => None,
                    sources => self.sum(sources),
                },
            },
        }
    }

    /// What held values brought of a component, mol per litre or kilogram; none where that is
    /// not known.
    fn exchanged(&self, component: usize) -> Option<f64> {
        let mut sum = 0.0;
        for held in &self.held {
            if let Some((_, n)) = held.brings.iter().find(|(column, _)| *column == component) {
                sum += n.to_f64()? * held.amount?;
            }
        }
        Some(sum)
    }

    /// The sum of parts; none where one is not known.
    pub fn sum(&self, parts: &[(Part, Rational64)]) -> Option<f64> {
        let mut sum = 0.0;
        for (part, coefficient) in parts {
            sum += coefficient.to_f64()? * self.value(*part)?;
        }
        Some(sum)
    }

    /// Whether a component is known to be absent: its total is zero.
    pub fn is_absent(&self, component: usize) -> bool {
        let sources = self.sources(component);
        // Amounts of either sign may cancel, and what is held may be anything.
        sources.iter().all(|(part, _)| self.value(*part) == Some(0.0))
    }

    /// Parts written out in what the recipe itself gives: a component's total that
    /// comes from reagents becomes their sum. None where a coefficient does not fit.
    pub(crate) fn written_out<E: Exact>(&self, parts: &[(Part, E)]) -> Option<Vec<(Part, E)>> {
        let mut out: Vec<(Part, E)> = Vec::new();
        let mut add = |part: Part, more: E| {
            match out.binary_search_by_key(&part, |(part, _)| *part) {
                Ok(at) => out[at].1 = out[at].1.plus(&more)?,
                Err(at) => out.insert(at, (part, more)),
            }
            Some(())
        };
        for (part, coefficient) in parts {
            match part {
                Part::Total(component) => {
                    for (source, factor) in self.sources(*component) {
                        add(source, coefficient.times(&E::of(factor)?)?)?;
                    }
                }
                part => add(*part, coefficient.clone())?,
            }
        }
        out.retain(|(_, coefficient)| !coefficient.is_zero());
        Some(out)
    }
}
