//! Reagents split over components by their formulas, and the space of balances against
//! counting atoms.

use lyate::balance::mass::mass_balance;
use lyate::balance::recipe::Recipe;
use lyate::chemistry::element::Element;
use lyate::chemistry::formula::{Atom, Formula, Groups};
use lyate::problem::elimination::{Solution, SparseRow, express, rank};
use lyate::problem::reagent::{SplitProblem, split_over_components};
use lyate::problem::stoichiometry::{SpeciesRow, Stoichiometry};
use num_rational::Rational64;
use proptest::prelude::*;

fn read(text: &str) -> Formula {
    let (groups, _) = Groups::from_definitions(&[("Cit", Some("C6H5O7")), ("Hum", None)]);
    Formula::parse(text, &groups).unwrap()
}

fn split(reagent: &str, components: &[&str]) -> Result<Vec<Rational64>, SplitProblem> {
    let components: Vec<Formula> = components.iter().map(|name| read(name)).collect();
    split_over_components(&read(reagent), &components.iter().collect::<Vec<_>>())
}

fn whole(amounts: &[i64]) -> Result<Vec<Rational64>, SplitProblem> {
    Ok(amounts.iter().map(|n| Rational64::from(*n)).collect())
}

#[test]
fn splits_by_elements_and_charge() {
    let base = ["H+", "H2O"];
    let with = |more: &[&'static str]| -> Vec<&'static str> { [&base[..], more].concat() };
    for (reagent, components, amounts) in [
        ("(NH4)2SO4", with(&["NH3", "SO4^2-"]), &[2, 0, 2, 1][..]),
        ("NaOH", with(&["Na+"]), &[-1, 1, 1]),
        ("CaO", with(&["Ca^2+"]), &[-2, 1, 1]),
        ("Ca(OH)2", with(&["Ca^2+"]), &[-2, 2, 1]),
        ("CO2", with(&["CO3^2-"]), &[2, -1, 1]),
        ("Na2B4O7·10H2O", with(&["Na+", "B(OH)3"]), &[-2, 5, 2, 4]),
        ("CaSO4·2H2O", with(&["Ca^2+", "SO4^2-"]), &[0, 2, 1, 1]),
        ("H3Cit", with(&["Cit^3-"]), &[3, 0, 1]),
        ("NaHum", with(&["Na+", "Hum-"]), &[0, 0, 1, 1]),
        ("FeSO4", with(&["Fe^3+", "SO4^2-", "e-"]), &[0, 0, 1, 1, 1]),
        ("O2", with(&["e-"]), &[-4, 2, -4]),
        ("H2O", with(&[]), &[0, 1]),
    ] {
        assert_eq!(split(reagent, &components), whole(amounts), "{reagent}");
    }
}

#[test]
fn says_why_there_is_no_split() {
    let split = |reagent, more: &[&'static str]| split(reagent, &[&["H+", "H2O"], more].concat());
    assert_eq!(split("NH4+", &["NH3"]), Err(SplitProblem::NotNeutral { charge: 1 }));
    let potassium = Atom::Element(Element::from_symbol("K").unwrap());
    assert_eq!(split("KCl", &["Cl-", "Na+"]), Err(SplitProblem::Unheld { atom: potassium }));
    // Iron(II) cannot be had from iron(III) without electrons.
    assert_eq!(split("FeSO4", &["Fe^3+", "SO4^2-"]), Err(SplitProblem::Impossible));
    // Sodium and nitrogen are held in one proportion only.
    assert_eq!(split("Na2NO3Cl", &["NaNO3", "Cl-"]), Err(SplitProblem::Impossible));
    // Two oxidation states and no electrons written: FeCl2 and FeCl3 alike would do.
    assert_eq!(
        split("Fe3O4", &["Fe^3+", "Fe^2+"]),
        whole(&[-8, 4, 2, 1]),
        "two irons are told apart by charge"
    );
    assert_eq!(
        split("Fe3O4", &["Fe^3+", "Fe^2+", "e-"]),
        Err(SplitProblem::NotUnique { components: vec![4] })
    );
    assert_eq!(
        split("CH4N2O", &["NH3", "CO3^2-"]),
        whole(&[2, -2, 2, 1]),
        "elements alone: urea is ammonia and carbonate"
    );
}

/// Components of which each holds an element of its own, and species made of them.
fn species() -> impl Strategy<Value = Vec<Vec<i64>>> {
    // Of H+, H2O, then up to five components.
    prop::collection::vec(
        (prop::collection::vec(0_i64..3, 5), -3_i64..4, -2_i64..3).prop_map(
            |(mut counts, protons, water)| {
                counts.insert(0, water);
                counts.insert(0, protons);
                counts
            },
        ),
        1..12,
    )
}

const COMPONENTS: [&str; 7] = ["H+", "H2O", "NH3", "SO4^2-", "Na+", "CO3^2-", "Fe^3+"];

proptest! {
    /// The mass balances of the components span, with the one of the proton, the same
    /// space as counting every element and the charge of the species as written: water
    /// stands in no row, so hydrogen and oxygen are counted over it.
    #[test]
    fn mass_balances_span_what_counting_atoms_spans(made in species()) {
        let components: Vec<Formula> = COMPONENTS.iter().map(|name| read(name)).collect();
        let mut stoichiometry = Stoichiometry {
            components: COMPONENTS.iter().filter(|c| **c != "H2O").map(|c| (*c).to_owned()).collect(),
            component_charges: vec![1, 0, -2, 1, -2, 3],
            species: Vec::new(),
        };
        let mut all = made;
        for component in (0..COMPONENTS.len()).filter(|c| *c != 1) {
            all.push((0..COMPONENTS.len()).map(|c| i64::from(c == component)).collect());
        }
        // Count atoms and charge independently, from the formulas of the components.
        let mut atoms: std::collections::BTreeMap<String, Vec<(usize, Rational64)>> = Default::default();
        for (index, counts) in all.iter().enumerate() {
            let mut sums: std::collections::BTreeMap<String, Rational64> = Default::default();
            for (formula, n) in components.iter().zip(counts) {
                for (atom, count) in formula.conserved() {
                    *sums.entry(atom.to_string()).or_default() += count * n;
                }
                *sums.entry("charge".into()).or_default() += Rational64::from(i64::from(formula.charge) * n);
            }
            // Oxygen beyond what the components bring is water's: hydrogen over water.
            let of = |name: &str| sums.get(name).copied().unwrap_or_default();
            let hydrogen = of("H") - of("O") * 2;
            sums.insert("H over water".into(), hydrogen);
            for (name, n) in sums {
                if name != "H" && name != "O" && n != Rational64::from(0) {
                    atoms.entry(name).or_default().push((index, n));
                }
            }
            let charge = counts.iter().zip(&components).map(|(n, c)| *n as i32 * c.charge).sum();
            let row = counts.iter().enumerate().filter(|(c, n)| *c != 1 && **n != 0)
                .map(|(c, n)| (if c == 0 { 0 } else { c - 1 }, Rational64::from(*n))).collect();
            stoichiometry.species.push(SpeciesRow { name: format!("S{index}"), charge, row });
        }
        let masses: Vec<Vec<(usize, Rational64)>> =
            (0..6).map(|c| mass_balance(&stoichiometry, &Recipe::default(), c).terms).collect();
        let masses: Vec<SparseRow> = masses.iter().map(Vec::as_slice).collect();
        let counted: Vec<SparseRow> = atoms.values().map(Vec::as_slice).collect();
        for row in &counted {
            let found = express(row, &masses).unwrap();
            let spanned = !matches!(found, Solution::None { .. });
            prop_assert!(spanned, "{:?}", row);
        }
        let together: Vec<SparseRow> = masses.iter().chain(&counted).copied().collect();
        prop_assert_eq!(rank(&masses), rank(&together));
        prop_assert_eq!(rank(&masses), rank(&counted));
    }
}
