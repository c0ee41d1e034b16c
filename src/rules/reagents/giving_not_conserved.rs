//! What a reagent is said to give does not add up to it.
//!
//! After `giving` stand the species into which one unit of the reagent falls. Together they
//! hold exactly its elements and its charge; water may be among them.
//!
//! Where they do not, matter is made or lost at each dose, and every balance inherits it.
//!
//! Before:
//!
//! ```lyate
//! use aqueous
//! component NH3, SO4^2-
//! add (NH4)2SO4 2 mmol/L, giving NH4+ + SO4^2-
//! ```
//!
//! After:
//!
//! ```lyate
//! use aqueous
//! component NH3, SO4^2-
//! add (NH4)2SO4 2 mmol/L, giving 2 NH4+ + SO4^2-
//! ```

use crate::problem::defect::{Conserved, DefectKind};
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::rules::words::{list, signed};
use crate::text::span::Place;
use crate::text::tree::Statement;

rule!("giving-not-conserved", Error, "giving_not_conserved.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    // One finding for each `giving`, with all that differs.
    let mut lists: Vec<(Place, Vec<String>)> = Vec::new();
    for defect in context.defects() {
        let DefectKind::GivingNotConserved { what, left, right } = &defect.kind else { continue };
        let words = match what {
            Conserved::Element(what) | Conserved::Group(what) => {
                format!("{right} {what} instead of {left}")
            }
            Conserved::Charge => format!("a charge of {} instead of 0", signed(*right)),
        };
        match lists.iter_mut().find(|(at, _)| *at == defect.at) {
            Some((_, list)) => list.push(words),
            None => lists.push((defect.at, vec![words])),
        }
    }
    for (at, differences) in lists {
        let reagent = match context.statement(at).map(|written| written.statement()) {
            Some(Statement::Add { reagent, .. }) => reagent.value.as_str(),
            _ => "the reagent",
        };
        let message = format!("for one `{reagent}` this adds up to {}", list(&differences, "and"));
        found.push(RULE.at(at, message));
    }
}
