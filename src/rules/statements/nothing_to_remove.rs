//! A `without` takes away something that is not there.
//!
//! In a case `without hold pH` takes the base's `hold pH` away. Where the base has no
//! such statement, either the case has outlived a change of the base or the subject is
//! misspelt, and then the statement that was to go is still in force.
//!
//! Before:
//!
//! ```lyate
//! component NH3, Cl-
//! use ammonia
//! add NH4Cl 2 mmol/L
//! case "open"
//!     without hold pH
//! ```
//!
//! After:
//!
//! ```lyate
//! component NH3, Cl-
//! use ammonia
//! add NH4Cl 2 mmol/L
//! hold pH = 8
//! case "open"
//!     without hold pH
//! ```

use crate::problem::defect::DefectKind;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::text::span::{Part, Place};

rule!("nothing-to-remove", Warning, "nothing_to_remove.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for defect in context.defects() {
        if defect.kind == DefectKind::NothingToRemove {
            let what = context.text(defect.at);
            let finding = match defect.at.section {
                Part::Case => RULE
                    .at(defect.at, format!("the base has no `{what}` to take away"))
                    .with_help("take this line out, or name what the base states"),
                Part::Base => RULE
                    .at(defect.at, "only a case can take something away")
                    .with_help("write it below a `case \"…\"`, or take the statement itself out"),
            };
            found.push(finding);
        }
    }
}
