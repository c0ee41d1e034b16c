//! The logarithm of every concentration against pH, with the system points, both sides of
//! the proton condition, and the answer where they cross.

use std::sync::atomic::AtomicBool;

use super::chart::{Axis, Chart, Line, Mark, MarkKind, Place, Role, Rule};
use super::subject::Subject;
use super::words::{Level, Words};
use crate::balance::Part;
use crate::balance::recipe::Recipe;
use crate::balance::written::TermOf;
use crate::chemistry::activity::ActivityKind;
use crate::equilibrium::diagram::{Sweep, sides, system_points};
use crate::equilibrium::system::Answer;
use crate::report::figures::{decimals, scale_unit};
use crate::report::sheet::{Entry, Ledger, side};

/// log10 of concentration that a picture holds, at least and at most.
const LEAST: f64 = 7.0;
const MOST: f64 = 14.0;

pub fn chart(subject: &Subject, cancel: &AtomicBool) -> Option<Chart> {
    let (problem, solved) = (subject.problem(), subject.solved);
    let sweep = subject.sweep(cancel)?;
    let ledger = Ledger::new(subject.stated.outcome);
    let condition = (!subject.ph_is_held()).then(|| ledger.protons()).flatten();
    // As in the sweep, each solid that may form has its place behind the held values.
    let brought = solved.brought();
    let recipe = Recipe::of(problem, Some(&brought));
    let answer = Answer { amounts: brought, ..solved.answer.clone() };
    let stoichiometry = &problem.scope.stoichiometry;
    let balance = condition.as_ref().map(|(_, condition)| &condition.balance);

    let mut lines: Vec<Line> = Vec::new();
    for (row, species) in stoichiometry.species.iter().enumerate() {
        let label = Words::formula(&species.name);
        lines.push(traced(&sweep, label, Role::Plain, |state| state.concentrations[row]));
    }
    let mut notes = Vec::new();
    let crossing = balance.and_then(|balance| {
        let at =
            |state: &Answer, side: usize| sides(balance, &recipe, state)[side].unwrap_or(f64::NAN);
        for (n, label) in ["left side", "right side"].into_iter().enumerate() {
            let value = |state: &_| at(state, n);
            lines.push(traced(&sweep, Words::plain(label), Role::Main(n), value));
        }
        let level = at(&answer, 0).log10();
        level.is_finite().then_some((solved.ph(), level))
    });
    if let (Some((sheet, _)), Some(_)) = (&condition, crossing) {
        notes.push(Words::told(&format!(
            "Proton condition: {} (left side) = {} (right side).",
            present(&sheet.left, &sweep),
            present(&sheet.right, &sweep),
        )));
    }
    let points = system_points(&sweep);
    if !points.is_empty() {
        let ideal = problem.activity == ActivityKind::Ideal;
        let at = if ideal { "" } else { " at this ionic strength" };
        let words = pka(&format!("{at} meets the total."));
        notes.push(Words::plain("Rings: system points, where a ").then("", words));
    }
    let mut marks: Vec<Mark> = points
        .iter()
        .map(|point| Mark {
            at: (point.ph, point.log_total),
            label: Some(pka(&format!(" {}", decimals(point.ph, 2)))),
            kind: MarkKind::Point,
        })
        .collect();
    if let Some(at) = crossing {
        marks.push(Mark { at, label: None, kind: MarkKind::Answer });
    }
    let (low, high) = window(subject, &marks);
    let (from, to) = subject.ph_range();
    let unit = scale_unit(problem.scale);
    let mut chart = Chart {
        title: subject.title.clone(),
        subtitle: subject.conditions(true),
        x: Axis::new(Words::plain("pH"), from, to),
        y: Axis::new(Words::plain(&format!("log c, c in {unit}")), low, high),
        lines,
        marks,
        rules: vec![Rule { x: solved.ph(), label: Words::plain(&subject.ph_words()) }],
        levels: Vec::new(),
        notes,
    };
    chart.tidy();
    Some(chart)
}

fn traced(sweep: &Sweep, label: Words, role: Role, value: impl Fn(&Answer) -> f64) -> Line {
    let place = |(ph, state): &(f64, Option<_>)| -> Option<Place> {
        Some((*ph, value(state.as_ref()?).log10()))
    };
    Line::through(label, role, sweep.states.iter().map(place))
}

/// The sum of a side's terms, without those of what is absent. A solid may form at another
/// pH than that of the answer.
fn present(entries: &[Entry], sweep: &Sweep) -> String {
    let is_there = |entry: &&Entry| match entry.what {
        TermOf::Constant(Part::Precipitated(k)) => {
            sweep.found().any(|(_, state)| sweep.formed(state, k) > 0.0)
        }
        _ => entry.value != Some(0.0),
    };
    let kept: Vec<Entry> = entries.iter().filter(is_there).cloned().collect();
    side(&kept)
}

/// `pKa` and what follows.
fn pka(rest: &str) -> Words {
    let mut words = Words::plain("pK");
    words.push("a", Level::Sub);
    words.then("", Words::plain(rest))
}

/// From what to what log10 is shown: the marks and the larger species at the answer, with the
/// slopes below them.
fn window(subject: &Subject, marks: &[Mark]) -> (f64, f64) {
    let state = &subject.solved.answer;
    let largest = state.concentrations.iter().copied().fold(0.0, f64::max).log10();
    let points = marks.iter().map(|mark| mark.at.1);
    let high = points.clone().fold(largest, f64::max);
    let low = marks
        .iter()
        .map(|mark| mark.at.1 - if mark.kind == MarkKind::Answer { 2.5 } else { 4.0 })
        .fold(f64::INFINITY, f64::min);
    let high = if high.is_finite() { (high + 0.6).ceil().min(2.0) } else { 0.0 };
    let low = if low.is_finite() { low.floor() } else { high - LEAST };
    (low.clamp(high - MOST, high - LEAST), high)
}
