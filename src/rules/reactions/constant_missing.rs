//! A reaction has no constant.
//!
//! Without its constant a reaction says what may turn into what, and nothing of how
//! far. It is left out of the problem, and with it the species that only it brings.
//!
//! Before:
//!
//! ```lyate
//! reaction NH4+ <=> NH3 + H+, source "site table, row 2"
//! ```
//!
//! After:
//!
//! ```lyate
//! reaction NH4+ <=> NH3 + H+, pKa = 9.25, source "site table, row 2"
//! ```

use super::own;
use crate::chemistry::formula::Phase;
use crate::problem::defect::DefectKind;
use crate::problem::reaction::Reaction;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::text::span::Place;

rule!("constant-missing", Error, "constant_missing.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for defect in context.defects() {
        if defect.kind == DefectKind::NoConstant {
            let usual = own::reaction(context, defect.at).map_or("log K", |(_, r)| usual(r));
            found.push(RULE.at(defect.at, "the reaction has no constant").with_help(format!(
                "add one after a comma: {usual} = …, or another of pKa, pKsp, log beta, pK, \
                 log K, K and log K(T)"
            )));
        }
    }
}

/// The constant that such a reaction usually has.
fn usual(reaction: &Reaction) -> &'static str {
    let mut left = reaction.participants.iter().filter(|p| *p.coefficient.numer() < 0);
    let mut right = reaction.participants.iter().filter(|p| *p.coefficient.numer() > 0);
    if left.any(|p| matches!(p.formula.phase, Phase::Solid(_))) {
        "pKsp"
    } else if right.any(|p| p.formula.is_proton()) {
        "pKa"
    } else {
        "log K"
    }
}
