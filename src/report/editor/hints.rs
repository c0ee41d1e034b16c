//! Hints: the pH at the problem's name, the dominating form at each component, whether
//! each balance closes and what it rests on, the value at each expectation, what became of
//! each solid.

use std::ops::Range;

use crate::balance::written::Verdict;
use crate::chemistry::quantity::Scale;
use crate::equilibrium::quantities::Solved;
use crate::problem::model::{Expectation, Problem, Target};
use crate::report::balance;
use crate::report::dose;
use crate::report::expectation::{is_met, value_words};
use crate::report::figures::{concentration, decimals, percent, scale_unit, significant};
use crate::report::inline::Hint;
use crate::report::solids::fate_words;
use crate::rules::check::Checked;
use crate::rules::compared::kind;
use crate::rules::outcome::Outcome;
use crate::text::span::Part;
use crate::text::tree::{Placed, Statement};

/// The hints whose offset lies in the range, both ends included, in the text's order.
pub fn hints(checked: &Checked, range: &Range<usize>) -> Vec<Hint> {
    let mut hints = Vec::new();
    for (section, outcome) in checked.outcomes.iter().enumerate() {
        let statements = &checked.document.sections[section].statements;
        let Some(solved) = outcome.solved() else { continue };
        if section == 0 {
            title(checked, outcome, solved, &mut hints);
        }
        // Statements stand in order; those outside the range cost nothing.
        let first = statements.partition_point(|placed| end(placed) < range.start);
        for (index, placed) in statements.iter().enumerate().skip(first) {
            if placed.start > range.end {
                break;
            }
            statement(outcome, solved, (section, index, placed), &mut hints);
        }
    }
    hints.retain(|hint| range.start <= hint.offset && hint.offset <= range.end);
    hints.sort_by_key(|hint| hint.offset);
    hints
}

fn end(placed: &Placed) -> usize {
    placed.start + placed.parsed.text.len()
}

/// The base's answer, after the `problem` line or the first line.
fn title(checked: &Checked, outcome: &Outcome, solved: &Solved, hints: &mut Vec<Hint>) {
    let statements = &checked.document.sections[0].statements;
    let named = statements
        .iter()
        .find(|placed| matches!(placed.parsed.statement, Statement::Problem { .. }));
    let offset = match named {
        Some(placed) => placed.start + first_line(&placed.parsed.text),
        None => first_line(&checked.document.text),
    };
    hints.push(answer(outcome, solved, offset));
}

fn answer(outcome: &Outcome, solved: &Solved, offset: usize) -> Hint {
    let problem = &outcome.problem;
    let ionic = concentration(solved.answer.ionic_strength, problem.scale);
    let text = format!("pH {} · I {ionic}", decimals(solved.ph(), 2));
    let tooltip = format!(
        "pH {}, ionic strength {ionic}, {} model, {}",
        decimals(solved.ph(), 4),
        problem.activity.name(),
        crate::report::figures::celsius(problem.kelvin),
    );
    Hint { offset, text, tooltip: Some(tooltip) }
}

fn statement(
    outcome: &Outcome,
    solved: &Solved,
    (section, index, placed): (usize, usize, &Placed),
    hints: &mut Vec<Hint>,
) {
    let part = if section == 0 { Part::Base } else { Part::Case };
    let problem = &outcome.problem;
    let here = |place: &crate::text::span::Place| {
        place.section == part && place.statement as usize == index
    };
    match &placed.parsed.statement {
        Statement::Case { .. } => {
            hints.push(answer(outcome, solved, placed.start + first_line(&placed.parsed.text)));
        }
        Statement::Component { items } => {
            for item in items {
                let after = item.title.as_ref().unwrap_or(&item.name).span.end as usize;
                let canonical = crate::chemistry::formula::canonical(&item.name.value);
                if let Some(j) = problem.scope.component(&canonical) {
                    hints.extend(component(problem, solved, j, placed.start + after));
                }
            }
        }
        Statement::Expect { .. } => {
            if let Some(expectation) = problem.expectations.iter().find(|e| here(&e.at)) {
                let offset = placed.start + expectation.at.span.end as usize;
                hints.extend(expected(outcome, solved, expectation, offset));
            }
        }
        Statement::Hold { by: Some(_), .. } => {
            for (target, amount) in dose::found(problem).filter(|(target, _)| here(&target.at)) {
                let offset = placed.start + target.by.span.end as usize;
                hints.push(found(problem, target, amount, offset));
            }
        }
        Statement::Balance { .. } => {
            let at = problem.balances.iter().position(|balance| here(&balance.at));
            let offset = placed.start + first_line(&placed.parsed.text);
            hints.extend(at.and_then(|at| written_balance(outcome, solved, at, offset)));
        }
        Statement::Precipitate { solid: name } | Statement::Saturate { solid: name } => {
            if let Some(solid) = problem.solids.iter().find(|solid| here(&solid.at)) {
                let amount = solved.precipitated(problem, solid.species).unwrap_or(0.0);
                hints.push(Hint {
                    offset: placed.start + name.span.end as usize,
                    text: fate_words(problem, solved, solid),
                    tooltip: Some(concentration(amount.abs(), problem.scale)),
                });
            }
        }
        _ => {}
    }
}

