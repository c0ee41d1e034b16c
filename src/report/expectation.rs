//! The value that an expectation asks for, in the unit that the file wrote it in.

use super::figures::{decimals, percent, scale_unit, significant};
use crate::problem::model::{Expectation, Problem, Sought};

/// `9.321`, `117 mg/L as N`, `62.3 %`.
pub fn value_words(problem: &Problem, expectation: &Expectation, value: f64) -> String {
    if let Some(unit) = &expectation.unit {
        return format!("{} {}", significant(value / unit.factor, 4), unit.words);
    }
    match expectation.sought {
        Sought::Ph | Sought::Poh | Sought::Pe => decimals(value, 3),
        Sought::SaturationIndex(_) => decimals(value, 2),
        Sought::Fraction { .. } => percent(value),
        Sought::ChargeImbalance { equivalents: false } => format!("{} %", decimals(value, 2)),
        Sought::Activity(_) => significant(value, 4),
        Sought::Pressure(_) => format!("{} atm", significant(value, 4)),
        _ => format!("{} {}", significant(value, 4), scale_unit(problem.scale)),
    }
}
