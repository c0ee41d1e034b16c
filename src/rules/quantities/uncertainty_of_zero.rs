//! An uncertainty of zero is stated.
//!
//! `±` states one standard uncertainty. Zero of it states none: the value counts as exact,
//! as it does without. No measured value is exact, so this is either a figure still to be
//! filled in or one that was rounded away.
//!
//! Before:
//!
//! ```lyate
//! component Cl-
//! total Cl- = 40 ± 0 mg/L
//! ```
//!
//! After:
//!
//! ```lyate
//! component Cl-
//! total Cl- = 40 ± 0.4 mg/L
//! ```

use crate::problem::defect::DefectKind;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::text::span::Place;

rule!("uncertainty-of-zero", Note, "uncertainty_of_zero.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for defect in context.defects().filter(|d| d.kind == DefectKind::UncertaintyOfZero) {
        let message = format!("`{}` states no uncertainty", context.text(defect.at));
        let help = "write what the value is good to, or leave it out";
        found.push(RULE.at(defect.at, message).with_help(help));
    }
}
