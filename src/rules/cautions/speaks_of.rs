//! What a file says of itself: the words of its title and of its case.

use crate::rules::context::Context;
use crate::text::span::{Part, Place};
use crate::text::tree::Statement;

/// Where the title or the title of the case has one of some words.
pub fn place(context: &Context, words: &[&str]) -> Option<Place> {
    context.statements.iter().rev().find_map(|written| {
        let (Statement::Problem { title } | Statement::Case { title }) = written.statement() else {
            return None;
        };
        let text = title.value.to_lowercase();
        let is_there = words.iter().any(|word| {
            text.split(|c: char| !c.is_alphanumeric()).any(|part| part.starts_with(word))
        });
        is_there.then(|| written.place(title.span))
    })
}

/// Where a caution about a component belongs: its total, or the reagent that brings it, or
/// the component itself.
pub fn component(context: &Context, component: usize) -> Option<Place> {
    let problem = context.problem;
    problem.amounts[component].at.or(problem.scope.components[component].at)
}

/// Whether a caution at this place is the base's, so that a case has no need to repeat it
/// unless the case changes something about it.
pub fn is_inherited(context: &Context, at: Place) -> bool {
    let is_case = context.statements.iter().any(|written| written.part == Part::Case);
    is_case && at.section == Part::Base
}
