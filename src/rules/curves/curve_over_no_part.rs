//! A curve over a blend names a file that is no part of it, or all of it.
//!
//! `curve over blend "river.lyate" from 0 to 100 %` moves the share of that file; the other
//! parts keep to their proportions. So the file must be a part of the blend, spelt as it is
//! there, and there must be another part that makes room for it.
//!
//! Before:
//!
//! ```lyate
//! component Na+, Cl-
//! blend 70 % of "river.lyate", 30 % of "well.lyate"
//! curve over blend "rain.lyate" from 0 to 100 %
//! ```
//!
//! ```lyate river.lyate
//! component Na+, Cl-
//! add NaCl 0.4 mmol/L
//! ```
//!
//! ```lyate well.lyate
//! component Na+, Cl-
//! add NaCl 2.1 mmol/L
//! ```
//!
//! After:
//!
//! ```lyate
//! component Na+, Cl-
//! blend 70 % of "river.lyate", 30 % of "well.lyate"
//! curve over blend "river.lyate" from 0 to 100 %
//! ```
//!
//! ```lyate river.lyate
//! component Na+, Cl-
//! add NaCl 0.4 mmol/L
//! ```
//!
//! ```lyate well.lyate
//! component Na+, Cl-
//! add NaCl 2.1 mmol/L
//! ```

use crate::problem::defect::DefectKind;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::rules::words::names;
use crate::text::span::Place;

rule!("curve-over-no-part", Error, "curve_over_no_part.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for defect in context.defects() {
        let DefectKind::CurveOverNoPart { file, parts } = &defect.kind else { continue };
        let (message, help) = if parts.is_empty() {
            let help = "write `blend …` with the shares of the waters first".to_owned();
            (format!("nothing is blended, so `{file}` has no share to move"), help)
        } else if parts.contains(file) {
            let help = "blend it with another water, be it in a share of 0 %".to_owned();
            (format!("no other water makes room for the share of `{file}`"), help)
        } else {
            let help = format!("its parts are {}", names(parts, "and"));
            (format!("`{file}` is no part of the blend"), help)
        };
        found.push(RULE.at(defect.at, message).with_help(help));
    }
}
