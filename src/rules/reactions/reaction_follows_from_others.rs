//! A reaction follows from the others.
//!
//! `H2CO3 <=> CO3^2- + 2 H+` is the sum of the two single steps, so its constant is the
//! product of theirs. Where it agrees, the reaction adds nothing. Where it disagrees, the
//! problem contradicts itself: there are two answers, and which one comes out would
//! depend on the order of the lines.
//!
//! Before:
//!
//! ```lyate
//! component CO3^2-
//! reaction HCO3- <=> CO3^2- + H+, pKa = 10.33, source "site table, row 4"
//! reaction H2CO3* <=> HCO3- + H+, pKa = 6.35, source "site table, row 3"
//! reaction H2CO3* <=> CO3^2- + 2 H+, pK = 16.4, source "site table, row 5"
//! ```
//!
//! After:
//!
//! ```lyate
//! component CO3^2-
//! reaction HCO3- <=> CO3^2- + H+, pKa = 10.33, source "site table, row 4"
//! reaction H2CO3* <=> HCO3- + H+, pKa = 6.35, source "site table, row 3"
//! ```

use super::own;
use crate::problem::defect::DefectKind;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::{Finding, Severity};
use crate::rules::words::names;
use crate::text::span::Place;

rule!("reaction-follows-from-others", Error, "reaction_follows_from_others.rs", find);

/// Closer than this in log K, they agree.
const SAME: f64 = 0.02;

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for defect in context.defects() {
        let DefectKind::Follows { by } = defect.kind else { continue };
        let scope = &context.problem.scope;
        let Some((index, _)) = own::reaction(context, defect.at) else { continue };
        let others: Vec<_> = scope
            .belonging
            .cycles
            .iter()
            .find(|(_, combination)| combination.iter().any(|&(r, _)| r == index))
            .map(|(_, combination)| combination.iter().map(|&(r, _)| r))
            .into_iter()
            .flatten()
            .filter(|&r| r != index)
            .map(|r| &scope.reactions[r])
            .collect();
        let equations: Vec<&str> = others.iter().map(|other| other.equation.as_str()).collect();
        let from = if equations.is_empty() { "others".into() } else { names(&equations, "and") };
        let mut finding = if by.abs() > SAME {
            let message = format!(
                "this follows from {from}, and its log K is {:.2} away from theirs",
                by.abs()
            );
            RULE.at(defect.at, message).with_help("take out the one that is not meant")
        } else {
            let finding = RULE
                .at(defect.at, format!("this follows from {from} and adds nothing"))
                .with_help("take one of them out");
            Finding { severity: Severity::Warning, ..finding }
        };
        for other in others {
            if let Some(at) = other.origin.own() {
                finding = finding.with_related(at, "one of them");
            }
        }
        found.push(finding);
    }
}
