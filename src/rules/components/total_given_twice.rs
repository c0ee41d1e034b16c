//! The total of a component is given twice.
//!
//! A component has one total. Where two statements of one section give it, the first counts
//! and the other would be passed over in silence. A case may replace the base's total: that
//! is no repetition.
//!
//! Amounts of reagents add up, totals do not: two analyses of one sample are two readings of
//! the same matter, not twice as much of it.
//!
//! Before:
//!
//! ```lyate
//! use aqueous
//! component NH3, Cl-
//! total NH3 = 5 mmol/L
//! total Cl- = 5 mmol/L
//! total NH3 = 5.3 mmol/L
//! ```
//!
//! After:
//!
//! ```lyate
//! use aqueous
//! component NH3, Cl-
//! total NH3 = 5 mmol/L
//! total Cl- = 5 mmol/L
//!
//! case "second sample"
//!     total NH3 = 5.3 mmol/L
//! ```

use crate::problem::defect::DefectKind;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::text::span::Place;

rule!("total-given-twice", Error, "total_given_twice.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for defect in context.defects() {
        let DefectKind::TotalTwice { name, other } = &defect.kind else { continue };
        let finding = RULE
            .at(defect.at, format!("the total of `{name}` is given twice"))
            .with_related(*other, "the first time")
            .with_help("keep one of them, or move the other into a case");
        found.push(finding);
    }
}
