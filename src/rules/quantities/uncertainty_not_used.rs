//! An uncertainty stands where nothing is computed from it.
//!
//! `±` counts on what goes into the answer: amounts, totals, held values, the temperature,
//! the ionic strength, constants and their heats. After `expect … =` it is the tolerance.
//! Elsewhere, as on a limit or on the temperature that a constant is for, it changes nothing,
//! and a reader may think that it does.
//!
//! A limit is exact by its nature. What margin it needs follows from the uncertainty of the
//! value: ask for it with `confidence`.
//!
//! Before:
//!
//! ```lyate
//! component Cl-, Na+
//! add NaCl 1 mmol/L
//! expect pH < 9 ± 0.1
//! ```
//!
//! After:
//!
//! ```lyate
//! component Cl-, Na+
//! add NaCl 1 ± 0.02 mmol/L
//! expect ionic strength < 1.1 mmol/L, confidence 95 %
//! ```

use crate::problem::defect::DefectKind;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::text::span::Place;
use crate::text::tree::Statement;

rule!("uncertainty-not-used", Warning, "uncertainty_not_used.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for defect in context.defects().filter(|d| d.kind == DefectKind::UncertaintyNotUsed) {
        let message = format!("nothing is computed from `{}` here", context.text(defect.at));
        let statement = context.statement(defect.at).map(|written| written.statement());
        let help = match statement {
            Some(Statement::Expect { .. }) => {
                "ask how surely the limit holds with `, confidence 95 %`"
            }
            _ => "leave it out",
        };
        found.push(RULE.at(defect.at, message).with_help(help));
    }
}
