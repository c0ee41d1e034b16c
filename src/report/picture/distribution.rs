//! The shares of a component's forms against pH.

use std::sync::atomic::AtomicBool;

use num_traits::ToPrimitive;

use super::chart::{Axis, Chart, Line, Mark, MarkKind, Role, Rule};
use super::subject::Subject;
use super::words::Words;
use crate::chemistry::formula::canonical;
use crate::equilibrium::system::Answer;
use crate::problem::scope::PROTON;

/// A form that is never more than this share is left out.
const LEAST_SHARE: f64 = 0.005;

/// None where the work was cancelled.
///
/// # Errors
/// Where there is no such component, or nothing of it.
pub fn chart(
    subject: &Subject,
    of: Option<&str>,
    cancel: &AtomicBool,
) -> Option<Result<Chart, String>> {
    let component = match component(subject, of) {
        Ok(component) => component,
        Err(words) => return Some(Err(words)),
    };
    let problem = subject.problem();
    let sweep = subject.sweep(cancel)?;
    let held = holding(subject, component);
    let share = |state: &Answer, row: usize, n: f64| {
        let total: f64 = held.iter().map(|&(row, n)| n * state.concentrations[row]).sum();
        n * state.concentrations[row] / total
    };
    let mut lines = Vec::new();
    let mut marks = Vec::new();
    for &(row, n) in &held {
        let places =
            sweep.states.iter().map(|(ph, state)| Some((*ph, share(state.as_ref()?, row, n))));
        let line = Line::through(Words::formula(problem.row_name(row)), Role::Plain, places);
        let most = line.pieces.iter().flatten().map(|place| place.1).fold(0.0, f64::max);
        if most < LEAST_SHARE {
            continue;
        }
        lines.push(line);
        let here = share(&subject.solved.answer, row, n);
        if here >= LEAST_SHARE {
            let at = (subject.solved.ph(), here);
            marks.push(Mark { at, label: None, kind: MarkKind::Answer });
        }
    }
    let name = &problem.scope.components[component].formula.name;
    if lines.is_empty() {
        return Some(Err(format!("there is no {name} in this water")));
    }
    let (from, to) = subject.ph_range();
    let title = Words::plain("share of ").then("", Words::formula(name));
    let mut y = Axis::new(title.then("", Words::plain(", %")), 0.0, 1.0);
    y.percent = true;
    let mut chart = Chart {
        title: subject.title.clone(),
        subtitle: subject.conditions(true),
        x: Axis::new(Words::plain("pH"), from, to),
        y,
        lines,
        marks,
        rules: vec![Rule { x: subject.solved.ph(), label: Words::plain(&subject.ph_words()) }],
        levels: Vec::new(),
        notes: Vec::new(),
    };
    chart.tidy();
    Some(Ok(chart))
}

/// The species that hold a component, with how many of it.
fn holding(subject: &Subject, component: usize) -> Vec<(usize, f64)> {
    let species = subject.problem().scope.stoichiometry.species.iter().enumerate();
    species
        .filter_map(|(row, species)| {
            let (_, n) = species.row.iter().find(|(j, _)| *j == component)?;
            n.to_f64().filter(|n| *n > 0.0).map(|n| (row, n))
        })
        .collect()
}

/// The component that is asked for by its name or by that of one of its forms; else the first
/// that has the most forms.
fn component(subject: &Subject, of: Option<&str>) -> Result<usize, String> {
    let scope = &subject.problem().scope;
    let components = PROTON + 1..scope.components.len();
    let Some(of) = of else {
        let forms = |j: &usize| {
            let present =
                |&&(row, _): &&(usize, f64)| subject.solved.answer.concentrations[row] > 0.0;
            holding(subject, *j).iter().filter(present).count()
        };
        // The first of those with the most: `max_by_key` would give the last.
        return components
            .rev()
            .max_by_key(forms)
            .ok_or_else(|| "this problem has no component but H+ and H2O".to_owned());
    };
    let name = canonical(of);
    let by_species = || {
        let row = scope.row_of(scope.find(&name)?)?;
        let row = &scope.stoichiometry.species.get(row)?.row;
        row.iter().map(|&(j, _)| j).find(|&j| j != PROTON)
    };
    scope.component(&name).filter(|&j| j != PROTON).or_else(by_species).ok_or_else(|| {
        let names: Vec<&str> =
            scope.components.iter().skip(1).map(|c| c.formula.name.as_str()).collect();
        match names.is_empty() {
            true => "this problem has no component but H+ and H2O".into(),
            false => format!("{of} is no component here; there are {}", names.join(", ")),
        }
    })
}
