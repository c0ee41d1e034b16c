//! A charged species held under an activity model, the last resort: the whole plane of pH
//! and ionic strength.
//!
//! With both given the state is unique and moves smoothly, whatever the model. Two
//! conditions are left, that no protons are missing and that the ionic strength is the one
//! put in; they are looked for in every cell of a grid in which both change sign.

use std::sync::atomic::AtomicBool;

use super::solve::solve;
use super::system::{Answer, Failure, IonicStrength, System};

const LN_10: f64 = std::f64::consts::LN_10;
const PH: (f64, f64, usize) = (-3.0, 18.0, 42);
/// Decades of the ionic strength, mol per litre or kilogram.
const LOG_I: (f64, f64, usize) = (-8.0, 1.0, 45);
/// A Newton search may leave its cell by so many times its size.
const ASTRAY: f64 = 2.0;

/// One place: its pH and ln I, and what is off there.
#[derive(Clone, Copy)]
struct Look {
    missing: f64,
    excess: f64,
}

struct Plane<'a> {
    /// The system with the pH held last and the ionic strength given.
    system: System,
    cancel: &'a AtomicBool,
    last: Option<Answer>,
}

/// The states of `held`, a system whose last held phase is the proton, in which that phase
/// brings nothing.
pub(super) fn states(held: &System, cancel: &AtomicBool) -> Result<Vec<Answer>, Failure> {
    let mut plane = Plane { system: held.clone(), cancel, last: None };
    let step = |range: (f64, f64, usize)| (range.1 - range.0) / range.2 as f64;
    let (wide, high) = (step(PH), step(LOG_I) * LN_10);
    let place = |n: usize, k: usize| (PH.0 + wide * n as f64, LOG_I.0 * LN_10 + high * k as f64);
    let mut looks = vec![None; (PH.2 + 1) * (LOG_I.2 + 1)];
    let index = |n: usize, k: usize| n * (LOG_I.2 + 1) + k;
    for n in 0..=PH.2 {
        for up in 0..=LOG_I.2 {
            // Back and forth, so that each place starts from its neighbour.
            let k = if n % 2 == 0 { up } else { LOG_I.2 - up };
            let (ph, ln_i) = place(n, k);
            looks[index(n, k)] = plane.try_look(ph, ln_i)?;
        }
    }
    let mut found = Vec::new();
    for n in 0..PH.2 {
        for k in 0..LOG_I.2 {
            let corners = [(n, k), (n + 1, k), (n, k + 1), (n + 1, k + 1)];
            let corners = corners.map(|(n, k)| looks[index(n, k)]);
            let changes = |of: fn(&Look) -> f64| {
                let values = || corners.iter().flatten().map(of);
                values().any(|v| v <= 0.0) && values().any(|v| v >= 0.0)
            };
            if changes(|l| l.missing) && changes(|l| l.excess) {
                let (ph, ln_i) = place(n, k);
                let middle = (ph + 0.5 * wide, ln_i + 0.5 * high);
                found.extend(plane.newton(middle, (wide, high))?);
            }
        }
    }
    Ok(found)
}

impl Plane<'_> {
    fn look(&mut self, ph: f64, ln_i: f64) -> Result<Look, Failure> {
        self.system.ionic_strength = IonicStrength::Given(ln_i.exp());
        if let Some(proton) = self.system.fixed.last_mut() {
            proton.ln_value = -ph * LN_10;
        }
        let state = solve(&self.system, self.last.as_ref(), self.cancel)?;
        let terms = self.system.species.iter().zip(&state.concentrations);
        let out: f64 = terms.map(|(s, c)| 0.5 * f64::from(s.charge).powi(2) * c).sum();
        let missing = state.amounts.last().copied().unwrap_or(0.0);
        self.last = Some(state);
        Ok(Look { missing, excess: out.ln() - ln_i })
    }

    /// None where there is no state.
    fn try_look(&mut self, ph: f64, ln_i: f64) -> Result<Option<Look>, Failure> {
        match self.look(ph, ln_i) {
            Ok(look) => Ok(Some(look)),
            Err(Failure::NotConverged { .. }) => Ok(None),
            Err(other) => Err(other),
        }
    }

    /// Newton in both, from the middle of a cell, the derivatives by differences.
    fn newton(&mut self, from: (f64, f64), cell: (f64, f64)) -> Result<Option<Answer>, Failure> {
        const DIFFERENCE: f64 = 1e-6;
        let (mut ph, mut ln_i) = from;
        for _ in 0..40 {
            let Some(right) = self.try_look(ph + DIFFERENCE, ln_i)? else { return Ok(None) };
            let Some(up) = self.try_look(ph, ln_i + DIFFERENCE)? else { return Ok(None) };
            let Some(here) = self.try_look(ph, ln_i)? else { return Ok(None) };
            let by = |other: f64, own: f64| (other - own) / DIFFERENCE;
            let (a, b) = (by(right.missing, here.missing), by(up.missing, here.missing));
            let (c, d) = (by(right.excess, here.excess), by(up.excess, here.excess));
            let determinant = a * d - b * c;
            let move_ph = (b * here.excess - d * here.missing) / determinant;
            let move_i = (c * here.missing - a * here.excess) / determinant;
            if !move_ph.is_finite() || !move_i.is_finite() {
                return Ok(None);
            }
            if move_ph.abs() < 1e-13 * ph.abs().max(1.0) && move_i.abs() < 1e-12 {
                return Ok(self.last.clone());
            }
            // Never further than a cell at once.
            let cut = (cell.0 / move_ph.abs()).min(cell.1 / move_i.abs()).min(1.0);
            ph += cut * move_ph;
            ln_i += cut * move_i;
            let astray = |at: f64, from: f64, size: f64| (at - from).abs() > ASTRAY * size;
            if astray(ph, from.0, cell.0) || astray(ln_i, from.1, cell.1) {
                return Ok(None);
            }
        }
        // Rounding may keep the last digits from settling; the rows will tell.
        Ok(self.last.clone())
    }
}
