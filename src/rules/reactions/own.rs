//! From a place back to the reaction, or the temperature, that is written there.

use std::sync::Arc;

use crate::problem::reaction::Reaction;
use crate::rules::context::Context;
use crate::rules::figures::celsius;
use crate::text::span::Place;
use crate::text::tree::{self, Statement};

/// The file's own reaction in the statement of a place, with its index in the scope.
pub fn reaction<'a>(context: &Context<'a>, at: Place) -> Option<(usize, &'a Arc<Reaction>)> {
    // Own reactions come first, in the order of the text.
    let reactions = &context.problem.scope.reactions;
    let statement = |place: Place| (place.section, place.statement);
    let index = reactions.partition_point(|reaction| {
        reaction.origin.own().is_some_and(|own| statement(own) < statement(at))
    });
    let found = reactions.get(index)?;
    let own = found.origin.own()?;
    (statement(own) == statement(at)).then_some((index, found))
}

/// The reaction as it was written there.
pub fn tree<'a>(context: &Context<'a>, at: Place) -> Option<&'a tree::Reaction> {
    match &context.statement(at)?.parsed.statement {
        Statement::Reaction(tree) => Some(tree),
        _ => None,
    }
}

/// What goes to a temperature that a constant is not for, at the place where it is told.
pub fn where_to(context: &Context, at: Place, wanted: f64) -> String {
    let curve = context.statement(at).map(|written| written.statement());
    let what = match curve {
        Some(Statement::Curve { .. }) => "the curve goes to",
        _ => "the problem is at",
    };
    format!("{what} {}", celsius(wanted))
}
