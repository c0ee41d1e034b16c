//! Edits to the list of components: one name more, or one less.

use crate::problem::effective::Written;
use crate::rules::context::Context;
use crate::text::span::{Place, Span};
use crate::text::tree::{ComponentItem, Statement};

/// An edit that lists a component more, after the last one listed; none where the file
/// lists none yet.
pub fn add(context: &Context, name: &str) -> Option<(Place, String)> {
    context.statements.iter().rev().find_map(|written| match written.statement() {
        Statement::Component { items } => {
            let end = span(items.last()?).end;
            Some((written.place(Span { start: end, end }), format!(", {name}")))
        }
        _ => None,
    })
}

/// An edit that takes the component named at this place off its list; none where it stands
/// there alone.
pub fn remove(context: &Context, at: Place) -> Option<(Place, String)> {
    let written: &Written = context.statement(at)?;
    let Statement::Component { items } = written.statement() else { return None };
    let index = items.iter().position(|item| item.name.span == at.span)?;
    let own = span(&items[index]);
    let cut = match (index.checked_sub(1).map(|before| &items[before]), items.get(index + 1)) {
        (Some(before), _) => Span { start: span(before).end, end: own.end },
        (None, Some(after)) => Span { start: own.start, end: span(after).start },
        (None, None) => return None,
    };
    Some((written.place(cut), String::new()))
}

/// The name and its title.
fn span(item: &ComponentItem) -> Span {
    item.title.as_ref().map_or(item.name.span, |title| item.name.span.to(title.span))
}
