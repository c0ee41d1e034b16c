//! Byte offsets to the protocol's lines and columns and back, and edits given in them.

use std::cell::RefCell;
use std::collections::HashMap;
use std::ops::Range;

use tower_lsp::lsp_types::{self as lsp, Position, PositionEncodingKind};

/// What a column counts, as agreed with the client.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum Encoding {
    Utf8,
    #[default]
    Utf16,
    Utf32,
}

impl Encoding {
    pub fn named(name: &str) -> Option<Self> {
        match name {
            "utf-8" => Some(Self::Utf8),
            "utf-16" => Some(Self::Utf16),
            "utf-32" => Some(Self::Utf32),
            _ => None,
        }
    }

    pub fn kind(self) -> PositionEncodingKind {
        match self {
            Self::Utf8 => PositionEncodingKind::UTF8,
            Self::Utf16 => PositionEncodingKind::UTF16,
            Self::Utf32 => PositionEncodingKind::UTF32,
        }
    }

    fn units(self, text: &str) -> usize {
        match self {
            Self::Utf8 => text.len(),
            _ if text.is_ascii() => text.len(),
            Self::Utf16 => text.chars().map(char::len_utf16).sum(),
            Self::Utf32 => text.chars().count(),
        }
    }

    /// The byte length of the first `units` columns of a line; a column that cuts a
    /// character in two stands before it, and one past the end stands at the end.
    fn bytes(self, line: &str, units: usize) -> usize {
        match self {
            Self::Utf8 => floor(line, units),
            _ if line.is_ascii() => units.min(line.len()),
            _ => {
                let mut passed = 0;
                for (at, character) in line.char_indices() {
                    passed += if self == Self::Utf16 { character.len_utf16() } else { 1 };
                    if passed > units {
                        return at;
                    }
                }
                line.len()
            }
        }
    }
}

/// Where each line starts. Lines end with LF, CR LF or a lone CR, as the protocol says.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Lines {
    starts: Vec<u32>,
}

impl Lines {
    pub fn of(text: &str) -> Self {
        let mut starts = vec![0];
        line_starts(text.as_bytes(), 0..text.len(), |start| starts.push(start as u32));
        Self { starts }
    }

    fn start(&self, line: usize) -> usize {
        self.starts[line] as usize
    }

    /// The line that holds an offset.
    fn line(&self, offset: usize) -> usize {
        self.starts.partition_point(|&start| start as usize <= offset) - 1
    }

    /// A line's bytes, without what ends it.
    fn content(&self, text: &str, line: usize) -> Range<usize> {
        let start = self.start(line);
        let mut end = self.starts.get(line + 1).map_or(text.len(), |&next| next as usize);
        if line + 1 < self.starts.len() {
            end -= 1;
            if text.as_bytes()[end] == b'\n' && end > start && text.as_bytes()[end - 1] == b'\r' {
                end -= 1;
            }
        }
        start..end
    }

    /// The offset of a position; one past the end of a line or of the text is moved back.
    pub fn offset(&self, text: &str, position: Position, encoding: Encoding) -> usize {
        let line = position.line as usize;
        if line >= self.starts.len() {
            return text.len();
        }
        let content = self.content(text, line);
        content.start + encoding.bytes(&text[content], position.character as usize)
    }

    /// The bytes of a range; ends given the wrong way round are swapped.
    pub fn bytes(&self, text: &str, range: lsp::Range, encoding: Encoding) -> Range<usize> {
        let start = self.offset(text, range.start, encoding);
        let end = self.offset(text, range.end, encoding);
        start.min(end)..start.max(end)
    }

