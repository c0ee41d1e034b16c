//! A charged species held at a value: what is supplied (with a counter-ion that the
//! proton's row must not notice) is not what is held, and the balances are no longer
//! the gradient of a convex function.
//!
//! With the pH held too they are again, since the difference lies in the proton's row
//! alone. So the pH is looked for from outside: at each trial pH the convex problem is
//! solved, and what that needs in protons beyond what there is must come to nothing.

use std::sync::atomic::AtomicBool;

use num_rational::Rational64;

use super::plane;
use super::root::{Mark, narrow};
use super::sensitivity::Sensitivity;
use super::solve::{TRUSTED, needs_activity, solve};
use super::system::{Answer, Failure, Fixed, IonicStrength, System};

/// The pH that are looked through, and in how many steps.
const LOOK: (f64, f64, u32) = (-3.0, 18.0, 42);
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
        water: 0.0,
        concentration_of: None,
        supply: row,
    });
    let mut least = f64::INFINITY;
    let mut all: Vec<Answer> = Vec::new();
    // Where the sign changes at a jump, an activity model having gone over from one of its
    // states to another, there is no answer; but there may be one coming from the other
    // side.
    for upwards in [true, false] {
        let marks = outer.look(upwards)?;
        let mut found = outer.changes(&marks)?;
        let looked = found.len();
        finish(&mut found, system, outer.iterations);
        let whole = marks.len() > LOOK.2 as usize;
        let jumps = looked > found.len() || (found.is_empty() && !whole);
        all.extend(found);
        least = marks.iter().fold(least, |least, mark| least.min(mark.1.abs()));
        if !jumps {
            return Ok((distinct(all), outer.failure(least)));
        }
    }
    // A state may lie on a branch that no walk over the pH comes to.
    let one_unknown = needs_activity(system) && system.activity.by_ionic_strength().is_some();
    if one_unknown && system.ionic_strength == IonicStrength::Computed {
        let mut found = plane::states(&outer.held, cancel)?;
        finish(&mut found, system, outer.iterations);
        all.extend(found);
    }
    Ok((distinct(all), outer.failure(least)))
}

/// Takes the held pH out of states again, and those away that do not close without it.
fn finish(states: &mut Vec<Answer>, system: &System, iterations: u32) {
    for answer in states.iter_mut() {
        answer.amounts.truncate(system.fixed.len());
        answer.residual = super::fixed::residual(system, &answer.concentrations, &answer.amounts);
        answer.iterations = iterations;
    }
    states.retain(|answer| answer.residual <= TRUSTED);
}

/// By rising pH, each once.
fn distinct(mut states: Vec<Answer>) -> Vec<Answer> {
    let ln_h = |state: &Answer| state.ln_components.first().copied().unwrap_or(0.0);
    states.sort_by(|a, b| ln_h(b).total_cmp(&ln_h(a)));
    states.dedup_by(|a, b| (ln_h(a) - ln_h(b)).abs() < 1e-7);
    states
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

    fn failure(&self, residual: f64) -> Failure {
        Failure::NotConverged { residual, iterations: self.iterations }
    }

    /// The states at the changes of sign between marks.
    fn changes(&mut self, marks: &[Mark]) -> Result<Vec<Answer>, Failure> {
        let mut found = Vec::new();
        for pair in marks.windows(2) {
            if pair[0].1 == 0.0 || pair[0].1 * pair[1].1 < 0.0 {
                match self.settle(pair[0], pair[1]) {
                    Err(Failure::NotConverged { .. }) => {}
                    other => found.push(other?),
                }
            }
        }
        Ok(found)
    }

    /// The protons missing at one pH after another; and between two where they first grow
    /// less and then more, a look whether they change sign twice on the way.
    fn look(&mut self, upwards: bool) -> Result<Vec<Mark>, Failure> {
        let mut marks: Vec<(Mark, f64)> = Vec::new();
        for n in 0..=LOOK.2 {
            let n = if upwards { n } else { LOOK.2 - n };
            let ph = LOOK.0 + (LOOK.1 - LOOK.0) * f64::from(n) / f64::from(LOOK.2);
            match self.missing(ph) {
                Ok(missing) => marks.push(((ph, missing), self.slope())),
                // No state at this pH: nothing to pass through either.
                Err(Failure::NotConverged { .. }) => {}
                Err(other) => return Err(other),
            }
        }
        marks.sort_by(|a, b| a.0.0.total_cmp(&b.0.0));
        let mut all: Vec<Mark> = marks.iter().map(|mark| mark.0).collect();
        for pair in marks.windows(2) {
            let [(low, down), (high, up)] = [pair[0], pair[1]];
            if low.1 * high.1 > 0.0 && low.1 * down < 0.0 && low.1 * up > 0.0 {
                all.extend(self.dip(low, high)?);
            }
        }
        all.sort_by(|a, b| a.0.total_cmp(&b.0));
        Ok(all)
    }

    /// The change of the missing protons by the pH, at the last state.
    fn slope(&self) -> f64 {
        let proton = self.held.fixed.len() - 1;
        self.last
            .as_ref()
            .and_then(|state| Sensitivity::new(&self.held, state)?.by_fixed(proton))
            .map_or(f64::NAN, |response| -LN_10 * response.amounts[proton])
    }

    /// A place of the other sign between two marks of one sign that the function leaves
    /// towards nothing, if there is one: by halves towards its turning point.
    fn dip(&mut self, low: Mark, high: Mark) -> Result<Option<Mark>, Failure> {
        let (mut from, mut to) = (low.0, high.0);
        for _ in 0..40 {
            let ph = 0.5 * (from + to);
            let missing = match self.missing(ph) {
                Err(Failure::NotConverged { .. }) => return Ok(None),
                other => other?,
            };
            if missing * low.1 <= 0.0 {
                return Ok(Some((ph, missing)));
            }
            *(if self.slope() * low.1 < 0.0 { &mut from } else { &mut to }) = ph;
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
