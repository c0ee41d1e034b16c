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
    let (mut states, closest) = states(system, start, cancel)?;
    let taken = |answer: &Answer| answer.amounts.iter().map(|n| n.abs()).sum::<f64>();
    states.sort_by(|a, b| taken(a).total_cmp(&taken(b)));
    states.into_iter().next().ok_or(closest)
}

/// All states, by rising pH; and how near the search came, for where there are none.
pub(super) fn states(
    system: &System,
    start: Option<&Answer>,
    cancel: &AtomicBool,
) -> Result<(Vec<Answer>, Failure), Failure> {
    let mut outer = Outer { held: system.clone(), cancel, last: start.cloned(), iterations: 0 };
    let row = vec![(0, Rational64::from_integer(1))];
    outer.held.fixed.push(Fixed {
        row: row.clone(),
        ln_value: 0.0,
        concentration_of: None,
        supply: row,
    });
    let marks = outer.look()?;
    let mut found = Vec::new();
    for pair in marks.windows(2) {
        if pair[0].1 == 0.0 || pair[0].1 * pair[1].1 < 0.0 {
            found.push(outer.settle(pair[0], pair[1])?);
        }
    }
    for answer in &mut found {
        answer.amounts.truncate(system.fixed.len());
        answer.residual = super::fixed::residual(system, &answer.concentrations, &answer.amounts);
        answer.iterations = outer.iterations;
    }
    let least = marks.iter().fold(f64::INFINITY, |least, mark| least.min(mark.1.abs()));
    Ok((found, Failure::NotConverged { residual: least, iterations: outer.iterations }))
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

    /// The protons missing at one pH after another, and where they come nearest to
    /// nothing without changing sign, a look whether they do in between.
    fn look(&mut self) -> Result<Vec<Mark>, Failure> {
        let mut marks: Vec<Mark> = Vec::new();
        let mut ph = LOOK.0;
        while ph <= LOOK.1 {
            match self.missing(ph) {
                Ok(missing) => marks.push((ph, missing)),
                // No state at this pH: nothing to pass through either.
                Err(Failure::NotConverged { .. }) => {}
                Err(other) => return Err(other),
            }
            ph += LOOK.2;
        }
        let dips: Vec<[Mark; 3]> = marks
            .windows(3)
            .filter(|m| {
                let (low, at, high) = (m[0].1, m[1].1, m[2].1);
                at * low > 0.0 && at * high > 0.0 && at.abs() < low.abs().min(high.abs())
            })
            .map(|m| [m[0], m[1], m[2]])
            .collect();
        for [low, at, high] in dips {
            if let Some(other_side) = self.dip(low, at, high)? {
                marks.push(other_side);
            }
        }
        marks.sort_by(|a, b| a.0.total_cmp(&b.0));
        Ok(marks)
    }

    /// Between three marks of one sign, the middle one the least, a place of the other
    /// sign if there is one.
    fn dip(&mut self, low: Mark, at: Mark, high: Mark) -> Result<Option<Mark>, Failure> {
        let (mut low, mut at, mut high) = (low.0, at, high.0);
        for _ in 0..40 {
            // Into the wider of the two halves, by the golden section.
            let wide_above = high - at.0 > at.0 - low;
            let next = at.0 + 0.381_966 * if wide_above { high - at.0 } else { low - at.0 };
            let missing = self.missing(next)?;
            if missing * at.1 <= 0.0 {
                return Ok(Some((next, missing)));
            }
            if missing.abs() < at.1.abs() {
                *(if wide_above { &mut low } else { &mut high }) = at.0;
                at = (next, missing);
            } else {
                *(if wide_above { &mut high } else { &mut low }) = next;
            }
        }
        Ok(None)
    }

    /// The state at the change of sign between two pH.
    fn settle(&mut self, from: Mark, to: Mark) -> Result<Answer, Failure> {
        let width = 4.0 * f64::EPSILON * to.0.abs().max(1.0);
        narrow(|ph| self.missing(ph), from, to, width)?;
        self.last.clone().ok_or(Failure::Cancelled)
    }
}
