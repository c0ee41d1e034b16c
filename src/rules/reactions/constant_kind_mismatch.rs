//! The word for a constant does not suit its reaction.
//!
//! A `pKa` belongs to a reaction that gives off a proton, a `pKsp` to a solid that
//! dissolves, a `log beta` to a complex that forms. On a reaction written the other way
//! round the sign of the logarithm is wrong, and the constant is off by its square:
//! twenty orders of magnitude for a weak acid. Turn the reaction round, or write `pK` or
//! `log K`, which mean the reaction as it stands.
//!
//! Before:
//!
//! ```lyate
//! reaction NH3 + H+ <=> NH4+, pKa = 9.25, source "site table, row 2"
//! ```
//!
//! After:
//!
//! ```lyate
//! reaction NH4+ <=> NH3 + H+, pKa = 9.25, source "site table, row 2"
//! ```

use super::own;
use crate::problem::defect::DefectKind;
use crate::problem::reaction::Reaction;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::text::span::{Place, Span};
use crate::text::tree::{self, Member};

rule!("constant-kind-mismatch", Error, "constant_kind_mismatch.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for defect in context.defects() {
        let DefectKind::ConstantKindMismatch { kind, needs } = defect.kind else { continue };
        let at = defect.at;
        let general = if kind.starts_with('p') { "pK" } else { "log K" };
        let mut finding = RULE
            .at(at, format!("`{kind}` goes with {needs}, and this reaction has none there"))
            .with_help(format!(
                "turn the reaction round, or write `{general}`, which means the reaction as it stands"
            ));
        if let Some(turned) = turned(context, at)
            && let Some((_, reaction)) = own::reaction(context, at)
            && fits_when_turned(kind, reaction)
        {
            let (span, text) = turned;
            let place = Place { span, ..at };
            finding = finding.with_fix(format!("write `{text}`"), false, place, text);
        }
        found.push(finding.with_fix(format!("write `{general}`"), false, at, general));
    }
}

/// The equation with its sides exchanged, as they are written.
fn turned(context: &Context, at: Place) -> Option<(Span, String)> {
    let tree: &tree::Reaction = own::tree(context, at)?;
    let text = |side: &[Member]| -> Option<String> {
        let span = side.first()?.span.to(side.last()?.span);
        Some(context.text(Place { span, ..at }).to_owned())
    };
    Some((tree.equation, format!("{} <=> {}", text(&tree.right)?, text(&tree.left)?)))
}

fn fits_when_turned(kind: &str, reaction: &Reaction) -> bool {
    let side = |left: bool| {
        reaction.participants.iter().filter(move |p| (*p.coefficient.numer() < 0) == left)
    };
    match kind {
        "pKa" => side(true).any(|p| p.formula.is_proton()),
        "pKsp" => side(false).any(|p| p.formula.name.contains("(s")),
        _ => side(true).filter(|p| !p.formula.is_water() && !p.formula.is_proton()).count() == 1,
    }
}
