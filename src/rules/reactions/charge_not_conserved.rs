//! A reaction gains or loses charge.
//!
//! The charges on the left and on the right of a reaction must add up to the same number.
//! Where they do not, a species is written with the wrong charge, or a proton, hydroxide
//! or electron is missing. Every balance that the reaction enters would inherit the error:
//! at the plant it shows as a dose that is off by whole equivalents.
//!
//! Before:
//!
//! ```lyate
//! reaction HCO3- <=> CO3- + H+, pKa = 10.33, source "site table, row 4"
//! ```
//!
//! After:
//!
//! ```lyate
//! reaction HCO3- <=> CO3^2- + H+, pKa = 10.33, source "site table, row 4"
//! ```

use super::closing;
use crate::problem::defect::{Conserved, DefectKind};
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::rules::words::signed;
use crate::text::span::Place;

rule!("charge-not-conserved", Error, "charge_not_conserved.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for defect in context.defects() {
        if let DefectKind::NotConserved { what: Conserved::Charge, left, right } = &defect.kind {
            let message = format!(
                "the charge is {} on the left and {} on the right",
                signed(*left),
                signed(*right),
            );
            found.push(closing::offer(RULE.at(defect.at, message), context));
        }
    }
}
