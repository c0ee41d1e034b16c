//! From a place back to the reaction that is written there.

use std::sync::Arc;

use crate::problem::reaction::Reaction;
use crate::rules::context::Context;
use crate::text::span::Place;
use crate::text::tree::{self, Statement};

/// The file's own reaction in the statement of a place, with its index in the scope.
pub fn reaction<'a>(context: &Context<'a>, at: Place) -> Option<(usize, &'a Arc<Reaction>)> {
    context.problem.scope.reactions.iter().enumerate().find(|(_, reaction)| {
        reaction
            .origin
            .own()
            .is_some_and(|own| (own.section, own.statement) == (at.section, at.statement))
    })
}

/// The reaction as it was written there.
pub fn tree<'a>(context: &Context<'a>, at: Place) -> Option<&'a tree::Reaction> {
    match &context.statement(at)?.parsed.statement {
        Statement::Reaction(tree) => Some(tree),
        _ => None,
    }
}
