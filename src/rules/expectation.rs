//! Expectations: whether the answer meets one, its value in the unit that the file wrote
//! it in, and what was asked.

use super::figures::{decimals, percent, scale_unit, significant, with_uncertainty};
use crate::equilibrium::confidence;
use crate::equilibrium::uncertainty::Budget;
use crate::problem::model::{Expectation, Problem, ShownUnit, Sought};
use crate::rules::check::Checked;
use crate::rules::context::Context;
use crate::rules::outcome::Outcome;
use crate::text::span::{Part, Place, Span};
use crate::text::tree::{Relation, Statement};

/// The value that an expectation speaks of, in base units, and whether it is as expected.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Verdict {
    /// None where the quantity could not be had; then the expectation is not met.
    pub value: Option<f64>,
    /// In base units; none where nothing that carries a `±` moves the quantity.
    pub standard_uncertainty: Option<f64>,
    /// That the true value meets the limit; none without an uncertainty.
    pub probability: Option<f64>,
    pub standing: Standing,
}

#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Standing {
    Met,
    /// The value meets the limit, with less confidence than was asked for.
    NotSure,
    NotMet,
}

pub fn verdict(outcome: &Outcome, expectation: &Expectation) -> Verdict {
    let value = outcome.solved().and_then(|s| s.value(&outcome.problem, expectation.sought));
    let budget = outcome.budget(expectation.sought);
    let told = budget.filter(|budget| is_told(expectation.sought, budget));
    let size = told.map(|budget| budget.standard_uncertainty);
    let limit = expectation.limit;
    let probability =
        value.zip(size).map(|(value, size)| confidence::probability(limit, value, size));
    let standing = match (value, expectation.confidence, probability) {
        (Some(value), _, _) if !limit.is_met_by(value) => Standing::NotMet,
        (None, _, _) => Standing::NotMet,
        (_, Some(asked), Some(found)) if found < asked => Standing::NotSure,
        _ => Standing::Met,
    };
    Verdict { value, standard_uncertainty: size, probability, standing }
}

/// Of the value, or of one unit of what is a logarithm: a smaller uncertainty is what rounding
/// leaves of none, and no reader's concern.
const NEGLIGIBLE: f64 = 1e-5;

/// Whether a quantity is uncertain by enough to be told.
pub fn is_told(sought: Sought, budget: &Budget) -> bool {
    let scale = match sought {
        Sought::Ph | Sought::Poh | Sought::Pe | Sought::SaturationIndex(_) => 1.0,
        _ => budget.value.abs(),
    };
    budget.standard_uncertainty > NEGLIGIBLE * scale
}

/// Whether an expectation is met, with the confidence asked for. No uncertainty is looked
/// for where none is asked about.
pub fn is_met(outcome: &Outcome, expectation: &Expectation) -> bool {
    if expectation.confidence.is_some() {
        return verdict(outcome, expectation).standing == Standing::Met;
    }
    let value = outcome.solved().and_then(|s| s.value(&outcome.problem, expectation.sought));
    value.is_some_and(|value| expectation.limit.is_met_by(value))
}

/// What was asked, in canonical form without the source: `[NH3] < 200 mg/L as N`.
pub fn asked(checked: &Checked, section: usize, expectation: &Expectation) -> String {
    let at = expectation.at;
    let section = if at.section == Part::Base { 0 } else { section };
    let statements = &checked.document.sections[section].statements;
    match statements.get(at.statement as usize).map(|placed| &placed.parsed.statement) {
        Some(Statement::Expect { subject, relation, confidence, .. }) => match confidence {
            Some(confidence) => {
                format!("{} {relation}, confidence {confidence}", subject.value)
            }
            None => format!("{} {relation}", subject.value),
        },
        _ => expectation.words.clone(),
    }
}

