//! A formula cannot be read.
//!
//! A formula is written in plain text: `(NH4)2SO4`, `Fe(CN)6^3-`, `CaSO4·2H2O`, with its
//! phase where it is not dissolved: `CO2(g)`, `CaCO3(s)`, `CaCO3(s, calcite)`. What
//! cannot be read has no composition, so nothing that it stands in can be balanced.
//!
//! Before:
//!
//! ```lyate
//! component Ca^2+, CO3^2-
//! expect saturation index CaCO3(calcite) < 0
//! ```
//!
//! After:
//!
//! ```lyate
//! component Ca^2+, CO3^2-
//! expect saturation index CaCO3(s, calcite) < 0
//! ```

use crate::chemistry::formula::FormulaProblemKind as Kind;
use crate::problem::defect::DefectKind;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::text::span::Place;

rule!("unreadable-formula", Error, "unreadable_formula.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for defect in context.defects() {
        let DefectKind::Formula { text, problem } = &defect.kind else { continue };
        let at = defect.at;
        let finding = match problem {
            Kind::EmptyParentheses => {
                RULE.at(at, "the parentheses hold nothing").with_help("take them out")
            }
            Kind::MissingChargeSign => {
                let message = format!("the charge of `{text}` has no sign");
                signs(RULE.at(at, message), context, text)
            }
            Kind::UnknownPhase { phase, suggestion } => {
                phases(RULE.at(at, format!("`({phase})` is no phase")), context, text, suggestion)
            }
            Kind::UnexpectedCharacter { found } => RULE
                .at(at, format!("`{found}` has no place in the formula `{text}`"))
                .with_help("a formula is written as NH4+, SO4^2-, (NH4)2SO4 or CaCO3(s)"),
            Kind::ZeroCount => {
                RULE.at(at, "a count of zero has no meaning").with_help("leave the element out")
            }
            Kind::NumberTooLarge => RULE
                .at(at, "the count or charge is too large to be meant")
                .with_help("a count is at most a million, a charge at most a thousand"),
            Kind::Empty => {
                RULE.at(at, format!("`{text}` names no atom")).with_help("write a formula: NH4+")
            }
            // These have rules of their own.
            Kind::UnknownElement { .. }
            | Kind::UnbalancedParenthesis
            | Kind::AmbiguousCharge { .. }
            | Kind::NestingTooDeep { .. } => continue,
        };
        found.push(finding);
    }
}

/// Offers both signs, or the one that a species in scope has.
fn signs(mut finding: Finding<Place>, context: &Context, text: &str) -> Finding<Place> {
    let Some(whole) = context.whole_name(finding.at, text) else { return finding };
    let charge = context.text(finding.at);
    let mut both: Vec<String> =
        ["-", "+"].iter().map(|sign| text.replacen(charge, &format!("{charge}{sign}"), 1)).collect();
    if both.iter().any(|name| context.problem.scope.find(name).is_some()) {
        both.retain(|name| context.problem.scope.find(name).is_some());
    }
    for name in both {
        finding = finding.with_fix(format!("write `{name}`"), false, whole, name);
    }
    finding
}

fn phases(
    finding: Finding<Place>,
    context: &Context,
    text: &str,
    suggestion: &Option<String>,
) -> Finding<Place> {
    let finding =
        finding.with_help("a phase is (aq), (s), (g) or (l), a solid form (s, calcite)");
    match (suggestion, context.whole_name(finding.at, text)) {
        (Some(suggestion), Some(whole)) => {
            finding.with_fix(format!("write `{suggestion}`"), false, whole, suggestion.as_str())
        }
        _ => finding,
    }
}
