//! A quantity that the file expects something of, along a curve, with its limits.

use std::sync::atomic::AtomicBool;

use super::chart::{Axis, Chart, Line, Role};
use super::run::{Run, any, unit};
use super::subject::Subject;
use super::ticks::round_ends;
use super::titration::plain;
use super::words::Words;
use crate::problem::model::{Expectation, Limit, Problem, Sought};

/// None where the work was cancelled.
///
/// # Errors
/// Where the file expects nothing of such a quantity.
pub fn chart(
    subject: &Subject,
    of: Option<&str>,
    cancel: &AtomicBool,
) -> Option<Result<Chart, String>> {
    let problem = subject.problem();
    let chosen = match chosen(&problem.expectations, of) {
        Ok(chosen) => chosen,
        Err(words) => return Some(Err(words)),
    };
    let run = Run::new(subject, any(subject), cancel)?;
    let value = |expectation: &Expectation| {
        let sought = expectation.sought;
        run.places(move |problem, solved| solved.value(problem, sought))
    };
    let most = value(chosen).flatten().map(|place| place.1.abs()).fold(0.0, f64::max);
    let (words, factor) = match (&chosen.unit, chosen.sought) {
        (Some(unit), _) => (unit.words.clone(), unit.factor),
        (None, Sought::Fraction { .. }) => ("%".into(), 0.01),
        (None, Sought::ChargeImbalance { equivalents: false }) => ("%".into(), 1.0),
        (None, Sought::Pressure(_)) => ("atm".into(), 1.0),
        (
            None,
            Sought::Ph
            | Sought::Poh
            | Sought::Pe
            | Sought::SaturationIndex(_)
            | Sought::Activity(_),
        ) => (String::new(), 1.0),
        (None, _) => unit(most, problem.scale),
    };
    let places = value(chosen).map(|place| place.map(|(x, y)| (x, y / factor)));
    let line = Line::through(Words::told(&chosen.words), Role::Main(0), places);
    let alike = |expectation: &Expectation| expectation.words == chosen.words;
    let levels: Vec<f64> = limits(problem, alike).into_iter().map(|level| level / factor).collect();
    let here = subject.solved.value(problem, chosen.sought).map(|value| value / factor);
    let answer = run.answer(subject, here);
    // What is an amount is seen best from zero.
    let zero = (factor != 1.0).then_some(0.0);
    let values = line.pieces.iter().flatten().map(|place| place.1);
    let values = values.chain(levels.clone()).chain(zero);
    let (low, high) = round_ends(values);
    let comma = if words.is_empty() { "" } else { ", " };
    let title = Words::told(&chosen.words).then(&format!("{comma}{words}"), Words::default());
    let y = Axis::new(title, low, high);
    let mut chart = plain(subject, &run, y, vec![line], answer.into_iter().collect());
    draw_limits(&mut chart, levels);
    Some(Ok(chart))
}

/// The ends of what is expected, in the units of the problem.
pub fn limits(problem: &Problem, of: impl Fn(&Expectation) -> bool) -> Vec<f64> {
    let expected = problem.expectations.iter().filter(|expectation| of(expectation));
    expected.flat_map(|expectation| ends(expectation.limit)).collect()
}

/// Limits as level lines, those that the picture reaches.
pub fn draw_limits(chart: &mut Chart, mut levels: Vec<f64>) {
    levels.retain(|level| chart.y.holds(*level));
    if !levels.is_empty() {
        chart.levels = levels;
        chart.notes.push(Words::plain("Level lines: what the file expects."));
    }
}

fn chosen<'a>(all: &'a [Expectation], of: Option<&str>) -> Result<&'a Expectation, String> {
    let found = match of {
        Some(of) => all.iter().find(|expectation| expectation.words == of),
        None => all.iter().find(|expectation| expectation.sought != Sought::Ph).or(all.first()),
    };
    found.ok_or_else(|| {
        let mut names: Vec<&str> = all.iter().map(|expectation| &*expectation.words).collect();
        names.dedup();
        match (of, names.is_empty()) {
            (_, true) => "the file expects nothing, so there is no quantity to follow".into(),
            (Some(of), false) => {
                format!("the file expects nothing of {of}; it does of {}", names.join(", "))
            }
            (None, false) => "the file expects nothing, so there is no quantity to follow".into(),
        }
    })
}

/// The ends of what meets a limit.
fn ends(limit: Limit) -> Vec<f64> {
    match limit {
        Limit::Within { value, tolerance } => vec![value - tolerance, value + tolerance],
        Limit::Below { value, .. } | Limit::Above { value, .. } => vec![value],
        Limit::Between { low, high } => vec![low, high],
    }
}