/// From the quantity to its limit, and the limit's own words.
pub fn written(context: &Context, expectation: &Expectation) -> Option<(Place, String)> {
    let written = context.statement(expectation.at)?;
    let Statement::Expect { subject, relation, .. } = written.statement() else { return None };
    let limit: Span = match relation {
        Relation::Equal(q)
        | Relation::Less(q)
        | Relation::LessOrEqual(q)
        | Relation::Greater(q)
        | Relation::GreaterOrEqual(q) => q.span,
        Relation::Between(low, high) => low.span.to(high.span),
    };
    let text = written.parsed.text.get(limit.range())?;
    // It may go over a line break.
    let words: Vec<&str> = text.split_whitespace().collect();
    Some((written.place(subject.span.to(limit)), words.join(" ")))
}

/// `9.321`, `117 mg/L as N`, `62.3 %`.
pub fn value_words(problem: &Problem, expectation: &Expectation, value: f64) -> String {
    quantity_words(problem, expectation.unit.as_ref(), expectation.sought, value)
}

/// A quantity in the unit that the file wrote it in.
pub fn quantity_words(
    problem: &Problem,
    unit: Option<&ShownUnit>,
    sought: Sought,
    value: f64,
) -> String {
    if let Some(unit) = unit {
        return format!("{} {}", significant(value / unit.factor, 4), unit.words);
    }
    match sought {
        Sought::Ph | Sought::Poh | Sought::Pe => decimals(value, 3),
        Sought::SaturationIndex(_) => decimals(value, 2),
        Sought::Potential => format!("{} V", decimals(value, 3)),
        Sought::Fraction { .. } => percent(value),
        Sought::ChargeImbalance { equivalents: false } => format!("{} %", decimals(value, 2)),
        Sought::Activity(_) => significant(value, 4),
        Sought::Pressure(_) => format!("{} atm", significant(value, 4)),
        _ => format!("{} {}", significant(value, 4), scale_unit(problem.scale)),
    }
}

/// The value with its standard uncertainty, `117.3 ± 2.4 mg/L as N`.
pub fn uncertain_words(
    problem: &Problem,
    expectation: &Expectation,
    value: f64,
    standard_uncertainty: f64,
) -> String {
    uncertain_quantity_words(
        problem,
        expectation.sought,
        expectation.unit.as_ref(),
        value,
        standard_uncertainty,
    )
}

/// The same of any quantity, in base units where the file has written none.
pub fn uncertain_quantity_words(
    problem: &Problem,
    sought: Sought,
    unit: Option<&ShownUnit>,
    value: f64,
    standard_uncertainty: f64,
) -> String {
    let (factor, words) = shown(problem, sought, unit);
    let text = with_uncertainty(value / factor, standard_uncertainty / factor);
    if words.is_empty() { text } else { format!("{text} {words}") }
}

/// Base units in one of the unit that a quantity is shown in, and that unit.
fn shown<'a>(problem: &Problem, sought: Sought, unit: Option<&'a ShownUnit>) -> (f64, &'a str) {
    if let Some(unit) = unit {
        return (unit.factor, &unit.words);
    }
    match sought {
        Sought::Ph
        | Sought::Poh
        | Sought::Pe
        | Sought::SaturationIndex(_)
        | Sought::Activity(_) => (1.0, ""),
        Sought::Fraction { .. } => (0.01, "%"),
        Sought::ChargeImbalance { equivalents: false } => (1.0, "%"),
        Sought::Pressure(_) => (1.0, "atm"),
        _ => (1.0, scale_unit(problem.scale)),
    }
}

/// `86 %`, `99.7 %`, `>99.99 %`: never rounded up to certainty.
pub fn probability_words(probability: f64) -> String {
    let percent = 100.0 * probability;
    match percent {
        p if p > 99.99 => ">99.99 %".into(),
        p if p > 99.0 => format!("{} %", decimals((p * 100.0).floor() / 100.0, 2)),
        p if p < 0.01 => "<0.01 %".into(),
        p => format!("{} %", significant(p, 3)),
    }
}

/// A standard uncertainty alone, `2.4 mg/L as N`.
pub fn size_words(problem: &Problem, expectation: &Expectation, size: f64) -> String {
    let (factor, words) = shown(problem, expectation.sought, expectation.unit.as_ref());
    let text = significant(size / factor, 2);
    if words.is_empty() { text } else { format!("{text} {words}") }
}
