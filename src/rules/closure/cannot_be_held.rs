//! A quantity is held that can only be an outcome.
//!
//! `hold` is for what a meter or the surroundings impose: pH, pe, a gas, the concentration or
//! activity of a species. A share, an alkalinity or a saturation index follows from the whole
//! solution. It can be expected, and a dose can be found that gives it, but it is not held by
//! itself, since it does not say what would change to meet it.
//!
//! Before:
//!
//! ```lyate
//! use aqueous
//! component NH3, Cl-
//! add NH4Cl 10 mmol/L
//! hold fraction NH3 = 2 %
//! ```
//!
//! After:
//!
//! ```lyate
//! use aqueous
//! component NH3, Cl-
//! add NH4Cl 10 mmol/L
//! expect fraction NH3 < 2 %
//! ```

use crate::problem::defect::DefectKind;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::text::span::Place;

rule!("cannot-be-held", Error, "cannot_be_held.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for defect in context.defects() {
        let DefectKind::CannotBeHeld { subject } = &defect.kind else { continue };
        let help = match subject.as_str() {
            "ionic strength" => "to fix it, write `ionic strength …` without `hold`".to_owned(),
            total if total.starts_with("total ") => {
                format!("to give it, write `{total} = …` without `hold`")
            }
            dose if dose.starts_with("dose ") => {
                format!("to give it, write `add {} …`", dose.trim_start_matches("dose "))
            }
            other => format!(
                "write `expect {other} = …` to see whether it is met, or name after `by` what is \
                 to meet it"
            ),
        };
        let message = format!("`{subject}` is an outcome and cannot be held by itself");
        found.push(RULE.at(defect.at, message).with_help(help));
    }
}
