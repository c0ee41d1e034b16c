//! A charged species held at a value: what is supplied (with a counter-ion that the
//! proton's row must not notice) is not what is held, and the balances are no longer
//! the gradient of a convex function.
//!
//! With the pH held too they are again, since the difference lies in the proton's row
//! alone. So the pH is looked for from outside: at each trial pH the convex problem is
//! solved, and what that needs in protons beyond what there is must come to nothing.

use std::sync::atomic::AtomicBool;

use num_rational::Rational64;

use super::root::{Mark, narrow};
use super::solve::solve;
use super::system::{Answer, Failure, Fixed, System};

/// The pH that are looked through, and the distance between looks.
const LOOK: (f64, f64, f64) = (-3.0, 18.0, 0.5);
const LN_10: f64 = std::f64::consts::LN_10;

/// Solves a system whose held phases supply something else than their own rows.
///
/// There can be several such states, or none: the one that takes the least of the held
/// phases is given.
pub(super) fn solve_skew(
    system: &System,
    start: Option<&Answer>,
    cancel: &AtomicBool,
) -> Result<Answer, Failure> {
    let mut outer = Outer { held: system.clone(), cancel, last: start.cloned(), iterations: 0 };
    let row = vec![(0, Rational64::from_integer(1))];
    outer.held.fixed.push(Fixed {
        row: row.clone(),
        ln_value: 0.0,
        concentration_of: None,
        supply: row,
    });
    let mut best: Option<(f64, Answer)> = None;
    let mut before: Option<(f64, f64)> = None;
    let mut ph = LOOK.0;
    while ph <= LOOK.1 {
        let here = match outer.missing(ph) {
            Ok(missing) => Some((ph, missing)),
            Err(Failure::NotConverged { .. }) => None,
            Err(other) => return Err(other),
        };
        if let (Some(from), Some(to)) = (before, here)
            && (from.1 == 0.0 || from.1.signum() != to.1.signum())
        {
            let answer = outer.settle(from, to)?;
            let taken = answer.amounts.iter().map(|n| n.abs()).sum();
            if best.as_ref().is_none_or(|b| taken < b.0) {
                best = Some((taken, answer));
            }
        }
        before = here;
        ph += LOOK.2;
    }
    let (_, mut answer) = best.ok_or(Failure::Infeasible { component: 0 })?;
    answer.amounts.truncate(system.fixed.len());
    answer.residual = super::fixed::residual(system, &answer.concentrations, &answer.amounts);
    answer.iterations = outer.iterations;
    Ok(answer)
}

struct Outer<'a> {
    /// The system with the pH held last.
    held: System,
    cancel: &'a AtomicBool,
    last: Option<Answer>,
    iterations: u32,
}

impl Outer<'_> {
    /// Protons that would have to be brought in to keep this pH.
    fn missing(&mut self, ph: f64) -> Result<f64, Failure> {
        if let Some(proton) = self.held.fixed.last_mut() {
            proton.ln_value = -ph * LN_10;
        }
        let answer = solve(&self.held, self.last.as_ref(), self.cancel)?;
        self.iterations += answer.iterations;
        let missing = answer.amounts.last().copied().unwrap_or(0.0);
        self.last = Some(answer);
        Ok(missing)
    }

    /// The state at the change of sign between two pH.
    fn settle(&mut self, from: Mark, to: Mark) -> Result<Answer, Failure> {
        let width = 4.0 * f64::EPSILON * to.0.abs().max(1.0);
        narrow(|ph| self.missing(ph), from, to, width)?;
        self.last.clone().ok_or(Failure::Cancelled)
    }
}
