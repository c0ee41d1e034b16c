//! Behind the search with activity coefficients: which solids form at a given ionic strength
//! is a convex problem, and the ionic strength is then looked for that comes out again.

use std::sync::atomic::AtomicBool;

use super::{Assemblage, equilibrate};
use crate::equilibrium::root::narrow;
use crate::equilibrium::system::{Answer, Failure, IonicStrength, System};

/// Ionic strengths looked at, ln of mol per litre or kilogram, and the longest step.
const LOWEST: f64 = -32.0;
const HIGHEST: f64 = 4.6;
const STEP: f64 = 0.7;
/// How near, in ln I, the search with all unknowns takes over.
const NEAR: f64 = 1e-9;

/// A state whose solids formed at an ionic strength next to the one that comes out.
pub(super) fn near_own_strength(
    asked: &System,
    cancel: &AtomicBool,
) -> Result<Assemblage, Failure> {
    let mut trial = asked.clone();
    let mut last = None;
    // ln(I out / I in) at ln I in.
    let mut excess = |ln: f64| -> Result<f64, Failure> {
        trial.ionic_strength = IonicStrength::Given(ln.exp());
        let state = equilibrate(trial.clone(), None, cancel)?;
        let excess = strength(asked, &state.answer).ln() - ln;
        last = Some(state);
        Ok(excess)
    };
    let mut low = (LOWEST, excess(LOWEST)?);
    let mut high = low;
    while high.1 > 0.0 && high.0 < HIGHEST {
        low = high;
        let next = low.0 + low.1.clamp(0.05, STEP);
        high = (next, excess(next)?);
    }
    if low.1 > 0.0 && high.1 <= 0.0 {
        narrow(&mut excess, low, high, NEAR)?;
    }
    last.ok_or(Failure::NotConverged { residual: 1.0, iterations: 0 })
}

/// `½ Σ z² c`.
fn strength(system: &System, answer: &Answer) -> f64 {
    let terms = system.species.iter().zip(&answer.concentrations);
    0.5 * terms.map(|(species, c)| f64::from(species.charge).powi(2) * c).sum::<f64>()
}
