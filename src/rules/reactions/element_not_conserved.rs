//! A reaction gains or loses an element or a group.
//!
//! What stands on the left of a reaction must stand on the right as well, atom by atom
//! and group by group. Where it does not, a coefficient is wrong, or water, a proton or
//! a hydroxide is missing. The reaction is left out of the problem until it balances: a
//! mass balance built on it would create or destroy what was put in.
//!
//! Before:
//!
//! ```lyate
//! reaction CO2 <=> HCO3- + H+, pKa = 6.35, source "site table, row 3"
//! ```
//!
//! After:
//!
//! ```lyate
//! reaction CO2 + H2O <=> HCO3- + H+, pKa = 6.35, source "site table, row 3"
//! ```

use super::closing;
use crate::problem::defect::{Conserved, DefectKind};
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::rules::words::list;
use crate::text::span::Place;

rule!("element-not-conserved", Error, "element_not_conserved.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    let mut reactions: Vec<(Place, Vec<String>)> = Vec::new();
    for defect in context.defects() {
        let DefectKind::NotConserved {
            what: Conserved::Element(symbol) | Conserved::Group(symbol),
            left,
            right,
        } = &defect.kind
        else {
            continue;
        };
        let words = format!("{left} {symbol} on the left and {right} on the right");
        match reactions.last_mut().filter(|(at, _)| *at == defect.at) {
            Some((_, all)) => all.push(words),
            None => reactions.push((defect.at, vec![words])),
        }
    }
    for (at, all) in reactions {
        let finding = RULE.at(at, format!("there are {}", list(&all, "and")));
        found.push(closing::offer(finding, context));
    }
}
