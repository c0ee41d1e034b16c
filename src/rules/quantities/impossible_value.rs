//! A value cannot be, whatever the water.
//!
//! There is no temperature below absolute zero, no negative amount of a reagent, no
//! pressure or equilibrium constant of zero. Such a value is a slip: a lost digit, a
//! sign, degrees that were meant as kelvin, or a log K given as K.
//!
//! Before:
//!
//! ```lyate
//! reaction NH4+ <=> NH3 + H+, K = -9.25, source "site table, row 2"
//! ```
//!
//! After:
//!
//! ```lyate
//! reaction NH4+ <=> NH3 + H+, log K = -9.25, source "site table, row 2"
//! ```

use crate::problem::defect::DefectKind;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::text::span::{Place, Spanned};
use crate::text::tree::{ConstantKind, Statement};

rule!("impossible-value", Error, "impossible_value.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for defect in context.defects() {
        let DefectKind::ImpossibleValue { why } = defect.kind else { continue };
        let text = context.text(defect.at);
        let message = if (1..=24).contains(&text.len()) && !text.contains('\n') {
            format!("`{text}` cannot be: {why}")
        } else {
            format!("this cannot be: {why}")
        };
        let finding = RULE.at(defect.at, message);
        found.push(match constant(context, defect.at) {
            Some(kind) if kind.value == ConstantKind::K => {
                let place = Place { span: kind.span, ..defect.at };
                finding.with_fix("write `log K`", false, place, "log K")
            }
            _ => finding,
        });
    }
}

/// The kind of the constant whose value stands at a place.
fn constant(context: &Context, at: Place) -> Option<Spanned<ConstantKind>> {
    let Statement::Reaction(reaction) = context.statement(at)?.statement() else { return None };
    let constant = reaction.constants.iter().find(|constant| {
        constant.span.start <= at.span.start && at.span.end <= constant.span.end
    })?;
    Some(constant.kind.clone())
}
