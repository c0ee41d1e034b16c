//! A reaction has more than one constant.
//!
//! A reaction carries exactly one constant. Of two, one is the older value, or the one
//! for another temperature, and the file does not say which is in force. Two values for
//! one reaction at two temperatures are an enthalpy, or an expression `log K(T)`.
//!
//! Before:
//!
//! ```lyate
//! reaction NH4+ <=> NH3 + H+, pKa = 9.25, log K = -9.24, source "site table, row 2"
//! ```
//!
//! After:
//!
//! ```lyate
//! reaction NH4+ <=> NH3 + H+, pKa = 9.25, source "site table, row 2"
//! ```

use crate::problem::defect::DefectKind;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::text::span::Place;

rule!("two-constants", Error, "two_constants.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for defect in context.defects() {
        if let DefectKind::TwoConstants { other } = defect.kind {
            let message =
                format!("the reaction has a constant already: `{}`", context.text(other));
            found.push(
                RULE.at(defect.at, message)
                    .with_help("keep the one that is meant")
                    .with_related(other, "the first one"),
            );
        }
    }
}
