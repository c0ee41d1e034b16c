//! One system after another that differ in their numbers alone, as the points of a curve do:
//! each is gone on to from the answer of the last, over the basis of most abundant species
//! that is at hand.

use std::sync::atomic::AtomicBool;

use super::basis::{Basis, Lines};
use super::coordinates::Coordinates;
use super::frame::{Frame, Slot};
use super::ionic::joint;
use super::newton::CLOSED;
use super::point::Point;
use super::search::Search;
use super::several::may_be_several;
use super::solve::{needs_activity, solve_and_keep, trusted};
use super::system::{Answer, Failure, IonicStrength, System};

/// A walk through systems of the same species, components and held phases.
#[derive(Debug, Default)]
pub struct Path {
    last: Option<Stop>,
}

/// Where a walk stands: a search without the system that it was of.
#[derive(Debug)]
struct Stop {
    lines: Lines,
    slots: Vec<Slot>,
    present: Vec<bool>,
    here: State,
    /// The state before this one, over the same basis.
    before: Option<State>,
}

/// ln activity of what stands in each free slot, and the ionic strength that activity
/// coefficients are taken at.
#[derive(Clone, Debug)]
struct State {
    u: Vec<f64>,
    ionic_strength: Option<f64>,
}

/// No unknown is guessed further ahead than this, in ln activity.
const FURTHEST: f64 = 3.0;

impl Path {
    /// Solves the next system, which has the rows of the one before and other totals,
    /// constants or held values. Steps of one size are the quickest. The answer is that of
    /// [`super::solve::solve`] without a start, to rounding.
    ///
    /// # Errors
    /// Those of [`super::solve::solve`]. The walk goes on all the same.
    pub fn next(&mut self, system: &System, cancel: &AtomicBool) -> Result<Answer, Failure> {
        // Where there may be several states, the one that is given must not hang on where
        // the walk has come from.
        if let Some(stop) = self.last.take().filter(|_| !may_be_several(system)) {
            match stop.go_on(system, cancel) {
                Some(Ok((answer, stop))) => {
                    self.last = Some(stop);
                    return Ok(answer);
                }
                Some(Err(Failure::Cancelled)) => return Err(Failure::Cancelled),
                // A cold start has the last word on what cannot be solved.
                Some(Err(_)) | None => {}
            }
        }
        let (answer, search) = solve_and_keep(system, None, cancel)?;
        self.last = search.map(|search| Stop::new(search, None));
        Ok(answer)
    }
}

impl Stop {
    fn new(search: Search, before: Option<State>) -> Stop {
        let here = State { u: search.point.u, ionic_strength: search.ionic_strength };
        let Frame { basis, slots, present, .. } = search.frame;
        Stop { lines: basis.into_lines(), slots, present, here, before }
    }

    /// None where other species are present than before.
    fn go_on(
        self,
        system: &System,
        cancel: &AtomicBool,
    ) -> Option<Result<(Answer, Stop), Failure>> {
        let Stop { lines, slots, present, here, before } = self;
        if here.ionic_strength == Some(0.0) {
            // There were no ions at all, and may be now.
            return None;
        }
        let over = lines.slots.clone();
        let there = present.iter().filter(|present| **present).count();
        let basis = Basis::over(system, lines);
        let frame = Frame { system, basis, slots, present, askew: false };
        let at = Coordinates::new(&frame);
        if !frame.still_fits(&at) {
            return None;
        }
        let guess = before.and_then(|before| here.ahead(&before)).unwrap_or_else(|| here.clone());
        let point = Point { u: guess.u, ..Point::default() };
        let mut search = Search::from_parts(frame, at, point);
        if let Some(ionic_strength) = guess.ionic_strength {
            search.set_ionic_strength(ionic_strength);
        }
        search.evaluate();
        if let Err(failure) = closed(&mut search, cancel) {
            return Some(Err(failure));
        }
        let answer = match trusted(&mut search) {
            Ok(answer) => answer,
            Err(failure) => return Some(Err(failure)),
        };
        if search.frame.present.iter().filter(|present| **present).count() != there {
            // What was left out for these amounts may be there for the next.
            return None;
        }
        let stop = Stop::new(search, None);
        let before = (stop.lines.slots == over).then_some(here);
        Some(Ok((answer, Stop { before, ..stop })))
    }
}

/// Closes all rows from a near state.
fn closed(search: &mut Search, cancel: &AtomicBool) -> Result<(), Failure> {
    let system = search.system();
    let moving = needs_activity(system) && system.ionic_strength == IonicStrength::Computed;
    if !moving {
        return search.converge(CLOSED, cancel);
    }
    if joint(search, cancel)? {
        return Ok(());
    }
    let residual = search.point.residual();
    Err(Failure::NotConverged { residual, iterations: search.iterations })
}

impl State {
    /// As far on again as from the one before; none where that is far.
    fn ahead(&self, before: &State) -> Option<State> {
        if self.u.len() != before.u.len() {
            return None;
        }
        let u: Vec<f64> =
            self.u.iter().zip(&before.u).map(|(now, then)| 2.0 * now - then).collect();
        let near = self.u.iter().zip(&u).all(|(now, next)| (now - next).abs() <= FURTHEST);
        let ionic_strength = match (self.ionic_strength, before.ionic_strength) {
            (Some(now), Some(then)) if then > 0.0 => Some(now * (now / then).clamp(0.1, 10.0)),
            (now, _) => now,
        };
        near.then_some(State { u, ionic_strength })
    }
}
