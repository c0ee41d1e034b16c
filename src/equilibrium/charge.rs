//! The charge that is left over when the pH is held.

use std::f64::consts::LN_10;
use std::sync::atomic::AtomicBool;

use num_rational::Rational64;

use super::phases::equilibrate;
use super::system::{Failure, Fixed, System};
use crate::problem::scope::PROTON;

/// Cations less anions, eq per litre or kilogram, with the pH held at a value, all other
/// rows of the system closed and those of its candidates formed that are supersaturated
/// there.
pub fn imbalance_at(system: &System, ph: f64, cancel: &AtomicBool) -> Result<f64, Failure> {
    let mut held = system.clone();
    let proton = vec![(PROTON, Rational64::from_integer(1))];
    held.fixed.push(Fixed {
        row: proton.clone(),
        ln_value: -ph * LN_10,
        water: 0.0,
        concentration_of: None,
        supply: proton,
    });
    let state = equilibrate(held, None, cancel)?;
    let charges = system.species.iter().zip(&state.answer.concentrations);
    Ok(charges.map(|(species, c)| f64::from(species.charge) * c).sum())
}
