//! What an editor shows inside the text, as plain data: hints after a place, and the
//! words for the thing under the cursor. Byte offsets; no protocol.

use std::ops::Range;

/// A few words shown after a place in the text.
#[derive(Clone, Debug, PartialEq)]
pub struct Hint {
    /// Where the words stand: after the last character of a statement's line.
    pub offset: usize,
    pub text: String,
    /// More, when pointed at; Markdown.
    pub tooltip: Option<String>,
}

/// What is known of the thing at a place.
#[derive(Clone, Debug, PartialEq)]
pub struct Hover {
    pub range: Range<usize>,
    pub markdown: String,
}

/// An entry of the outline.
#[derive(Clone, Debug, PartialEq)]
pub struct Symbol {
    pub name: String,
    /// A few words after the name, such as an amount.
    pub detail: Option<String>,
    pub kind: SymbolKind,
    /// The whole statement, or the whole case.
    pub range: Range<usize>,
    /// The part to jump to; inside `range`.
    pub selection: Range<usize>,
    pub children: Vec<Symbol>,
}

/// What an outline entry stands for; the server picks the editor's icon.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum SymbolKind {
    Problem,
    Import,
    Setting,
    Group,
    Component,
    Reaction,
    Amount,
    Hold,
    Balance,
    Expectation,
    Curve,
    Case,
}
