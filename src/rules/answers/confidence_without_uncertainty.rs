//! A confidence is asked for where nothing is uncertain.
//!
//! `confidence` weighs a limit against the standard uncertainty that the inputs' `±` bring
//! to the quantity. Where nothing carries a `±`, or nothing that moves this quantity, the
//! value counts as exact and the clause says nothing: the limit is met or it is not.
//!
//! A file that asks for 95 % and is waved through without any uncertainty looks safer than it
//! is. State what the doses, analyses and constants are good to.
//!
//! Before:
//!
//! ```lyate
//! use aqueous
//! component NH3, Na+, Cl-
//! add NH4Cl 10 mmol/L
//! add NaOH  4 mmol/L
//! expect [NH3] < 4.5 mmol/L, confidence 95 %
//! ```
//!
//! After:
//!
//! ```lyate
//! use aqueous
//! component NH3, Na+, Cl-
//! add NH4Cl 10 ± 0.1 mmol/L
//! add NaOH  4 ± 0.05 mmol/L
//! expect [NH3] < 4.5 mmol/L, confidence 95 %
//! ```

use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::text::span::Place;
use crate::text::tree::Statement;

rule!(
    "confidence-without-uncertainty",
    Warning,
    "confidence_without_uncertainty.rs",
    find
);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    let asked = context.problem.expectations.iter().filter(|e| e.confidence.is_some());
    for expectation in asked {
        if context.solved().is_none() {
            return;
        }
        let message = match context.budget(expectation.sought) {
            None if context.problem.uncertain.is_empty() => {
                "nothing in this problem carries a ±, so that the confidence says nothing".into()
            }
            Some(budget) if budget.standard_uncertainty == 0.0 => format!(
                "nothing that carries a ± moves {}, so that the confidence says nothing",
                expectation.words
            ),
            _ => continue,
        };
        let Some(written) = context.statement(expectation.at) else { continue };
        let Statement::Expect { confidence: Some(confidence), .. } = written.statement() else {
            continue;
        };
        let help = "state what doses, analyses and constants are good to, as in `9 ± 0.1 mmol/L`";
        found.push(RULE.at(written.place(confidence.span), message).with_help(help));
    }
}
