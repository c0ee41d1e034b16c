//! A total or balance is asked of a species that is no component.
//!
//! `total` and `balance` speak of a component: the building block with all the
//! species made of it. `NH4+` where the component is `NH3` is one form among others, and its
//! amount is an outcome of the pH.
//!
//! An analysis that reports ammonium nitrogen means both forms together, so the total
//! belongs to the component. Taken for the ion alone it would be out by the whole share of
//! the other form.
//!
//! Before:
//!
//! ```lyate
//! use aqueous
//! component NH3, Cl-
//! total NH4+ = 5 mmol/L
//! total Cl-  = 5 mmol/L
//! ```
//!
//! After:
//!
//! ```lyate
//! use aqueous
//! component NH3, Cl-
//! total NH3 = 5 mmol/L
//! total Cl- = 5 mmol/L
//! ```

use super::listing;
use crate::problem::defect::DefectKind;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::rules::words::names;
use crate::text::span::Place;

rule!("not-a-component", Error, "not_a_component.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for defect in context.defects() {
        let DefectKind::NotAComponent { name, components } = &defect.kind else { continue };
        let scope = &context.problem.scope;
        let belongs = scope.find(name).is_some_and(|s| scope.belongs(s));
        found.push(match components.as_slice() {
            [] if belongs => {
                let message = format!("`{name}` is made of water alone and has no total of its own");
                RULE.at(defect.at, message)
            }
            [] => {
                let message = format!("`{name}` is not a component of this problem");
                let finding = RULE.at(defect.at, message);
                match listing::add(context, name) {
                    Some(edit) => {
                        let title = format!("list `{name}` as a component");
                        finding.with_edits(title, false, vec![edit])
                    }
                    None => finding.with_help(format!("write `component {name}`")),
                }
            }
            [one] => {
                let message = format!("`{name}` is not a component; it is a form of `{one}`");
                let title = format!("write `{one}`");
                RULE.at(defect.at, message).with_fix(title, false, defect.at, one.clone())
            }
            several => {
                let made_of = names(several, "and");
                RULE.at(defect.at, format!("`{name}` is not a component; it is made of {made_of}"))
            }
        });
    }
}
