//! Whether the charge closes between the lowest and the highest pH that are looked at, and
//! what is left of it where it does not.

use std::sync::atomic::AtomicBool;

use crate::equilibrium::build::system;
use crate::equilibrium::charge::imbalance_at;
use crate::equilibrium::system::{Failure, System};
use crate::problem::model::HeldWhat;
use crate::problem::scope::PROTON;
use crate::rules::context::Context;
use crate::rules::outcome::State;

/// Where water is still water: a concentrated acid, and a concentrated caustic.
pub const LOWEST: f64 = -2.0;
pub const HIGHEST: f64 = 16.0;

/// Of a charge balance that does not close.
pub struct Remaining {
    /// The pH at which it would, where one was found.
    pub closes_at: Option<f64>,
    /// The nearer bound.
    pub at: f64,
    /// Cations less anions there, eq per litre or kilogram; none where it cannot be told.
    pub charge: Option<f64>,
}

/// None where the charge closes, is not asked to, or nothing is known of it.
pub fn remaining(context: &Context) -> Option<Remaining> {
    let ph_is_held = context.problem.held.iter().any(|held| matches!(held.what, HeldWhat::Ph(_)));
    if ph_is_held {
        return None;
    }
    match context.state {
        State::Solved(solved) => {
            let ph = solved.ph();
            let at = if ph < LOWEST {
                LOWEST
            } else if ph > HIGHEST {
                HIGHEST
            } else {
                return None;
            };
            let charge = charge_at(&solved.asked(), at);
            Some(Remaining { closes_at: Some(ph), at, charge })
        }
        State::Failed(Failure::Endless { .. }) => None,
        State::Failed(failure) => {
            let proven = *failure == Failure::Infeasible { component: PROTON };
            let system = system(context.problem);
            let low = charge_at(&system, LOWEST);
            let high = charge_at(&system, HIGHEST);
            let (at, charge) = match (low, high) {
                (Some(low), Some(high)) if low.abs() < high.abs() => (LOWEST, Some(low)),
                (_, Some(high)) => (HIGHEST, Some(high)),
                (Some(low), None) => (LOWEST, Some(low)),
                (None, None) => (HIGHEST, None),
            };
            let open = low.zip(high).is_some_and(|(low, high)| low.signum() == high.signum());
            (proven || open).then_some(Remaining { closes_at: None, at, charge })
        }
        _ => None,
    }
}

fn charge_at(system: &System, ph: f64) -> Option<f64> {
    imbalance_at(system, ph, &AtomicBool::new(false)).ok().filter(|charge| charge.is_finite())
}
