//! A confidence is not above 50 % and below 100 %.
//!
//! It is the probability with which a limit has to hold. A value that just touches its limit
//! holds it with one half, so half or less asks for nothing; and no measured value holds a
//! limit with certainty. Common practice is 95 %, or 99 % where a miss does harm.
//!
//! Before:
//!
//! ```lyate
//! component Cl-, Na+
//! add NaCl 1 ± 0.02 mmol/L
//! expect ionic strength < 1.1 mmol/L, confidence 100 %
//! ```
//!
//! After:
//!
//! ```lyate
//! component Cl-, Na+
//! add NaCl 1 ± 0.02 mmol/L
//! expect ionic strength < 1.1 mmol/L, confidence 99 %
//! ```

use crate::problem::defect::DefectKind;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::text::span::Place;

rule!("confidence-out-of-range", Error, "confidence_out_of_range.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for defect in context.defects().filter(|d| d.kind == DefectKind::ConfidenceOutOfRange) {
        let message = "a confidence lies above 50 % and below 100 %";
        found.push(RULE.at(defect.at, message).with_help("95 % is common practice"));
    }
}
