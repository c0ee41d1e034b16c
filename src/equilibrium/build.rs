//! From a resolved problem to the numbers that the solver takes.
//!
//! Components and held values keep the order that the problem has them in, solids in excess
//! stand behind the held values, and those that may form are the candidates, each in the
//! order written; species are the rows of its stoichiometry.

use std::f64::consts::LN_10;
use std::sync::Arc;

use num_rational::Rational64;
use num_traits::{One, ToPrimitive};

use super::system::{Activity, Candidate, Fixed, IonicStrength, Row, Species, System};
use crate::chemistry::activity::{ActivityKind, ActivityModel};
use crate::chemistry::interaction::Interaction;
use crate::chemistry::ion_size::ion_size;
use crate::problem::model::{Held, HeldWhat, Presence, Problem, Solid};
use crate::problem::scope::{PROTON, WATER};

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
            water: water_taken(problem, s),
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
    let held = problem.held.iter().filter_map(|held| fixed(problem, held));
    let excess = problem.solids_that_are(Presence::Excess).filter_map(|solid| {
        let Candidate { row, ln_value } = candidate(problem, solid)?;
        Some(Fixed { supply: row.clone(), row, ln_value, concentration_of: None })
    });
    System {
        species,
        totals,
        fixed: held.chain(excess).collect(),
        candidates: problem
            .solids_that_are(Presence::Forms)
            .filter_map(|solid| candidate(problem, solid))
            .collect(),
        activity: activity(problem),
        ionic_strength: match problem.ionic_strength {
            Some(value) => IonicStrength::Given(value),
            None => IonicStrength::Computed,
        },
    }
}

fn activity(problem: &Problem) -> Activity {
    match problem.activity {
        ActivityKind::Pitzer => {
            let species = &problem.scope.species;
            let dissolved = problem.scope.dissolved.iter().map(|&s| species[s].as_ref());
            Activity::ByComposition(Arc::new(Interaction::new(dissolved, problem.kelvin)))
        }
        kind => ActivityModel::new(kind, problem.kelvin).into(),
    }
}

/// Molecules of water that the formation of a species from the components takes up; zero
/// where the model leaves the activity of water at one.
pub fn water_taken(problem: &Problem, species: usize) -> f64 {
    if problem.activity != ActivityKind::Pitzer {
        return 0.0;
    }
    let scope = &problem.scope;
    let Some(made) = scope.belonging.made[species].as_ref() else { return 0.0 };
    let water = &scope.species[WATER];
    let of_reaction = |r: usize| -> Rational64 {
        let participants = scope.reactions[r].participants.iter();
        participants.filter(|p| p.formula == *water).map(|p| p.coefficient).sum()
    };
    let sum: Rational64 = made.combination.iter().map(|&(r, by)| -by * of_reaction(r)).sum();
    sum.to_f64().unwrap_or(0.0)
}

/// ln of the formation constant of a species of the scope from the components; zero for
/// one that does not belong.
pub fn ln_formation(problem: &Problem, species: usize) -> f64 {
    let made = problem.scope.belonging.made[species].as_ref();
    made.map_or(0.0, |made| LN_10 * made.log_beta(|r| problem.log_k[r]))
}

/// A solid with activity one.
fn candidate(problem: &Problem, solid: &Solid) -> Option<Candidate> {
    let made = problem.scope.belonging.made[solid.species].as_ref()?;
    let ln_value = -ln_formation(problem, solid.species);
    Some(Candidate { row: made.row.clone(), ln_value })
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
            water: 0.0,
            concentration_of: None,
            supply: single(PROTON),
        },
        HeldWhat::Pe(pe) => {
            let electron = scope.component("e-")?;
            Fixed {
                row: single(electron),
                ln_value: -pe * LN_10,
                water: 0.0,
                concentration_of: None,
                supply: supply(problem, electron),
            }
        }
        HeldWhat::Pressure { species, atm } => {
            let row = row_of(species)?;
            Fixed {
                ln_value: atm.ln() - ln_formation(problem, species),
                water: water_taken(problem, species),
                concentration_of: None,
                supply: row.clone(),
                row,
            }
        }
        HeldWhat::Activity { species, value } => Fixed {
            row: row_of(species)?,
            ln_value: value.ln() - ln_formation(problem, species),
            water: water_taken(problem, species),
            concentration_of: None,
            supply: supply(problem, held.releases?),
        },
        HeldWhat::Concentration { species, value } => Fixed {
            row: row_of(species)?,
            ln_value: value.ln() - ln_formation(problem, species),
            water: water_taken(problem, species),
            concentration_of: Some(scope.row_of(species)?),
            supply: supply(problem, held.releases?),
        },
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
