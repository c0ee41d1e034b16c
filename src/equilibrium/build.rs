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
use crate::problem::curve::Sweep;
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
    let mut given = vec![0.0; problem.amounts.len()];
    totals(problem, &mut given);
    System {
        species,
        totals: given,
        fixed: problem.held.iter().filter_map(|held| fixed(problem, held)).collect(),
        activity: ActivityModel::new(problem.activity, problem.kelvin),
        ionic_strength: match problem.ionic_strength {
            Some(value) => IonicStrength::Given(value),
            None => IonicStrength::Computed,
        },
    }
}

/// Brings the numbers of a system up to those of its problem, of which nothing but `moved`
/// is another than when it was built.
pub fn renew(system: &mut System, problem: &Problem, moved: Sweep) {
    if system.fixed.len() != problem.held.len() {
        *system = self::system(problem);
        return;
    }
    totals(problem, &mut system.totals);
    if matches!(moved, Sweep::Temperature | Sweep::Blend(_)) {
        for (species, &s) in system.species.iter_mut().zip(&problem.scope.dissolved) {
            species.ln_k = ln_formation(problem, s);
        }
        system.activity = ActivityModel::new(problem.activity, problem.kelvin);
    }
    for (fixed, held) in system.fixed.iter_mut().zip(&problem.held) {
        fixed.ln_value = ln_value(problem, held);
    }
}

/// The total of each component, and the charge balance in the place of the proton's.
fn totals(problem: &Problem, totals: &mut [f64]) {
    for (total, amount) in totals.iter_mut().zip(&problem.amounts) {
        *total = amount.total.unwrap_or(0.0);
    }
    totals[PROTON] = -(1..totals.len())
        .map(|j| f64::from(problem.scope.components[j].formula.charge) * totals[j])
        .sum::<f64>();
    // An analysis whose pH was held brings the charge that it leaves open.
    totals[PROTON] += problem.blend.as_ref().map_or(0.0, |blend| blend.charge());
}

/// The value of `Σ row · x` that a held value sets, its activity coefficient left out.
fn ln_value(problem: &Problem, held: &Held) -> f64 {
    match held.what {
        HeldWhat::Ph(value) | HeldWhat::Pe(value) => -value * LN_10,
        HeldWhat::Pressure { species, atm: value }
        | HeldWhat::Activity { species, value }
        | HeldWhat::Concentration { species, value } => value.ln() - ln_formation(problem, species),
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
    let mut concentration_of = None;
    let (row, supply) = match held.what {
        HeldWhat::Ph(_) => (single(PROTON), single(PROTON)),
        HeldWhat::Pe(_) => {
            let electron = scope.component("e-")?;
            (single(electron), supply(problem, electron))
        }
        HeldWhat::Pressure { species, .. } => (row_of(species)?, row_of(species)?),
        HeldWhat::Activity { species, .. } => (row_of(species)?, supply(problem, held.releases?)),
        HeldWhat::Concentration { species, .. } => {
            let formula = &scope.species[species];
            concentration_of = Some((formula.charge, ion_size(formula).angstrom));
            (row_of(species)?, supply(problem, held.releases?))
        }
    };
    Some(Fixed { row, ln_value: ln_value(problem, held), concentration_of, supply })
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
