//! A water that is blended is not solved itself.
//!
//! What goes into a blend is each file's solved water: its dissolved totals, its temperature
//! and its alkalinity. A file that has an error, or states no amounts, has none. The message
//! gives its first error; the rest are told when that file is checked or opened.
//!
//! A file whose water is solved and does not meet what it expects can be blended.
//!
//! Before:
//!
//! ```lyate
//! component Na+, Cl-
//! blend 100 % of "river.lyate"
//! ```
//!
//! ```lyate river.lyate
//! component Na+, Cl-
//! add NaCl 0.4
//! ```
//!
//! After:
//!
//! ```lyate
//! component Na+, Cl-
//! blend 100 % of "mended.lyate"
//! ```
//!
//! ```lyate mended.lyate
//! component Na+, Cl-
//! add NaCl 0.4 mmol/L
//! ```

use crate::problem::defect::DefectKind;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::text::span::Place;

rule!("blended-water-not-solved", Error, "blended_water_not_solved.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for defect in context.defects() {
        let DefectKind::BlendedWaterNotSolved { path, case, why } = &defect.kind else { continue };
        let path = path.display();
        let of_case = match case {
            Some(case) => format!(", case \"{case}\","),
            None => String::new(),
        };
        let why = why.as_ref().map_or_else(String::new, |why| format!(": {why}"));
        let message = format!("the water of `{path}`{of_case} is not solved{why}");
        found.push(RULE.at(defect.at, message).with_help(format!("`lyate check {path}` tells more")));
    }
}
