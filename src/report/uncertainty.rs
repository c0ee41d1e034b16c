//! What answers are uncertain by, and which input brings which share of it: as a table, as
//! data, and in the few lines of a hover.

use serde::Serialize;

use super::expectation::{is_told, probability_words, uncertain_quantity_words, verdict};
use super::figures::decimals;
use super::source::{Source, Stated};
use super::style::Style;
use super::table::{Cell, Side, Table};
use crate::equilibrium::uncertainty::Budget;
use crate::problem::model::{Expectation, Problem, ShownUnit, Sought};
use crate::rules::check::{Checked, locate_place};
use crate::rules::outcome::Outcome;

/// Shares below this, in percent, are told as one.
const SMALL: f64 = 1.0;

/// A quantity of which a budget is told.
struct Told<'a> {
    words: &'a str,
    sought: Sought,
    unit: Option<&'a ShownUnit>,
    budget: Budget,
}

/// The pH and each quantity that is expected, once, where anything uncertain moves it.
fn told(outcome: &Outcome) -> Vec<Told<'_>> {
    let mut told: Vec<Told> = Vec::new();
    let expected = outcome.problem.expectations.iter();
    let expected = expected.map(|e| (e.words.as_str(), e.sought, e.unit.as_ref()));
    for (words, sought, unit) in std::iter::once(("pH", Sought::Ph, None)).chain(expected) {
        if told.iter().any(|told| told.sought == sought) {
            continue;
        }
        let budget = outcome.budget(sought);
        if let Some(budget) = budget.filter(|budget| is_told(sought, budget)) {
            told.push(Told { words, sought, unit, budget });
        }
    }
    told
}

/// Each quantity with its standard uncertainty and the shares that make it up.
pub fn table(source: &Source, checked: &Checked, stated: Stated, style: Style) -> String {
    let problem = &stated.outcome.problem;
    let mut table = Table::new(&[
        ("quantity", Side::Left),
        ("value", Side::Left),
        ("share", Side::Right),
        ("from", Side::Left),
        ("line", Side::Right),
    ]);
    for Told { words, sought, unit, budget } in told(stated.outcome) {
        let size = budget.standard_uncertainty;
        let value = uncertain_quantity_words(problem, sought, unit, budget.value, size);
        let mut head = [Cell::from(words), Cell::from(value)].into_iter();
        let mut row = |share: String, from: String, line: String| {
            let mut next = || head.next().unwrap_or_default();
            table.row([next(), next(), share.into(), from.into(), line.into()]);
        };
        for share in budget.shares.iter().filter(|share| share.percent >= SMALL) {
            let uncertain = &problem.uncertain[share.source];
            let line = uncertain.at.map(|at| {
                source.region(&locate_place(&checked.document, stated.section, at)).line.to_string()
            });
            row(share_words(share.percent), uncertain.words.clone(), line.unwrap_or_default());
        }
        let (count, rest) = small(&budget);
        if count > 0 {
            row(share_words(rest), others(count), String::new());
        }
        for &source in &budget.left_out {
            row(
                "?".into(),
                format!("{}, not counted", problem.uncertain[source].words),
                String::new(),
            );
        }
    }
    if table.is_empty() { String::new() } else { table.render(style) }
}

/// How many shares are small, and their sum.
fn small(budget: &Budget) -> (usize, f64) {
    let small = || budget.shares.iter().filter(|share| share.percent < SMALL);
    (small().count(), small().map(|share| share.percent).sum())
}

fn others(count: usize) -> String {
    if count == 1 { "another input".into() } else { format!("{count} other inputs") }
}

/// `72 %`, `3.4 %`, `<0.1 %`.
fn share_words(percent: f64) -> String {
    match percent {
        p if p >= 9.95 => format!("{} %", decimals(p, 0)),
        p if p >= 0.05 => format!("{} %", decimals(p, 1)),
        _ => "<0.1 %".into(),
    }
}

/// So many shares are told in a hover.
const TOP: usize = 4;

/// The value of what is expected and the largest shares of its uncertainty, as Markdown; none
/// where nothing uncertain moves it.
pub fn hover(outcome: &Outcome, expectation: &Expectation) -> Option<String> {
    let problem = &outcome.problem;
    let budget = outcome.budget(expectation.sought)?;
    let size = budget.standard_uncertainty;
    if !is_told(expectation.sought, &budget) {
        return None;
    }
    let unit = expectation.unit.as_ref();
    let value = uncertain_quantity_words(problem, expectation.sought, unit, budget.value, size);
    let mut lines = vec![format!("**{}** · {value}", expectation.words)];
    let verdict = verdict(outcome, expectation);
    if let Some(probability) = verdict.probability {
        lines.push(format!("met with a probability of {}", probability_words(probability)));
    }
    for share in budget.shares.iter().take(TOP) {
        let words = &problem.uncertain[share.source].words;
        lines.push(format!("{} from {words}", share_words(share.percent)));
    }
    let rest = &budget.shares[budget.shares.len().min(TOP)..];
    if !rest.is_empty() {
        let percent = rest.iter().map(|share| share.percent).sum();
        lines.push(format!("{} from {}", share_words(percent), others(rest.len())));
    }
    Some(lines.join("\n\n"))
}

/// A quantity with its budget, as data, in base units.
#[derive(Serialize)]
pub struct UncertaintyJson<'a> {
    quantity: &'a str,
    value: f64,
    standard_uncertainty: f64,
    budget: Vec<ShareJson<'a>>,
    /// Inputs whose part is not known and not counted.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    left_out: Vec<&'a str>,
}

#[derive(Serialize)]
struct ShareJson<'a> {
    input: &'a str,
    #[serde(skip_serializing_if = "Option::is_none")]
    line: Option<usize>,
    contribution: f64,
    percent: f64,
}

pub fn json<'a>(
    source: &Source,
    checked: &Checked,
    section: usize,
    outcome: &'a Outcome,
) -> Vec<UncertaintyJson<'a>> {
    let problem: &Problem = &outcome.problem;
    let words = |source: usize| problem.uncertain[source].words.as_str();
    let line = |uncertain: usize| {
        let at = problem.uncertain[uncertain].at?;
        Some(source.region(&locate_place(&checked.document, section, at)).line)
    };
    let told = told(outcome).into_iter();
    told.map(|Told { words: quantity, budget, .. }| UncertaintyJson {
        quantity,
        value: budget.value,
        standard_uncertainty: budget.standard_uncertainty,
        budget: budget
            .shares
            .iter()
            .map(|share| ShareJson {
                input: words(share.source),
                line: line(share.source),
                contribution: share.contribution,
                percent: share.percent,
            })
            .collect(),
        left_out: budget.left_out.iter().map(|&source| words(source)).collect(),
    })
    .collect()
}
