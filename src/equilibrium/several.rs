//! Whether other states meet the same equations as an answer.
//!
//! Ideal ones have one answer only. Two kinds can have more: activity models with ions of
//! charge three and above, whose coefficients fall and then rise steeply with the ionic
//! strength; and a charged species held at a value, which a recipe can pass on its way
//! up and again on its way down.

use std::sync::atomic::AtomicBool;

use super::frame::Frame;
use super::scan::by_ionic_strength;
use super::skew;
use super::solve::{needs_activity, solve};
use super::system::{Answer, Failure, IonicStrength, System};

/// States closer than this in ln I, or in pH, are the same.
const SAME: f64 = 1e-6;

/// The states beside `answer`, which is one of them; none for most systems, at no cost
/// then. A search over a fixed grid: two states that lie closer to one another than its
/// meshes (an eighth of a decade of ionic strength, half a unit of pH) can be missed.
///
/// # Errors
/// [`Failure::Cancelled`]. States that cannot be solved are passed over.
pub fn other_states(
    system: &System,
    answer: &Answer,
    cancel: &AtomicBool,
) -> Result<Vec<Answer>, Failure> {
    let passed = |failure: Failure| match failure {
        Failure::Cancelled => Err(Failure::Cancelled),
        _ => Ok(Vec::new()),
    };
    match Frame::new(system) {
        Ok(frame) if frame.askew => match skew::states(system, None, cancel) {
            Ok((states, _)) => {
                let other = |a: &Answer| {
                    let ln_h = |a: &Answer| a.ln_components.first().copied().unwrap_or(0.0);
                    (ln_h(a) - ln_h(answer)).abs() > SAME
                };
                Ok(states.into_iter().filter(other).collect())
            }
            Err(failure) => passed(failure),
        },
        Ok(_) => {
            if !may_be_several(system) {
                return Ok(Vec::new());
            }
            let states = by_ionic_strength(system, Some(answer), cancel).or_else(passed)?;
            let mut others = Vec::new();
            for near in states.iter().filter(|state| other_strength(state, answer)) {
                // From there the joint iteration stays with the state it is nearest to.
                let state = match solve(system, Some(near), cancel) {
                    Ok(state) => state,
                    Err(Failure::Cancelled) => return Err(Failure::Cancelled),
                    Err(_) => continue,
                };
                if other_strength(&state, answer) {
                    others.push(state);
                }
            }
            Ok(others)
        }
        Err(failure) => passed(failure),
    }
}

/// Whether other states are looked for in a system without a charged species held.
pub(super) fn may_be_several(system: &System) -> bool {
    if system.ionic_strength != IonicStrength::Computed || !needs_activity(system) {
        return false;
    }
    let highly_charged = || system.species.iter().any(|s| s.charge.abs() >= 3);
    steepness(system) > STEEP || (!system.fixed.is_empty() && highly_charged())
}

/// With less than this no second state is looked for. For one to be, ln γ of an ion of
/// charge z must fall about as fast as ln I rises, `½ A ln 10 · z² √I ≥ 1`, by the ionic
/// strength that such ions make themselves; this is a third of that.
const STEEP: f64 = 1.0;

/// The greatest `z⁴ · I` over charges of three and above, I being the ionic strength if all
/// components that can be in such ions were.
fn steepness(system: &System) -> f64 {
    let mut most = vec![0_i32; system.totals.len()];
    for species in &system.species {
        let charge = species.charge.saturating_abs();
        for &(component, _) in species.row.iter().filter(|_| charge >= 3) {
            most[component] = most[component].max(charge);
        }
    }
    let squared = |z: i32| f64::from(z).powi(2);
    // The proton's total is a balance of the others and says nothing of amounts.
    let strength: f64 =
        most.iter().zip(&system.totals).skip(1).map(|(&z, t)| 0.5 * squared(z) * t.abs()).sum();
    most.iter().skip(1).map(|&z| squared(z).powi(2) * strength).fold(0.0, f64::max)
}

fn other_strength(state: &Answer, answer: &Answer) -> bool {
    (state.ionic_strength.ln() - answer.ionic_strength.ln()).abs() > SAME
}
