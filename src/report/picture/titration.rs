//! The pH along a reagent's dose, or whatever else a curve moves, and the buffer capacity
//! along a curve.

use std::sync::atomic::AtomicBool;

use super::chart::{Axis, Chart, Line, Role};
use super::quantity::{draw_limits, limits};
use super::run::{Run, any, dosed, unit};
use super::subject::Subject;
use super::ticks::round_ends;
use super::words::Words;
use crate::problem::model::{Expectation, Limit, Sought};

/// None where the work was cancelled.
///
/// # Errors
/// Where nothing says what is dosed.
pub fn chart(
    subject: &Subject,
    of: Option<&str>,
    cancel: &AtomicBool,
) -> Option<Result<Chart, String>> {
    let curve = match dosed(subject, of) {
        Ok(curve) => curve,
        Err(words) => return Some(Err(words)),
    };
    let run = Run::new(subject, curve, cancel)?;
    let places = run.places(|_, solved| Some(solved.ph()));
    let line = Line::through(Words::plain("pH"), Role::Main(0), places);
    let answer = run.answer(subject, Some(subject.solved.ph()));
    let values = line.pieces.iter().flatten().map(|place| place.1);
    let (low, high) = round_ends(values.map(|ph| ph.clamp(-2.0, 16.0)));
    let y = Axis::new(Words::plain("pH"), low, high);
    let mut chart = plain(subject, &run, y, vec![line], answer.into_iter().collect());
    // A single value that is expected is that of the answer, not a limit.
    let of_ph = |expectation: &Expectation| {
        expectation.sought == Sought::Ph && !matches!(expectation.limit, Limit::Within { .. })
    };
    draw_limits(&mut chart, limits(subject.problem(), of_ph));
    Some(Ok(chart))
}

/// The same for the buffer capacity.
///
/// # Errors
/// None.
pub fn buffer_capacity(subject: &Subject, cancel: &AtomicBool) -> Option<Result<Chart, String>> {
    let run = Run::new(subject, any(subject), cancel)?;
    let raw: Vec<f64> =
        run.places(|_, solved| solved.buffer_capacity()).flatten().map(|place| place.1).collect();
    let most = raw.iter().copied().fold(0.0, f64::max);
    let (name, factor) = unit(most, subject.problem().scale);
    let places = run.places(|_, solved| Some(solved.buffer_capacity()? / factor));
    let line = Line::through(Words::plain("buffer capacity"), Role::Main(0), places);
    let here = subject.solved.buffer_capacity().map(|value| value / factor);
    let answer = run.answer(subject, here);
    let values = line.pieces.iter().flatten().map(|place| place.1).chain([0.0]);
    let (low, high) = round_ends(values);
    let title = format!("buffer capacity, {name} per unit of pH");
    let y = Axis::new(Words::plain(&title), low, high);
    Some(Ok(plain(subject, &run, y, vec![line], answer.into_iter().collect())))
}

/// A chart along a run with its rule and nothing else.
pub fn plain(
    subject: &Subject,
    run: &Run,
    y: Axis,
    lines: Vec<Line>,
    marks: Vec<super::chart::Mark>,
) -> Chart {
    let mut chart = Chart {
        title: subject.title.clone(),
        subtitle: subject.conditions(false),
        x: run.axis(),
        y,
        lines,
        marks,
        rules: run.rule(subject).into_iter().collect(),
        levels: Vec::new(),
        notes: Vec::new(),
    };
    chart.tidy();
    chart
}