/// Whether a written balance closes at the answer, and what the implied one rests on.
fn written_balance(
    outcome: &Outcome,
    solved: &Solved,
    index: usize,
    offset: usize,
) -> Option<Hint> {
    let problem = &outcome.problem;
    let written = &problem.balances[index];
    let implied = outcome.balance(kind(written.kind))?;
    let verdict = outcome.compared.iter().find(|compared| compared.balance == index);
    let is_wrong =
        verdict.is_some_and(|compared| matches!(compared.verdict, Verdict::Wrong { .. }));
    let head = if !written.complete {
        return None;
    } else if is_wrong {
        let error = solved.written_error(problem, written);
        format!("off by {}", concentration(error, problem.scale))
    } else if implied.closes() {
        "closes".into()
    } else {
        format!("open by {}", concentration(implied.error(), problem.scale))
    };
    Some(Hint {
        offset,
        text: format!("{head} · {}", balance::rests_on(problem, implied)),
        tooltip: Some(balance::long(problem, implied)),
    })
}

/// What was found for a target.
fn found(problem: &Problem, target: &Target, amount: f64, offset: usize) -> Hint {
    let text = dose::line(problem, target, amount);
    let per = match problem.scale {
        Scale::PerLitre => "litre",
        Scale::PerKilogram => "kilogram",
    };
    let tooltip = format!(
        "{} {} for each {per} of the water treated. Try it on a sample before it is dosed.",
        significant(amount, 6),
        scale_unit(problem.scale)
    );
    Hint { offset, text, tooltip: Some(tooltip) }
}

/// The form of a component that holds most of it; none where it has one form only.
fn component(problem: &Problem, solved: &Solved, j: usize, offset: usize) -> Option<Hint> {
    let shares: Vec<(usize, f64)> = solved.shares(j).collect();
    let total: f64 = shares.iter().map(|(_, share)| share).sum();
    if shares.len() < 2 || total <= 0.0 {
        return None;
    }
    let mut sorted = shares.clone();
    sorted.sort_by(|a, b| b.1.total_cmp(&a.1));
    let (row, share) = sorted[0];
    let lines: Vec<String> = sorted
        .iter()
        .take(6)
        .map(|&(row, share)| {
            let amount = concentration(share, problem.scale);
            format!("{}: {amount}, {}", problem.row_name(row), percent(share / total))
        })
        .collect();
    Some(Hint {
        offset,
        text: format!("{} {}", problem.row_name(row), percent(share / total)),
        tooltip: Some(lines.join("\n\n")),
    })
}

fn expected(
    outcome: &Outcome,
    solved: &Solved,
    expectation: &Expectation,
    offset: usize,
) -> Option<Hint> {
    let problem = &outcome.problem;
    let value = solved.value(problem, expectation.sought)?;
    let words = value_words(problem, expectation, value);
    let text = if !expectation.limit.is_met_by(value) {
        format!("is {words}, not met")
    } else if expectation.confidence.is_some() && !is_met(outcome, expectation) {
        format!("is {words}, not sure")
    } else {
        format!("is {words}")
    };
    let tooltip = format!("{} = {}", expectation.words, significant(value, 6));
    Some(Hint { offset, text, tooltip: Some(tooltip) })
}

/// Where the first line's code ends: before its comment and trailing space.
fn first_line(text: &str) -> usize {
    let line = text.lines().next().unwrap_or_default();
    line.trim_end().len()
}
