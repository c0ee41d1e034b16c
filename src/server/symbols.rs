//! The document's outline.

use tower_lsp::lsp_types::{
    self as lsp, DocumentSymbol, DocumentSymbolResponse, SymbolInformation,
};

use super::convert::Positions;
use super::generation::Checked;
use super::settings::Settings;
use crate::report::inline::{Symbol, SymbolKind};

/// Entries below this depth are left out; a file has two levels.
const DEEPEST: usize = 8;

pub fn symbols(checked: &Checked, settings: &Settings) -> DocumentSymbolResponse {
    let positions = checked.positions();
    let symbols = checked.view.symbols();
    if settings.nested_symbols {
        DocumentSymbolResponse::Nested(nested(symbols, &positions, 0))
    } else {
        let mut flat_list = Vec::new();
        flat(symbols, None, checked, &positions, 0, &mut flat_list);
        DocumentSymbolResponse::Flat(flat_list)
    }
}

fn nested(symbols: Vec<Symbol>, positions: &Positions<'_>, depth: usize) -> Vec<DocumentSymbol> {
    let symbols = symbols.into_iter().map(|symbol| {
        // Editors refuse a whole outline over one selection that leaves its range.
        let start = symbol.selection.start.clamp(symbol.range.start, symbol.range.end);
        let end = symbol.selection.end.clamp(start, symbol.range.end);
        let children = !symbol.children.is_empty() && depth < DEEPEST;
        #[allow(deprecated, reason = "the field has to be named to build the struct")]
        DocumentSymbol {
            name: name(symbol.name),
            detail: symbol.detail,
            kind: kind(symbol.kind),
            tags: None,
            deprecated: None,
            range: positions.range(&symbol.range),
            selection_range: positions.range(&(start..end)),
            children: children.then(|| nested(symbol.children, positions, depth + 1)),
        }
    });
    symbols.collect()
}

fn flat(
    symbols: Vec<Symbol>,
    container: Option<&str>,
    checked: &Checked,
    positions: &Positions<'_>,
    depth: usize,
    list: &mut Vec<SymbolInformation>,
) {
    for symbol in symbols {
        let name = name(symbol.name);
        #[allow(deprecated, reason = "the field has to be named to build the struct")]
        list.push(SymbolInformation {
            name: name.clone(),
            kind: kind(symbol.kind),
            tags: None,
            deprecated: None,
            location: lsp::Location {
                uri: checked.uri.clone(),
                range: positions.range(&symbol.range),
            },
            container_name: container.map(str::to_owned),
        });
        if depth < DEEPEST {
            flat(symbol.children, Some(&name), checked, positions, depth + 1, list);
        }
    }
}

/// Editors refuse an entry without a name.
fn name(name: String) -> String {
    if name.trim().is_empty() { "(unnamed)".into() } else { name }
}

fn kind(kind: SymbolKind) -> lsp::SymbolKind {
    match kind {
        SymbolKind::Problem => lsp::SymbolKind::MODULE,
        SymbolKind::Import => lsp::SymbolKind::PACKAGE,
        SymbolKind::Setting => lsp::SymbolKind::PROPERTY,
        SymbolKind::Group => lsp::SymbolKind::STRUCT,
        SymbolKind::Component => lsp::SymbolKind::VARIABLE,
        SymbolKind::Reaction => lsp::SymbolKind::FUNCTION,
        SymbolKind::Amount => lsp::SymbolKind::NUMBER,
        SymbolKind::Hold => lsp::SymbolKind::CONSTANT,
        SymbolKind::Balance => lsp::SymbolKind::OPERATOR,
        SymbolKind::Expectation => lsp::SymbolKind::BOOLEAN,
        SymbolKind::Curve => lsp::SymbolKind::ARRAY,
        SymbolKind::Case => lsp::SymbolKind::NAMESPACE,
    }
}
