//! A share is asked of a species that holds no component.
//!
//! `fraction X` is the part of its component's total that is present as X. `H+` and `OH-` are
//! made of water and protons, of which there is no total, so they have no share in anything.
//!
//! Ask for the concentration instead, or for the share of the acid or base that was meant.
//!
//! Before:
//!
//! ```lyate
//! use aqueous
//! component NH3, Cl-
//! add NH4Cl 5 mmol/L
//! expect fraction OH- < 1 %
//! ```
//!
//! After:
//!
//! ```lyate
//! use aqueous
//! component NH3, Cl-
//! add NH4Cl 5 mmol/L
//! expect fraction NH3 < 1 %
//! ```

use crate::problem::defect::DefectKind;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::text::span::Place;

rule!("share-of-nothing", Error, "share_of_nothing.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for defect in context.defects() {
        let DefectKind::HasNoShare { name } = &defect.kind else { continue };
        let message = format!("`{name}` holds no component, so it is no share of one");
        let help = format!("for how much of it there is, write `[{name}]`");
        found.push(RULE.at(defect.at, message).with_help(help));
    }
}
