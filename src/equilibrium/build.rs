//! From a resolved problem to the numbers that the solver takes.
//!
//! Components and fixed phases keep the order that the problem has them in; species are
//! the rows of its stoichiometry.

use std::f64::consts::LN_10;

use num_rational::Rational64;
use num_traits::One;

use super::system::{Fixed, IonicStrength, Row, Species, System};
use crate::chemistry::activity::{ActivityKind, ActivityModel};
use crate::chemistry::ion_size::ion_size;
use crate::problem::model::{Held, HeldWhat, Problem};
use crate::problem::scope::PROTON;

pub fn system(problem: &Problem) -> System {
    let scope = &problem.scope;
    let species = scope
        .stoichiometry
        .species
        .iter()
        .zip(&scope.dissolved)
        .map(|(row, &s)| Species {
            row: row.row.clone(),
            ln_k: ln_formation(problem, s),
            charge: row.charge,
            // The table is only asked where the model takes sizes.
            ion_size: match problem.activity {
                ActivityKind::ExtendedDebyeHuckel => ion_size(&scope.species[s]).angstrom,
                _ => 0.0,
            },
        })
        .collect();
    let mut totals: Vec<f64> =
        problem.amounts.iter().map(|amount| amount.total.unwrap_or(0.0)).collect();
    totals[PROTON] = -(1..totals.len())
        .map(|j| f64::from(scope.components[j].formula.charge) * totals[j])
        .sum::<f64>();
    // An analysis whose pH was held brings the charge that it leaves open.
    totals[PROTON] += problem.blend.as_ref().map_or(0.0, |blend| blend.charge());
    System {
        species,
        totals,
        fixed: problem.held.iter().filter_map(|held| fixed(problem, held)).collect(),
        activity: ActivityModel::new(problem.activity, problem.kelvin),
        ionic_strength: match problem.ionic_strength {
            Some(value) => IonicStrength::Given(value),
            None => IonicStrength::Computed,
        },
    }
}

/// ln of the formation constant of a species of the scope from the components; zero for
/// one that does not belong.
pub fn ln_formation(problem: &Problem, species: usize) -> f64 {
    let made = problem.scope.belonging.made[species].as_ref();
    made.map_or(0.0, |made| LN_10 * made.log_beta(|r| problem.log_k[r]))
}

fn fixed(problem: &Problem, held: &Held) -> Option<Fixed> {
    let scope = &problem.scope;
    let row_of = |species: usize| -> Option<Row> {
        Some(scope.belonging.made[species].as_ref()?.row.clone())
    };
    let single = |j: usize| vec![(j, Rational64::one())];
    Some(match held.what {
        HeldWhat::Ph(ph) => Fixed {
            row: single(PROTON),
            ln_value: -ph * LN_10,
            concentration_of: None,
            supply: single(PROTON),
        },
        HeldWhat::Pe(pe) => {
            let electron = scope.component("e-")?;
            Fixed {
                row: single(electron),
                ln_value: -pe * LN_10,
                concentration_of: None,
                supply: supply(problem, electron),
            }
        }
        HeldWhat::Pressure { species, atm } => {
            let row = row_of(species)?;
            Fixed {
                ln_value: atm.ln() - ln_formation(problem, species),
                concentration_of: None,
                supply: row.clone(),
                row,
            }
        }
        HeldWhat::Activity { species, value } => Fixed {
            row: row_of(species)?,
            ln_value: value.ln() - ln_formation(problem, species),
            concentration_of: None,
            supply: supply(problem, held.releases?),
        },
        HeldWhat::Concentration { species, value } => {
            let formula = &scope.species[species];
            Fixed {
                row: row_of(species)?,
                ln_value: value.ln() - ln_formation(problem, species),
                concentration_of: Some((formula.charge, ion_size(formula).angstrom)),
                supply: supply(problem, held.releases?),
            }
        }
    })
}

/// One mole more of a component's total, with what that means for the charge balance.
fn supply(problem: &Problem, component: usize) -> Row {
    let charge = problem.scope.components[component].formula.charge;
    let own = (component, Rational64::one());
    if charge == 0 {
        vec![own]
    } else {
        vec![(PROTON, Rational64::from_integer(-i64::from(charge))), own]
    }
}
