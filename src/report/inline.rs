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
