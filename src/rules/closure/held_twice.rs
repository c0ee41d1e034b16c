//! One quantity is held twice.
//!
//! Two held values of one quantity ask for two answers at once. pH, pOH and the activity of
//! H+ are one quantity in this sense: each fixes the others.
//!
//! Where two instruments disagree, a case for each shows what depends on it.
//!
//! Before:
//!
//! ```lyate
//! use aqueous
//! component NH3, Cl-
//! total NH3 = 10 mmol/L
//! total Cl- = 9.9 mmol/L
//! hold pH = 7.2
//! hold pH = 7.4
//! ```
//!
//! After:
//!
//! ```lyate
//! use aqueous
//! component NH3, Cl-
//! total NH3 = 10 mmol/L
//! total Cl- = 9.9 mmol/L
//! hold pH = 7.2
//!
//! case "by the hand-held meter"
//!     hold pH = 7.4
//! ```

use crate::problem::defect::DefectKind;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::text::span::Place;

rule!("held-twice", Error, "held_twice.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for defect in context.defects() {
        let DefectKind::HeldTwice { subject, other } = &defect.kind else { continue };
        let first = context.text(*other).trim_start_matches("hold").trim_start();
        let same = first.starts_with(subject.as_str());
        let message = if same {
            format!("`{subject}` is held twice")
        } else {
            format!("`{first}` is held already, and fixes `{subject}`")
        };
        let finding = RULE
            .at(defect.at, message)
            .with_related(*other, "the first time")
            .with_help("keep one of them, or move the other into a case");
        found.push(finding);
    }
}
