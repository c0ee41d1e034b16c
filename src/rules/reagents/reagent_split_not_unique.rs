//! A reagent falls into the components in more than one way.
//!
//! A reagent is split by elements and charge into what it brings. Here several sets of
//! species, each as small as the others, make the same substance, mostly because an element
//! is there in several states of oxidation. The choice decides what reacts, so it is not
//! guessed: `giving` says it.
//!
//! It is the difference between a dose that oxidises and one that does not.
//!
//! Before:
//!
//! ```lyate
//! use aqueous
//! component NH3, NO3-, e-
//! reaction HNO2 <=> H+ + NO2-, pKa = 3.15, source "site table, row 11"
//! reaction NO3- + 2 H+ + 2 e- <=> NO2- + H2O, log K = 28.3, source "site table, row 12"
//! add NH4NO2 1 mmol/L
//! ```
//!
//! After:
//!
//! ```lyate
//! use aqueous
//! component NH3, NO3-, e-
//! reaction HNO2 <=> H+ + NO2-, pKa = 3.15, source "site table, row 11"
//! reaction NO3- + 2 H+ + 2 e- <=> NO2- + H2O, log K = 28.3, source "site table, row 12"
//! add NH4NO2 1 mmol/L, giving NH4+ + NO2-
//! ```

use crate::problem::defect::DefectKind;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::text::span::Place;

rule!("reagent-split-not-unique", Error, "reagent_split_not_unique.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for defect in context.defects() {
        let DefectKind::ReagentNotUnique { name } = &defect.kind else { continue };
        let message = format!("`{name}` can be made of the components in more than one way");
        let help = format!("say what it falls into: `add {name} …, giving …`");
        found.push(RULE.at(defect.at, message).with_help(help));
    }
}
