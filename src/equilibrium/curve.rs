//! A problem solved along a curve of its own: what is moved takes one value after another.

use std::sync::atomic::AtomicBool;

use super::build::{renew, system};
use super::path::Path;
use super::quantities::Solved;
use super::solve::solve;
use super::system::{Answer, Failure};
use crate::problem::curve::{Curve, NoConstant, at};
use crate::problem::model::Problem;

/// One point of a curve.
#[derive(Clone, Debug)]
pub struct CurvePoint {
    /// What is moved, in base units: plain, mol per litre or kilogram, kelvin.
    pub x: f64,
    /// By the species, components and held phases of [`at_point`]'s system.
    pub state: Result<Answer, Unsolved>,
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
    let mut path = Path::default();
    let mut points = Vec::with_capacity(curve.points);
    for point in 0..curve.points {
        let x = curve.x(point);
        let state = match curve.place(problem, &mut moved, x) {
            Ok(()) => {
                renew(&mut numbers, &moved, curve.over);
                match path.next(&numbers, cancel) {
                    Err(Failure::Cancelled) => return Err(Failure::Cancelled),
                    state => state.map_err(Unsolved::Failed),
                }
            }
            Err(without) => Err(Unsolved::NoConstant(without)),
        };
        points.push(CurvePoint { x, state });
    }
    Ok(points)
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
    let system = system(&moved);
    let answer = solve(&system, None, cancel).map_err(Unsolved::Failed)?;
    Ok((moved, Solved { system, answer, others: Vec::new() }))
}

/// A point of [`along`] as a problem with its answer, to be asked for any quantity. None
/// where it has no answer.
pub fn at_point(problem: &Problem, curve: &Curve, point: &CurvePoint) -> Option<(Problem, Solved)> {
    let answer = point.state.as_ref().ok()?.clone();
    let moved = at(problem, curve, point.x).ok()?;
    let system = system(&moved);
    Some((moved, Solved { system, answer, others: Vec::new() }))
}
