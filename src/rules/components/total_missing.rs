//! Nothing says how much of a component there is.
//!
//! Each component takes its amount from a `total`, from reagents, or from a held value. Here
//! other statements speak of the component's species, yet nothing gives its amount, so there
//! is one equation too few.
//!
//! A component that is truly absent has `total X = 0 mmol/L`. To leave it open in the base and
//! give it in each case is fine: then nothing is found.
//!
//! Before:
//!
//! ```lyate
//! use aqueous
//! component NH3, CO3^2-, Cl-
//! add NH4Cl 5 mmol/L
//! expect [HCO3-] < 2 mmol/L
//! ```
//!
//! After:
//!
//! ```lyate
//! use aqueous
//! component NH3, CO3^2-, Cl-
//! add NH4Cl 5 mmol/L
//! total CO3^2- = 1.5 mmol/L
//! expect [HCO3-] < 2 mmol/L
//! ```

use crate::problem::defect::DefectKind;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::text::span::Place;

rule!("total-missing", Error, "total_missing.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for defect in context.defects() {
        let DefectKind::TotalMissing { name } = &defect.kind else { continue };
        let message = format!("nothing says how much `{name}` there is");
        found.push(RULE.at(defect.at, message).with_help(format!(
            "write `total {name} = …`, `add` a reagent that holds it, or `hold` one of its species"
        )));
    }
}
