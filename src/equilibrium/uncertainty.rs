//! How far the pH is uncertain for the uncertainty of the constants, to first order.

use std::f64::consts::LN_10;

use num_traits::ToPrimitive;

use super::quantities::Solved;
use super::sensitivity::Sensitivity;
use crate::problem::model::{HeldWhat, Presence, Problem};

/// One standard uncertainty of the pH, the constants taken as independent of one another.
/// None where no constant in use states one, where the pH is held, or where the answer has
/// no derivatives.
pub fn ph_uncertainty(problem: &Problem, solved: &Solved) -> Option<f64> {
    let scope = &problem.scope;
    if problem.held.iter().any(|held| matches!(held.what, HeldWhat::Ph(_))) {
        return None;
    }
    let stated: Vec<(usize, f64)> = scope
        .reactions_in_use()
        .filter_map(|(r, reaction)| Some((r, reaction.constant.as_ref()?.uncertainty?)))
        .filter(|(_, uncertainty)| *uncertainty > 0.0)
        .collect();
    if stated.is_empty() {
        return None;
    }
    let sensitivity = Sensitivity::new(&solved.system, &solved.answer)?;
    // How the pH moves with ln K of each species' and each held phase's formation.
    let mut slopes: Vec<(usize, f64)> = Vec::new();
    for (row, &species) in scope.dissolved.iter().enumerate() {
        if let Some(response) = sensitivity.by_ln_k(row) {
            slopes.push((species, response.ph()));
        }
    }
    for (index, held) in problem.held.iter().enumerate() {
        let species = match held.what {
            HeldWhat::Pressure { species, .. }
            | HeldWhat::Activity { species, .. }
            | HeldWhat::Concentration { species, .. } => species,
            HeldWhat::Ph(_) | HeldWhat::Pe(_) => continue,
        };
        if let Some(response) = sensitivity.by_fixed(index) {
            // The constant is taken off the value.
            slopes.push((species, -response.ph()));
        }
    }
    let excess = problem.solids_that_are(Presence::Excess).enumerate();
    let excess = excess.map(|(k, solid)| (problem.held.len() + k, solid));
    let formed = problem.solids_that_are(Presence::Forms).zip(&solved.formed);
    let formed = formed.filter_map(|(solid, at)| Some(((*at)?, solid)));
    for (index, solid) in excess.chain(formed) {
        if let Some(response) = sensitivity.by_fixed(index) {
            slopes.push((solid.species, -response.ph()));
        }
    }
    let variance: f64 = stated
        .iter()
        .map(|&(r, uncertainty)| {
            let slope: f64 = slopes
                .iter()
                .map(|&(species, slope)| {
                    let made = scope.belonging.made[species].as_ref();
                    let times = made.and_then(|made| {
                        let by = made.combination.iter().find(|(reaction, _)| *reaction == r)?;
                        by.1.to_f64()
                    });
                    times.unwrap_or(0.0) * slope * LN_10
                })
                .sum();
            (slope * uncertainty).powi(2)
        })
        .sum();
    Some(variance.sqrt()).filter(|value| value.is_finite())
}
