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

use num_rational::Rational64;
use num_traits::Zero;

use super::closing;
use crate::problem::defect::{Conserved, DefectKind};
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::rules::words::list;
use crate::text::span::Place;

rule!("element-not-conserved", Error, "element_not_conserved.rs", find);

/// A reaction, and of each element how many stand left and right.
type Lost<'a> = (Place, Vec<(&'a str, Rational64, Rational64)>);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    let mut reactions: Vec<Lost> = Vec::new();
    for defect in context.defects() {
        let DefectKind::NotConserved {
            what: Conserved::Element(symbol) | Conserved::Group(symbol),
            left,
            right,
        } = &defect.kind
        else {
            continue;
        };
        let lost = (symbol.as_str(), *left, *right);
        match reactions.last_mut().filter(|(at, _)| *at == defect.at) {
            Some((_, all)) => all.push(lost),
            None => reactions.push((defect.at, vec![lost])),
        }
    }
    for (at, all) in reactions {
        let message = format!(
            "the left has {}, the right {}",
            counts(all.iter().map(|&(symbol, left, _)| (left, symbol))),
            counts(all.iter().map(|&(symbol, _, right)| (right, symbol))),
        );
        found.push(closing::offer(RULE.at(at, message), context));
    }
}

/// `no H and 2 O`
fn counts<'a>(atoms: impl Iterator<Item = (Rational64, &'a str)>) -> String {
    let words: Vec<String> = atoms
        .map(|(count, symbol)| match count.is_zero() {
            true => format!("no {symbol}"),
            false => format!("{count} {symbol}"),
        })
        .collect();
    list(&words, "and")
}
