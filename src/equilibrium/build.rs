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
use crate::problem::curve::Sweep;
use crate::problem::model::{Held, HeldWhat, Presence, Problem, Solid};
use crate::problem::scope::{PROTON, WATER};

/// Per litre, or kilogram of water, of the mixture.
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
    let mut given = vec![0.0; problem.amounts.len()];
    totals(problem, &mut given);
    let held = problem.held.iter().filter_map(|held| fixed(problem, held));
    let excess = problem
        .solids_that_are(Presence::Excess)
        .filter_map(|solid| Some(candidate(problem, solid)?.held()));
    System {
        species,
        totals: given,
        fixed: held.chain(excess).collect(),
        candidates: problem
            .solids_that_are(Presence::Forms)
            .filter_map(|solid| candidate(problem, solid))
            .collect(),
        activity: activity_at(problem, problem.kelvin),
        ionic_strength: match problem.ionic_strength {
            Some(value) => IonicStrength::Given(value),
            None => IonicStrength::Computed,
        },
    }
}

/// The problem's activity model at a temperature.
pub(super) fn activity_at(problem: &Problem, kelvin: f64) -> Activity {
    match problem.activity {
        ActivityKind::Pitzer => {
            let species = &problem.scope.species;
            let dissolved = problem.scope.dissolved.iter().map(|&s| species[s].as_ref());
            Activity::ByComposition(Arc::new(Interaction::new(dissolved, kelvin)))
        }
        kind => ActivityModel::new(kind, kelvin).into(),
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

/// Brings the numbers of a system up to those of its problem, of which nothing but `moved`
/// is another than when it was built.
pub fn renew(system: &mut System, problem: &Problem, moved: Sweep) {
    let solids = problem.solids.len() - system.candidates.len();
    if system.fixed.len() != problem.held.len() + solids {
        *system = self::system(problem);
        return;
    }
    totals(problem, &mut system.totals);
    if matches!(moved, Sweep::Temperature | Sweep::Blend(_)) {
        for (species, &s) in system.species.iter_mut().zip(&problem.scope.dissolved) {
            species.ln_k = ln_formation(problem, s);
        }
        system.activity = activity_at(problem, problem.kelvin);
        let (fixed, solids) = (&mut system.fixed[problem.held.len()..], &problem.solids);
        let excess = solids.iter().filter(|solid| solid.presence == Presence::Excess);
        for (fixed, solid) in fixed.iter_mut().zip(excess) {
            fixed.ln_value = -ln_formation(problem, solid.species);
        }
        let forming = solids.iter().filter(|solid| solid.presence == Presence::Forms);
        for (candidate, solid) in system.candidates.iter_mut().zip(forming) {
            candidate.ln_value = -ln_formation(problem, solid.species);
        }
    }
    for (fixed, held) in system.fixed.iter_mut().zip(&problem.held) {
        fixed.ln_value = ln_value(problem, held);
    }
}

/// The total of each component, and the charge balance in the place of the proton's.
fn totals(problem: &Problem, totals: &mut [f64]) {
    let dilution = problem.dilution();
    for (total, amount) in totals.iter_mut().zip(&problem.amounts) {
        *total = amount.total.unwrap_or(0.0) / dilution;
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

/// A solid with activity one.
fn candidate(problem: &Problem, solid: &Solid) -> Option<Candidate> {
    let made = problem.scope.belonging.made[solid.species].as_ref()?;
    let ln_value = -ln_formation(problem, solid.species);
    let water = water_taken(problem, solid.species);
    Some(Candidate { row: made.row.clone(), ln_value, water })
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
            concentration_of = Some(scope.row_of(species)?);
            (row_of(species)?, supply(problem, held.releases?))
        }
    };
    let water = match held.what {
        HeldWhat::Ph(_) | HeldWhat::Pe(_) => 0.0,
        HeldWhat::Pressure { species, .. }
        | HeldWhat::Activity { species, .. }
        | HeldWhat::Concentration { species, .. } => water_taken(problem, species),
    };
    Some(Fixed { row, ln_value: ln_value(problem, held), water, concentration_of, supply })
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
