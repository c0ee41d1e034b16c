//! The same equilibrium is written twice.
//!
//! Two reactions between the same species are one equilibrium, whichever way round they
//! stand. With two constants for it nobody can tell which is in force; the first one is
//! taken. In a `case` a reaction replaces the base's, which is no repetition.
//!
//! Before:
//!
//! ```lyate
//! reaction NH4+ <=> NH3 + H+, pKa = 9.25, source "plant constants, sheet 3"
//! reaction NH3 + H+ <=> NH4+, log K = 9.24, source "site table, row 2"
//! ```
//!
//! After:
//!
//! ```lyate
//! reaction NH4+ <=> NH3 + H+, pKa = 9.25, source "plant constants, sheet 3"
//! ```

use crate::problem::defect::DefectKind;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::text::span::Place;

rule!("reaction-repeated", Error, "reaction_repeated.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for defect in context.defects() {
        if let DefectKind::ReactionRepeated { other } = defect.kind {
            let message = format!(
                "this equilibrium is written above already, as `{}`",
                context.text(other)
            );
            found.push(
                RULE.at(defect.at, message)
                    .with_help("keep one of the two; the first is in force")
                    .with_related(other, "the first one"),
            );
        }
    }
}
