//! A curve ends where it starts.
//!
//! `curve over … from … to …` takes something from one value to another, upwards or
//! downwards. With both ends the same, every point would be the same; most often one of
//! the two numbers was not changed after the line was copied.
//!
//! Before:
//!
//! ```lyate
//! use ammonia
//! component NH3
//! total NH3 = 2 mmol/L
//! curve over pH from 7 to 7
//! ```
//!
//! After:
//!
//! ```lyate
//! use ammonia
//! component NH3
//! total NH3 = 2 mmol/L
//! curve over pH from 7 to 11
//! ```

use crate::problem::defect::DefectKind;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::text::span::Place;

rule!("curve-without-length", Error, "curve_without_length.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for defect in context.defects() {
        if defect.kind == DefectKind::CurveWithoutLength {
            let help = "let it end at another value; for one value alone, write a case";
            found.push(RULE.at(defect.at, "the curve ends where it starts").with_help(help));
        }
    }
}
