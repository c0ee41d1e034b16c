//! The answer does not meet what was expected of it.
//!
//! `expect` says what the solved water must be: a value with its tolerance, or a limit. A
//! value without a tolerance is met to half a unit of its last digit. The finding gives the
//! value, the limit and how far apart they are, in the unit that the file uses.
//!
//! What to change is not for the checker to say: the dose, the water, or the expectation. A
//! limit from a permit or a code belongs in the file with its `source`, and goes before any
//! number computed here.
//!
//! Before:
//!
//! ```lyate
//! use aqueous
//! component NH3, Na+, Cl-
//! add NH4Cl 10 mmol/L
//! add NaOH   9 mmol/L
//! expect [NH3] < 1 mmol/L
//! ```
//!
//! After:
//!
//! ```lyate
//! use aqueous
//! component NH3, Na+, Cl-
//! add NH4Cl 10 mmol/L
//! add NaOH 0.9 mmol/L
//! expect [NH3] < 1 mmol/L
//! ```

use crate::problem::model::{Expectation, Limit, Sought};
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::expectation::{value_words, written};
use crate::rules::figures::significant;
use crate::rules::finding::Finding;
use crate::text::span::Place;

rule!("expectation-not-met", Error, "expectation_not_met.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    let Some(solved) = context.solved() else { return };
    for expectation in &context.problem.expectations {
        let words = &expectation.words;
        let Some((at, limit)) = written(context, expectation) else { continue };
        let Some(value) = solved.value(context.problem, expectation.sought) else {
            let message = format!("{words} has no value in this solution");
            let help = match expectation.sought {
                Sought::Pe | Sought::Potential => "nothing here is both oxidised and reduced",
                _ => "what it is a part of is absent here",
            };
            found.push(RULE.at(at, message).with_help(help));
            continue;
        };
        if expectation.limit.is_met_by(value) {
            continue;
        }
        let value_text = value_words(context.problem, expectation, value);
        let (word, off) = match expectation.limit {
            Limit::Within { value: wanted, .. } => ("not", value - wanted),
            Limit::Below { value: limit, or_equal: false } => ("not below", value - limit),
            Limit::Below { value: limit, .. } => ("above", value - limit),
            Limit::Above { value: limit, or_equal: false } => ("not above", value - limit),
            Limit::Above { value: limit, .. } => ("below", value - limit),
            Limit::Between { low, high } => {
                ("not between", if value < low { value - low } else { value - high })
            }
        };
        let message = format!("{words} is {value_text}, {word} {limit}");
        let message = match distance(expectation, off) {
            Some(distance) => format!("{message}: {distance}"),
            None => message,
        };
        found.push(RULE.at(at, message));
    }
}

/// `0.0912 too high`, in the unit written; none where it just touches the limit.
fn distance(expectation: &Expectation, off: f64) -> Option<String> {
    if off == 0.0 {
        return None;
    }
    let way = if off > 0.0 { "too high" } else { "too low" };
    if off.is_infinite() {
        return Some(format!("endlessly {way}"));
    }
    let unit = expectation.unit.as_ref();
    let size = significant(off.abs() / unit.map_or(1.0, |unit| unit.factor), 3);
    let unit = unit.map_or_else(String::new, |unit| format!(" {}", unit.words));
    Some(format!("{size}{unit} {way}"))
}
