//! The shares of a component's forms against pH, the solids that form among them.

use std::sync::atomic::AtomicBool;

use num_rational::Rational64;
use num_traits::ToPrimitive;

use super::chart::{Axis, Chart, Line, Mark, MarkKind, Role, Rule};
use super::subject::Subject;
use super::words::Words;
use crate::chemistry::formula::canonical;
use crate::problem::model::Presence;
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
    let forms = forms(subject, component);
    // As in the sweep, each solid that may form has its place behind the held values.
    let stated = subject.solved.asked().fixed.len();
    let brought = subject.solved.brought();
    let answer = |form: &Form| match form.place {
        Place::Dissolved(row) => subject.solved.answer.concentrations[row],
        Place::Solid(k) => brought.get(stated + k).map_or(0.0, |brought| 0.0 - brought),
    };
    let mut lines = Vec::new();
    let mut marks = Vec::new();
    for form in &forms {
        let places = sweep.states.iter().map(|(ph, state)| {
            let state = state.as_ref()?;
            let amount = |form: &Form| match form.place {
                Place::Dissolved(row) => state.concentrations[row],
                Place::Solid(k) => sweep.formed(state, k),
            };
            Some((*ph, share(&forms, form, amount)))
        });
        let line = Line::through(Words::formula(form.name), Role::Plain, places);
        let most = line.pieces.iter().flatten().map(|place| place.1).fold(0.0, f64::max);
        if most < LEAST_SHARE {
            continue;
        }
        lines.push(line);
        let here = share(&forms, form, answer);
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

/// A species or a solid that holds a component.
struct Form<'a> {
    name: &'a str,
    /// How many of the component it holds.
    holds: f64,
    place: Place,
}

#[derive(Clone, Copy)]
enum Place {
    /// A row of the stoichiometry.
    Dissolved(usize),
    /// One of the solids that may form.
    Solid(usize),
}

/// What one of the forms has of their component, by the amounts of all.
fn share(forms: &[Form], one: &Form, amount: impl Fn(&Form) -> f64) -> f64 {
    let total: f64 = forms.iter().map(|form| form.holds * amount(form)).sum();
    one.holds * amount(one) / total
}

/// The dissolved forms of a component, and then the solids that may form of it.
fn forms<'a>(subject: &'a Subject, component: usize) -> Vec<Form<'a>> {
    let problem = subject.problem();
    let holds = |row: &[(usize, Rational64)]| {
        let (_, n) = row.iter().find(|(j, _)| *j == component)?;
        n.to_f64().filter(|n| *n > 0.0)
    };
    let species = problem.scope.stoichiometry.species.iter().enumerate();
    let dissolved = species.filter_map(|(row, species)| {
        let (name, holds) = (problem.row_name(row), holds(&species.row)?);
        Some(Form { name, holds, place: Place::Dissolved(row) })
    });
    let solids = problem.solids_that_are(Presence::Forms).enumerate();
    let solids = solids.filter_map(|(k, solid)| {
        let made = problem.scope.belonging.made[solid.species].as_ref()?;
        let name = problem.solid_name(solid);
        Some(Form { name, holds: holds(&made.row)?, place: Place::Solid(k) })
    });
    dissolved.chain(solids).collect()
}

/// The component that is asked for by its name or by that of one of its forms; else the first
/// that has the most forms.
fn component(subject: &Subject, of: Option<&str>) -> Result<usize, String> {
    let scope = &subject.problem().scope;
    let components = PROTON + 1..scope.components.len();
    let Some(of) = of else {
        let present = |form: &&Form| match form.place {
            Place::Dissolved(row) => subject.solved.answer.concentrations[row] > 0.0,
            Place::Solid(_) => false,
        };
        let count = |j: &usize| forms(subject, *j).iter().filter(present).count();
        // The first of those with the most: `max_by_key` would give the last.
        return components
            .rev()
            .max_by_key(count)
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
