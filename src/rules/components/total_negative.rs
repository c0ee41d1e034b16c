//! A component's total is below zero.
//!
//! There cannot be less than none of a component. Written out, it is a slip of the sign.
//! Brought by reagents, it says that they take away more of a component than they bring,
//! which a component of another form would describe better.
//!
//! Only the electron's total may have either sign: it counts what was oxidised or reduced.
//!
//! Before:
//!
//! ```lyate
//! use aqueous
//! component NH3, Cl-
//! total NH3 = -5 mmol/L
//! total Cl- = 0 mmol/L
//! ```
//!
//! After:
//!
//! ```lyate
//! use aqueous
//! component NH3, Cl-
//! total NH3 = 5 mmol/L
//! total Cl- = 0 mmol/L
//! ```

use crate::problem::defect::DefectKind;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::figures::concentration;
use crate::rules::finding::Finding;
use crate::text::span::Place;
use crate::text::tree::Statement;

rule!("total-negative", Error, "total_negative.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for defect in context.defects() {
        let DefectKind::NegativeTotal { name, value } = &defect.kind else { continue };
        let value = concentration(*value, context.problem.scale);
        let written = context.statement(defect.at).map(|written| written.statement());
        found.push(match written {
            Some(Statement::Total { .. } | Statement::Curve { .. }) => {
                RULE.at(defect.at, format!("the total of `{name}` is {value}, below zero"))
            }
            _ => RULE
                .at(defect.at, format!("the reagents add up to {value} of `{name}`, below zero"))
                .with_help("list another form of this component, such as the one put in"),
        });
    }
}