    /// Replaces a part of the text and follows it. Costs the shift of what comes after
    /// and a look at the lines touched, never a look at the whole text.
    pub fn replace(&mut self, text: &mut String, range: Range<usize>, new: &str) {
        text.replace_range(range.clone(), new);
        let end = range.start + new.len();
        // One line back, because a CR before the edit may join an LF at its start.
        let first = self.line(range.start).saturating_sub(1);
        // Starts up to one byte past the edit depend on bytes in it; later ones only move.
        let tail = self.starts.partition_point(|&start| start as usize <= range.end + 1);
        let moved = end.wrapping_sub(range.end) as u32;
        for start in &mut self.starts[tail..] {
            *start = start.wrapping_add(moved);
        }
        let mut found = Vec::new();
        let looked = self.start(first)..text.len().min(end + 1);
        line_starts(text.as_bytes(), looked, |start| found.push(start as u32));
        self.starts.splice(first + 1..tail.max(first + 1), found);
    }
}

/// The nearest start of a character at or before an offset.
pub fn floor(text: &str, offset: usize) -> usize {
    let mut at = offset.min(text.len());
    while !text.is_char_boundary(at) {
        at -= 1;
    }
    at
}

/// Calls back with the start of each line whose end lies in the range.
fn line_starts(bytes: &[u8], range: Range<usize>, mut found: impl FnMut(usize)) {
    for at in range {
        match bytes[at] {
            b'\n' => found(at + 1),
            b'\r' if bytes.get(at + 1) != Some(&b'\n') => found(at + 1),
            _ => {}
        }
    }
}

/// How much of a line is walked to find a column.
const STRETCH: usize = 1024;

/// Turns byte offsets of one text into positions. On a long line it remembers the column
/// of every [`STRETCH`] bytes, so that many offsets on it cost one walk along it.
pub struct Positions<'a> {
    text: &'a str,
    lines: &'a Lines,
    encoding: Encoding,
    /// Of each long line looked at, the column after each stretch.
    marks: RefCell<HashMap<usize, Vec<usize>>>,
}

impl<'a> Positions<'a> {
    pub fn new(text: &'a str, lines: &'a Lines, encoding: Encoding) -> Self {
        Self { text, lines, encoding, marks: RefCell::default() }
    }

    /// The position of an offset; one past the end, inside a character or inside a line's
    /// end is moved back.
    pub fn position(&self, offset: usize) -> Position {
        let offset = floor(self.text, offset);
        let line = self.lines.line(offset);
        let content = self.lines.content(self.text, line);
        let column =
            self.column(line, &self.text[content.clone()], offset.min(content.end) - content.start);
        Position { line: line as u32, character: column as u32 }
    }

    /// The column at a byte of a line.
    fn column(&self, line: usize, content: &str, at: usize) -> usize {
        let passed = at / STRETCH;
        if self.encoding == Encoding::Utf8 || passed == 0 {
            return self.encoding.units(&content[..at]);
        }
        let mark = |stretch: usize| floor(content, stretch * STRETCH);
        let mut marks = self.marks.borrow_mut();
        let marks = marks.entry(line).or_insert_with(|| {
            let mut column = 0;
            let stretches = 1..=content.len() / STRETCH;
            let columns = stretches.map(|stretch| {
                column += self.encoding.units(&content[mark(stretch - 1)..mark(stretch)]);
                column
            });
            columns.collect()
        });
        marks[passed - 1] + self.encoding.units(&content[mark(passed)..at])
    }

    pub fn range(&self, range: &Range<usize>) -> lsp::Range {
        let start = self.position(range.start);
        let end = if range.end > range.start { self.position(range.end) } else { start };
        lsp::Range { start, end }
    }

    pub fn offset(&self, position: Position) -> usize {
        self.lines.offset(self.text, position, self.encoding)
    }

    pub fn bytes(&self, range: lsp::Range) -> Range<usize> {
        self.lines.bytes(self.text, range, self.encoding)
    }
}

#[cfg(test)]
mod tests {
    use proptest::prelude::*;

    use super::*;

    fn at(line: u32, character: u32) -> Position {
        Position { line, character }
    }

