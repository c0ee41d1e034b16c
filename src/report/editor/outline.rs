//! The outline: the base's statements, and each case with its own.

use std::ops::Range;

use crate::problem::effective::{balance_key, subject_key};
use crate::report::inline::{Symbol, SymbolKind};
use crate::rules::check::Checked;
use crate::text::span::Span;
use crate::text::tree::{Placed, Section, Statement, Use};

/// The document's outline, in the order of the text.
pub fn outline(checked: &Checked) -> Vec<Symbol> {
    let sections = &checked.document.sections;
    let mut symbols: Vec<Symbol> = sections[0].statements.iter().flat_map(entries).collect();
    symbols.extend(sections[1..].iter().filter_map(case));
    symbols.sort_by_key(|symbol| symbol.range.start);
    symbols
}

fn case(section: &Section) -> Option<Symbol> {
    let (header, rest) = section.statements.split_first()?;
    let mut symbol = entries(header).into_iter().next()?;
    symbol.children = rest.iter().flat_map(entries).collect();
    if let Some(last) = symbol.children.last() {
        symbol.range.end = last.range.end;
    }
    Some(symbol)
}

/// A statement's entries: one, or one for each component that it lists.
fn entries(placed: &Placed) -> Vec<Symbol> {
    let whole = placed.start..placed.start + placed.parsed.text.trim_end().len();
    let at = |span: Span| placed.start + span.start as usize..placed.start + span.end as usize;
    let text = |range: Range<usize>| {
        let inside = range.start - placed.start..range.end - placed.start;
        placed.parsed.text.get(inside).unwrap_or_default().to_owned()
    };
    let one = |name: String, detail: Option<String>, kind: SymbolKind, selection: Range<usize>| {
        // An outline entry without a name is an error in some editors.
        let name = if name.is_empty() { "(unnamed)".to_owned() } else { name };
        vec![Symbol { name, detail, kind, range: whole.clone(), selection, children: Vec::new() }]
    };
    match &placed.parsed.statement {
        Statement::Problem { title } => {
            one(title.value.clone(), None, SymbolKind::Problem, at(title.span))
        }
        Statement::Case { title } => {
            one(title.value.clone(), None, SymbolKind::Case, at(title.span))
        }
        Statement::Use(Use::Set { name, .. }) => {
            one(name.value.clone(), None, SymbolKind::Import, at(name.span))
        }
        Statement::Use(Use::File { path }) => {
            one(path.value.clone(), None, SymbolKind::Import, at(path.span))
        }
        Statement::Temperature { value } => one(
            "temperature".into(),
            Some(text(at(value.span))),
            SymbolKind::Setting,
            at(value.span),
        ),
        Statement::Activity { model } => {
            one("activity".into(), Some(model.value.clone()), SymbolKind::Setting, at(model.span))
        }
        Statement::IonicStrength { value } => one(
            "ionic strength".into(),
            Some(text(at(value.span))),
            SymbolKind::Setting,
            at(value.span),
        ),
        Statement::Group { symbol, .. } => {
            one(symbol.value.clone(), None, SymbolKind::Group, at(symbol.span))
        }
        Statement::Component { items } => items
            .iter()
            .map(|item| Symbol {
                name: item.name.value.clone(),
                detail: item.title.as_ref().map(|title| title.value.clone()),
                kind: SymbolKind::Component,
                range: at(item.name.span),
                selection: at(item.name.span),
                children: Vec::new(),
            })
            .collect(),
        Statement::Reaction(reaction) => one(
            text(at(reaction.equation)),
            reaction.constants.first().map(|constant| text(at(constant.span))),
            SymbolKind::Reaction,
            at(reaction.equation),
        ),
        Statement::Total { component, value } => one(
            format!("total {}", component.value),
            Some(text(at(value.span))),
            SymbolKind::Amount,
            at(component.span),
        ),
        Statement::Add { reagent, amount, .. } => one(
            format!("add {}", reagent.value),
            Some(text(at(amount.span))),
            SymbolKind::Amount,
            at(reagent.span),
        ),
        Statement::Blend { parts } => {
            let first = parts.first().map_or(0..0, |part| at(part.span));
            let last = parts.last().map_or(first.end, |part| at(part.span).end);
            let all = first.start..last;
            one("blend".into(), Some(text(all.clone())), SymbolKind::Amount, all)
        }
        Statement::Hold { subject, value, .. } => one(
            format!("hold {}", subject_key(&subject.value)),
            Some(text(at(value.span))),
            SymbolKind::Hold,
            at(subject.span),
        ),
        Statement::Precipitate { solid } => {
            one(format!("precipitate {}", solid.value), None, SymbolKind::Hold, at(solid.span))
        }
        Statement::Saturate { solid } => {
            one(format!("saturate with {}", solid.value), None, SymbolKind::Hold, at(solid.span))
        }
        Statement::Balance { kind, .. } => one(
            format!("balance {}", balance_key(&kind.value)),
            None,
            SymbolKind::Balance,
            at(kind.span),
        ),
        Statement::Expect { subject, .. } => one(
            format!("expect {}", subject_key(&subject.value)),
            None,
            SymbolKind::Expectation,
            at(subject.span),
        ),
        Statement::Curve { over, .. } => {
            one("curve".into(), Some(text(at(over.span))), SymbolKind::Curve, at(over.span))
        }
        Statement::Without(_) | Statement::Broken => Vec::new(),
    }
}
