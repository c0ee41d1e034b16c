//! A statement that may stand once stands twice.
//!
//! A problem has one title, one temperature, one activity model, one ionic strength, and
//! one balance of each kind; each case may have its own in the place of the base's. Of
//! two in one section the first is in force, and whoever reads the second believes that
//! one. Two `add` lines of one reagent add up, and several `expect` lines all count.
//!
//! Before:
//!
//! ```lyate
//! temperature 18 °C
//! temperature 4 °C
//! ```
//!
//! After:
//!
//! ```lyate
//! temperature 18 °C
//! case "winter"
//!     temperature 4 °C
//! ```

use crate::problem::defect::DefectKind;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::text::span::Place;

rule!("statement-repeated", Error, "statement_repeated.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for defect in context.defects() {
        if let DefectKind::StatementRepeated { other } = defect.kind {
            let first = context.text(other);
            let message = format!("this is stated above already: `{first}`");
            found.push(
                RULE.at(defect.at, message)
                    .with_help("keep one of the two, or put the other into a case")
                    .with_related(other, "the first one"),
            );
        }
    }
}