    #[test]
    fn columns_count_what_was_agreed() {
        let text = "µ𝄞x\r\ny";
        let lines = Lines::of(text);
        for (encoding, columns) in [
            (Encoding::Utf8, [2, 6, 7]),
            (Encoding::Utf16, [1, 3, 4]),
            (Encoding::Utf32, [1, 2, 3]),
        ] {
            for (column, offset) in columns.into_iter().zip([2, 6, 7]) {
                assert_eq!(lines.offset(text, at(0, column), encoding), offset);
                let positions = Positions::new(text, &lines, encoding);
                assert_eq!(positions.position(offset), at(0, column));
            }
        }
    }

    #[test]
    fn positions_out_of_reach_are_moved_back() {
        let text = "a𝄞\r\nb";
        let lines = Lines::of(text);
        assert_eq!(lines.offset(text, at(0, 2), Encoding::Utf16), 1, "inside a surrogate pair");
        assert_eq!(lines.offset(text, at(0, 99), Encoding::Utf16), 5, "before the line's end");
        assert_eq!(lines.offset(text, at(1, 99), Encoding::Utf16), 8);
        assert_eq!(lines.offset(text, at(9, 0), Encoding::Utf16), 8);
        assert_eq!(lines.offset(text, at(u32::MAX, u32::MAX), Encoding::Utf8), 8);
        assert_eq!(lines.offset(text, at(0, 3), Encoding::Utf8), 1, "inside a character");
        let positions = Positions::new(text, &lines, Encoding::Utf16);
        assert_eq!(positions.position(99), at(1, 1));
        assert_eq!(positions.position(3), at(0, 1));
    }

    #[test]
    fn every_kind_of_line_end_counts_once() {
        assert_eq!(Lines::of("a\nb\r\nc\rd").starts, [0, 2, 5, 7]);
        assert_eq!(Lines::of("").starts, [0]);
        assert_eq!(Lines::of("\n").starts, [0, 1]);
    }

    proptest! {
        // No file of failures beside the sources.
        #![proptest_config(ProptestConfig { failure_persistence: None, ..Default::default() })]

        #[test]
        fn an_edit_leaves_the_lines_of_a_fresh_look(
            text in "[a\n\r𝄞µ]{0,24}", edits in prop::collection::vec(("[b\n\r𝄞]{0,4}", 0usize..30, 0usize..30), 1..6),
        ) {
            let mut text = text;
            let mut lines = Lines::of(&text);
            for (new, one, other) in edits {
                let one = floor(&text, one);
                let other = floor(&text, other);
                lines.replace(&mut text, one.min(other)..one.max(other), &new);
                prop_assert_eq!(&lines, &Lines::of(&text));
            }
        }

        #[test]
        fn columns_of_a_long_line_are_those_of_a_walk(
            text in "[a𝄞µ]{0,3}", repeat in 1usize..2000, offsets in prop::collection::vec(0usize..20_000, 1..9),
        ) {
            let text = format!("a\n{}", text.repeat(repeat));
            let lines = Lines::of(&text);
            for encoding in [Encoding::Utf8, Encoding::Utf16, Encoding::Utf32] {
                let positions = Positions::new(&text, &lines, encoding);
                for &offset in &offsets {
                    let offset = floor(&text, offset);
                    let walked = match offset {
                        0 | 1 => at(0, offset as u32),
                        _ => at(1, encoding.units(&text[2..offset]) as u32),
                    };
                    prop_assert_eq!(positions.position(offset), walked);
                }
            }
        }

        #[test]
        fn positions_lead_back(text in "[a\n\r𝄞µ]{0,24}", offsets in prop::collection::vec(0usize..60, 1..9)) {
            let lines = Lines::of(&text);
            for encoding in [Encoding::Utf8, Encoding::Utf16, Encoding::Utf32] {
                let positions = Positions::new(&text, &lines, encoding);
                for &offset in &offsets {
                    let offset = floor(&text, offset);
                    let fresh = Positions::new(&text, &lines, encoding).position(offset);
                    prop_assert_eq!(positions.position(offset), fresh);
                    let line = lines.line(offset);
                    // An offset inside a line's end comes back as that line's end.
                    prop_assert_eq!(positions.offset(fresh), offset.min(lines.content(&text, line).end));
                }
            }
        }
    }
}
