//! A problem solved along a curve of its own: what is moved takes one value after another.

use std::sync::atomic::AtomicBool;

use super::build::{renew, system};
use super::path::Path;
use super::phases::{Assemblage, Near, assembled, equilibrate};
use super::quantities::Solved;
use super::several::may_be_several;
use super::system::{Answer, Failure, System};
use crate::problem::curve::{Curve, NoConstant, at};
use crate::problem::model::Problem;

/// One point of a curve.
#[derive(Clone, Debug)]
pub struct CurvePoint {
    /// What is moved, in base units: plain, mol per litre or kilogram, kelvin.
    pub x: f64,
    /// By the species, components and held phases of [`at_point`]'s system.
    pub state: Result<Answer, Unsolved>,
    /// Of each solid that may form, where it stands among the held phases of the answer.
    pub formed: Vec<Option<usize>>,
}

/// Why there is no answer at a point.
#[derive(Clone, Debug, PartialEq)]
pub enum Unsolved {
    Failed(Failure),
    NoConstant(NoConstant),
}

/// All points of a curve of the problem, which must not be one that is blocked. Each has the
/// answer that the problem has with that value stated in the curve's place; one that has
/// none says why, and the others are not touched by it.
///
/// # Errors
/// [`Failure::Cancelled`] alone.
pub fn along(
    problem: &Problem,
    curve: &Curve,
    cancel: &AtomicBool,
) -> Result<Vec<CurvePoint>, Failure> {
    let mut moved = problem.clone();
    let mut numbers = system(problem);
    let mut walk = Walk::default();
    let mut points = Vec::with_capacity(curve.points);
    for point in 0..curve.points {
        let x = curve.x(point);
        let state = match curve.place(problem, &mut moved, x) {
            Ok(()) => {
                renew(&mut numbers, &moved, curve.over);
                match walk.next(&numbers, cancel) {
                    Err(Failure::Cancelled) => return Err(Failure::Cancelled),
                    state => state.map_err(Unsolved::Failed),
                }
            }
            Err(without) => Err(Unsolved::NoConstant(without)),
        };
        let formed = if state.is_ok() { walk.formed.clone() } else { Vec::new() };
        points.push(CurvePoint { x, state, formed });
    }
    Ok(points)
}

/// The way along a curve: over one basis where it is only numbers that move, and from one
/// assemblage to the next where solids may form or the whole composition counts.
#[derive(Default)]
struct Walk {
    path: Path,
    last: Option<Answer>,
    formed: Vec<Option<usize>>,
}

impl Walk {
    fn next(&mut self, numbers: &System, cancel: &AtomicBool) -> Result<Answer, Failure> {
        if numbers.candidates.is_empty() && numbers.activity.by_ionic_strength().is_some() {
            return self.path.next(numbers, cancel);
        }
        let near = self.last.take();
        let near = near.as_ref().filter(|_| !may_be_several(numbers));
        let near = near.map(|answer| Near { answer, formed: &self.formed });
        let found = equilibrate(numbers.clone(), near, cancel)?;
        self.formed = found.formed;
        self.last = Some(found.answer.clone());
        Ok(found.answer)
    }
}

/// One point alone: the problem as it is there, and its answer.
///
/// # Errors
/// Why there is none.
pub fn solved_at(
    problem: &Problem,
    curve: &Curve,
    x: f64,
    cancel: &AtomicBool,
) -> Result<(Problem, Solved), Unsolved> {
    let moved = at(problem, curve, x).map_err(Unsolved::NoConstant)?;
    let found = equilibrate(system(&moved), None, cancel).map_err(Unsolved::Failed)?;
    Ok((moved, found.into()))
}

/// A point of [`along`] as a problem with its answer, to be asked for any quantity. None
/// where it has no answer.
pub fn at_point(problem: &Problem, curve: &Curve, point: &CurvePoint) -> Option<(Problem, Solved)> {
    let answer = point.state.as_ref().ok()?.clone();
    let moved = at(problem, curve, point.x).ok()?;
    let system = assembled(system(&moved), &point.formed);
    let formed = point.formed.clone();
    Some((moved, Assemblage { system, answer, formed }.into()))
}
