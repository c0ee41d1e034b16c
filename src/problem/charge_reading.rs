//! `Ca2+` where `Ca^2+` was surely meant: a digit before a sign reads as a count, which
//! nobody means where no balanced reaction knows the species so read.

use std::collections::HashSet;
use std::sync::Arc;

use super::defect::DefectKind;
use super::effective::Written;
use super::reaction::Reaction;
use super::resolve::Resolver;
use crate::chemistry::formula::Formula;
use crate::text::tree::{Name, Statement};

/// The names of all species of balanced reactions.
pub fn balanced(reactions: &[Arc<Reaction>]) -> HashSet<String> {
    reactions
        .iter()
        .filter(|reaction| reaction.conserved)
        .flat_map(|reaction| &reaction.participants)
        .map(|participant| participant.formula.name.clone())
        .collect()
}

/// Whether a statement brings names into scope, rather than speaking of them.
pub fn defines(statement: &Statement) -> bool {
    matches!(
        statement,
        Statement::Group { .. } | Statement::Component { .. } | Statement::Reaction(_)
    )
}

/// Reports each name of a statement that was surely meant with a caret.
pub fn look(resolver: &mut Resolver, written: &Written, balanced: &HashSet<String>) {
    let mut candidates: Vec<&Name> = Vec::new();
    written.statement().each_formula(&mut |name| {
        if digit_before_sign(name) {
            candidates.push(name);
        }
    });
    for name in candidates {
        if let Some(suggestion) = with_caret(resolver, name, balanced) {
            let kind = DefectKind::AmbiguousCharge { text: name.value.clone(), suggestion };
            resolver.report(written.place(name.span), kind);
        }
    }
}

/// Looked at first, so that most names cost nothing.
fn digit_before_sign(text: &str) -> bool {
    let sign = text.find(['+', '-', '−', '–']);
    sign.is_some_and(|at| text[..at].ends_with(|c: char| c.is_ascii_digit()))
}

fn with_caret(resolver: &mut Resolver, text: &str, balanced: &HashSet<String>) -> Option<String> {
    let plain = resolver.quiet_formula(text)?;
    if balanced.contains(&plain.name) {
        return None;
    }
    let caret = Formula::caret_reading(text, &resolver.groups)?;
    (balanced.contains(&caret.name) || caret.is_common_monatomic_ion()).then_some(caret.name)
}
