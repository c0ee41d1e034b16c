//! What an editor shows inside the text, as plain data: hints after a place, and the
//! words for the thing under the cursor. Byte offsets; no protocol.

use std::ops::Range;

use super::picture::Kind;
use super::picture::theme::Theme;

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

/// A picture that may be asked for, as an editor offers it.
#[derive(Clone, Debug, PartialEq)]
pub struct Offer {
    pub title: String,
    pub wish: PictureWish,
}

/// What a picture is to show. Whatever is left out is as the command line has it.
#[derive(Clone, Debug, Default, PartialEq, serde::Deserialize, serde::Serialize)]
pub struct PictureWish {
    #[serde(skip_serializing_if = "Option::is_none")]
    pub picture: Option<Kind>,
    /// The title of the case; the first problem of the file where there is none.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub case: Option<String>,
    /// The component, reagent, solid or quantity that it is about.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub of: Option<String>,
    #[serde(skip_serializing_if = "Option::is_none")]
    pub theme: Option<Theme>,
    /// Pixels.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub width: Option<u32>,
    #[serde(skip_serializing_if = "Option::is_none")]
    pub height: Option<u32>,
}

/// A picture that was drawn.
#[derive(Clone, Debug, PartialEq, serde::Serialize)]
pub struct Picture {
    pub title: String,
    /// A complete SVG document.
    pub svg: String,
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
