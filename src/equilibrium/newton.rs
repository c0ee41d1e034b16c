//! The iteration at given activity coefficients: Newton on the logarithms of the
//! balances, with Newton on the convex function behind it.
//!
//! The answer is the minimum of the convex function `Σ c − Σ total·u`, so that a step
//! can always be judged by the slope along it, and the convex step always descends.

use std::sync::atomic::{AtomicBool, Ordering};

use super::direction::{convex_step, log_step};
use super::feasible::forced_absent;
use super::search::Search;
use super::system::Failure;

/// Rows closed to this, scaled by the sum of their terms, are closed.
pub(super) const CLOSED: f64 = 1e-12;
/// Where rounding lets a row not close further, this is still good enough.
const NEARLY_CLOSED: f64 = 1e-10;
/// Below this the logarithmic step needs no judging if it makes the rows close.
const NEAR: f64 = 1e-2;
/// No step is longer than this in any ln activity: from far above, the slope alone would
/// let one fall without end.
const LONGEST: f64 = 100.0;
const HYBRID_STEPS: u32 = 100;
const CONVEX_STEPS: u32 = 500;
/// How often a convex step is doubled while it still goes straight down.
const STRETCHES: u32 = 12;

impl Search<'_> {
    /// Closes every row to `tolerance`, from the present point.
    pub fn converge(&mut self, tolerance: f64, cancel: &AtomicBool) -> Result<(), Failure> {
        loop {
            match self.attempt(tolerance, false, cancel) {
                Err(Failure::NotConverged { .. }) => {}
                other => return other,
            }
            let absent = forced_absent(&self.frame, cancel)?;
            if absent.is_empty() {
                break;
            }
            self.exclude(&absent)?;
        }
        self.attempt(tolerance, true, cancel)
    }

    fn attempt(
        &mut self,
        tolerance: f64,
        convex_only: bool,
        cancel: &AtomicBool,
    ) -> Result<(), Failure> {
        let most = if convex_only { CONVEX_STEPS } else { HYBRID_STEPS };
        for _ in 0..most {
            if cancel.load(Ordering::Relaxed) {
                return Err(Failure::Cancelled);
            }
            let residual = self.point.residual();
            if residual <= tolerance {
                return Ok(());
            }
            if self.outgrown() {
                self.rebase()?;
            }
            self.iterations += 1;
            let moved = (!convex_only && self.log_move(residual)) || self.convex_move();
            if !moved {
                break;
            }
        }
        let residual = self.point.residual();
        if residual <= tolerance.max(NEARLY_CLOSED) {
            return Ok(());
        }
        Err(Failure::NotConverged { residual, iterations: self.iterations })
    }

    /// One more logarithmic step, undamped, kept if it does not open the rows.
    pub fn polish(&mut self) {
        self.step.resize(self.point.u.len(), 0.0);
        if log_step(&self.at, &self.point, &mut self.step) {
            self.try_step(1.0);
            if self.trial.residual() <= self.point.residual().max(CLOSED) {
                std::mem::swap(&mut self.point, &mut self.trial);
            }
        }
    }

    /// The logarithmic step, if it descends; false when it was not taken.
    fn log_move(&mut self, residual: f64) -> bool {
        const BACKTRACKS: u32 = 4;
        self.step.resize(self.point.u.len(), 0.0);
        if !log_step(&self.at, &self.point, &mut self.step) {
            return false;
        }
        let longest = self.step.iter().fold(0.0f64, |most, s| most.max(s.abs()));
        if longest > LONGEST {
            self.step.iter_mut().for_each(|s| *s *= LONGEST / longest);
        }
        if residual < NEAR {
            self.try_step(1.0);
            if self.trial.residual() < 0.5 * residual {
                std::mem::swap(&mut self.point, &mut self.trial);
                return true;
            }
        }
        self.descend(BACKTRACKS)
    }

    fn convex_move(&mut self) -> bool {
        const BACKTRACKS: u32 = 60;
        self.step.resize(self.point.u.len(), 0.0);
        convex_step(&self.at, &self.point, LONGEST, &mut self.step);
        if !self.descend(BACKTRACKS) {
            return false;
        }
        self.stretch();
        true
    }

    /// From far above, a convex step goes down by one unit of `u` at a time: goes twice
    /// as far again for as long as the slope has hardly eased.
    fn stretch(&mut self) {
        for _ in 0..STRETCHES {
            let slope = self.point.slope(&self.step);
            let here = self.slope_at(1.0);
            if slope >= 0.0 || here >= 0.0 || here.is_nan() {
                return;
            }
            std::mem::swap(&mut self.point, &mut self.trial);
            self.step.iter_mut().for_each(|s| *s *= 2.0);
        }
    }

    fn try_step(&mut self, t: f64) {
        self.trial.u.clear();
        let moved = self.point.u.iter().zip(&self.step).map(|(u, s)| u + t * s);
        self.trial.u.extend(moved);
        self.trial.evaluate(&self.at, &self.shifts);
    }

    /// Goes along the step to where the slope is at most half of what it was.
    fn descend(&mut self, backtracks: u32) -> bool {
        let slope = self.point.slope(&self.step);
        if slope >= 0.0 || slope.is_nan() {
            return false;
        }
        let mut t = 1.0;
        for _ in 0..=backtracks {
            let here = self.slope_at(t);
            if here <= -0.5 * slope {
                std::mem::swap(&mut self.point, &mut self.trial);
                return true;
            }
            // The slope rises along the step: where it would be level on a straight line.
            let level = slope / (slope - here);
            t *= if level.is_finite() { level.clamp(0.1, 0.5) } else { 0.1 };
        }
        false
    }

    /// The slope along the step at `t`, in the scale of the present point.
    fn slope_at(&mut self, t: f64) -> f64 {
        self.try_step(t);
        let slope = self.trial.slope(&self.step);
        let scale = self.trial.ln_scale - self.point.ln_scale;
        if scale == 0.0 { slope } else { slope * scale.exp() }
    }
}
