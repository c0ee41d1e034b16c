//! A reaction does not say where its constant comes from.
//!
//! Tables differ: two handbooks may give one constant 0.2 apart, for other ionic
//! strengths or older experiments. With its source the next reader can tell what a
//! number is worth, and an auditor can follow it.
//!
//! Before:
//!
//! ```lyate
//! reaction NH4+ <=> NH3 + H+, pKa = 9.25
//! ```
//!
//! After:
//!
//! ```lyate
//! reaction NH4+ <=> NH3 + H+, pKa = 9.25, source "plant constants, sheet 3"
//! ```

use crate::problem::defect::DefectKind;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::text::span::Place;

rule!("source-missing", Note, "source_missing.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for defect in context.defects() {
        if defect.kind == DefectKind::NoSource {
            let message = "the reaction does not say where its constant comes from";
            found.push(RULE.at(defect.at, message).with_help("add a clause: source \"…\""));
        }
    }
}
