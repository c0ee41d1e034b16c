//! A component has a total, and the blend brings it too.
//!
//! The blend says how much of it there is: what the waters bring in their shares. A `total`
//! beside it would be a second answer to the same question. To change what the blend gives,
//! put a reagent in with `add`, which goes on top, or change the water in its own file.
//!
//! Before:
//!
//! ```lyate
//! component Na+, Cl-
//! blend 100 % of "well.lyate"
//! total Na+ = 3 mmol/L
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
//! blend 100 % of "well.lyate"
//! add NaCl 0.9 mmol/L
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
use crate::text::span::Place;

rule!("total-and-blend", Error, "total_and_blend.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for defect in context.defects() {
        let DefectKind::TotalAndBlend { name, blend } = &defect.kind else { continue };
        let message = format!("`{name}` has a total here, and the blend brings it too");
        found.push(
            RULE.at(defect.at, message)
                .with_related(*blend, format!("brings `{name}`"))
                .with_help("put more of it in with `add`, or change it in the blended file"),
        );
    }
}
