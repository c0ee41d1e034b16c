//! Expectations: whether the answer meets one, its value in the unit that the file wrote
//! it in, and what was asked.

use super::figures::{decimals, percent, scale_unit, significant};
use crate::equilibrium::quantities::Solved;
use crate::problem::model::{Expectation, Limit, Problem, Sought};
use crate::rules::check::Checked;
use crate::text::span::Part;
use crate::text::tree::Statement;

/// The value that an expectation speaks of, in base units, and whether it is as expected.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Verdict {
    /// None where the quantity could not be had; then the expectation is not met.
    pub value: Option<f64>,
    pub met: bool,
}

pub fn verdict(problem: &Problem, solved: &Solved, expectation: &Expectation) -> Verdict {
    let value = solved.value(problem, expectation.sought);
    Verdict { value, met: value.is_some_and(|value| holds(expectation.limit, value)) }
}

fn holds(limit: Limit, value: f64) -> bool {
    match limit {
        Limit::Within { value: wanted, tolerance } => (value - wanted).abs() <= tolerance,
        Limit::Below { value: limit, or_equal } => value < limit || or_equal && value == limit,
        Limit::Above { value: limit, or_equal } => value > limit || or_equal && value == limit,
        Limit::Between { low, high } => low <= value && value <= high,
    }
}

/// What was asked, in canonical form without the source: `[NH3] < 200 mg/L as N`.
pub fn asked(checked: &Checked, section: usize, expectation: &Expectation) -> String {
    let at = expectation.at;
    let section = if at.section == Part::Base { 0 } else { section };
    let statements = &checked.document.sections[section].statements;
    match statements.get(at.statement as usize).map(|placed| &placed.parsed.statement) {
        Some(Statement::Expect { subject, relation, .. }) => {
            format!("{} {relation}", subject.value)
        }
        _ => expectation.words.clone(),
    }
}

/// `9.321`, `117 mg/L as N`, `62.3 %`.
pub fn value_words(problem: &Problem, expectation: &Expectation, value: f64) -> String {
    if let Some(unit) = &expectation.unit {
        return format!("{} {}", significant(value / unit.factor, 4), unit.words);
    }
    match expectation.sought {
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
