//! Saturation indices along a curve.

use std::sync::atomic::AtomicBool;

use super::chart::{Axis, Chart, Line, Role};
use super::run::{Run, any};
use super::subject::Subject;
use super::ticks::round_ends;
use super::titration::plain;
use super::words::Words;
use crate::chemistry::formula::{Phase, canonical};
use crate::equilibrium::quantities::Solved;
use crate::problem::model::{Problem, Sought};
use crate::report::solution::in_phase;

/// Indices below this are of no use.
const LEAST: f64 = -8.0;

/// None where the work was cancelled.
///
/// # Errors
/// Where there is no such solid, or none at all.
pub fn chart(
    subject: &Subject,
    of: Option<&str>,
    cancel: &AtomicBool,
) -> Option<Result<Chart, String>> {
    let problem = subject.problem();
    let name = |s: &usize| problem.scope.species[*s].name.as_str();
    let all: Vec<usize> = in_phase(problem, |phase| matches!(phase, Phase::Solid(_))).collect();
    let wanted = of.map(canonical);
    let chosen: Vec<usize> = all
        .iter()
        .copied()
        .filter(|s| wanted.as_deref().is_none_or(|wanted| wanted == name(s)))
        .collect();
    if chosen.is_empty() {
        let names: Vec<&str> = all.iter().map(name).collect();
        return Some(Err(match (of, names.is_empty()) {
            (_, true) => "no solid belongs to this problem".into(),
            (Some(of), false) => format!("{of} is no solid here; there are {}", names.join(", ")),
            (None, false) => "no solid belongs to this problem".into(),
        }));
    }
    let run = Run::new(subject, any(subject), cancel)?;
    let index = |problem: &Problem, solved: &Solved, s: usize| {
        solved.value(problem, Sought::SaturationIndex(s))
    };
    let lines: Vec<Line> = chosen
        .iter()
        .map(|&s| {
            let places = run.places(move |problem, solved| index(problem, solved, s));
            Line::through(Words::formula(name(&s)), Role::Plain, places)
        })
        .collect();
    if lines.iter().all(|line| line.pieces.is_empty()) {
        return Some(Err("a part of every solid is absent, so there is no index to draw".into()));
    }
    let marks = chosen
        .iter()
        .filter_map(|&s| run.answer(subject, index(problem, subject.solved, s)))
        .collect();
    let values = lines.iter().flat_map(|line| line.pieces.iter().flatten()).map(|place| place.1);
    // With room on either side of saturation, where the lines of what forms run.
    let (low, high) = round_ends(values.map(|value| value.max(LEAST)).chain([-0.5, 0.5]));
    let title = Words::plain("saturation index");
    // A line that is alone has no label.
    let title = match chosen.as_slice() {
        [s] => title.then(" of ", Words::formula(name(s))),
        _ => title,
    };
    let y = Axis::new(title, low, high);
    let mut chart = plain(subject, &run, y, lines, marks);
    chart.levels.push(0.0);
    chart.notes.push(Words::plain("Above zero a solid can form; at zero water and solid agree."));
    Some(Ok(chart))
}
