//! A component is listed and plays no part.
//!
//! A component has a total, reagents that bring it, or a held value. This one has none of
//! them, and no other statement speaks of what it is made into, so it is taken as absent.
//!
//! Often it is what is left of an earlier version. Sometimes it is an ion that was meant to
//! be put in, and then the charge balance lacks it: a pH that looks sound and is not.
//!
//! Before:
//!
//! ```lyate
//! use aqueous
//! component NH3, Na+, Cl-
//! add NH4Cl 5 mmol/L
//! ```
//!
//! After:
//!
//! ```lyate
//! use aqueous
//! component NH3, Na+, Cl-
//! add NH4Cl 5 mmol/L
//! add NaOH  2 mmol/L
//! ```

use super::listing;
use crate::problem::defect::DefectKind;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::text::span::Place;

rule!("component-unused", Warning, "component_unused.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for defect in context.defects() {
        let DefectKind::ComponentUnused { name } = &defect.kind else { continue };
        let message = format!("`{name}` is given no amount, and nothing speaks of it");
        let mut finding = RULE.at(defect.at, message).with_help(format!(
            "write `total {name} = …`, `add` a reagent that holds it, or take it off the list"
        ));
        if let Some(edit) = listing::remove(context, defect.at) {
            finding = finding.with_edits(format!("take `{name}` off the list"), false, vec![edit]);
        }
        found.push(finding);
    }
}
