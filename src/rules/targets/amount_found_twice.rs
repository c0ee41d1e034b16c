//! Two targets are to be met by one amount.
//!
//! Each target needs an unknown of its own: one amount of sodium hydroxide cannot be chosen for
//! a pH and again for an alkalinity. Give one of the targets another reagent, or turn it into
//! an `expect`, which says whether it is met as well.
//!
//! Before:
//!
//! ```lyate
//! use aqueous
//! component CO3^2-, Na+
//! add CO2 1 mmol/L
//! hold pH = 8 by NaOH
//! hold alkalinity = 2 meq/L by NaOH
//! ```
//!
//! After:
//!
//! ```lyate
//! use aqueous
//! component CO3^2-, Na+
//! hold pH = 8 by CO2
//! hold alkalinity = 2 meq/L by NaOH
//! ```

use crate::problem::defect::DefectKind;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::text::span::Place;

rule!("amount-found-twice", Error, "amount_found_twice.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for defect in context.defects() {
        let DefectKind::FoundTwice { name, other } = &defect.kind else { continue };
        let message = format!("`{name}` is to be found for another target already");
        let finding = RULE
            .at(defect.at, message)
            .with_related(*other, "found for this one")
            .with_help("name another reagent here, or write `expect` for `hold`");
        found.push(finding);
    }
}
