//! Between byte offsets and lines with columns: in scalar values for the terminal, in
//! the code units that an editor counts.

use std::sync::Arc;

use line_index::{LineCol, LineIndex, TextSize, WideEncoding, WideLineCol};

/// What a column counts.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, Hash)]
pub enum Encoding {
    Utf8,
    /// What editors count unless another encoding is agreed.
    #[default]
    Utf16,
    /// Unicode scalar values: what a reader of the terminal counts.
    Utf32,
}

/// A line and a column, both from zero.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct Position {
    pub line: u32,
    pub column: u32,
}

/// The lines of one text. A line ends with LF, CRLF or a CR of its own, as the
/// editors' protocol has it.
#[derive(Clone, Debug)]
pub struct Lines {
    text: Arc<str>,
    index: LineIndex,
}

impl Lines {
    pub fn new(text: Arc<str>) -> Lines {
        let index = match lone_returns(&text) {
            None => LineIndex::new(&text),
            Some(text) => LineIndex::new(&text),
        };
        Lines { text, index }
    }

    /// Where a byte offset lies. One past the end counts as the end, one inside a
    /// character as that character's start.
    pub fn position(&self, offset: usize, encoding: Encoding) -> Position {
        let offset = self.start_of_character(offset);
        let at = self.index.line_col(TextSize::from(offset as u32));
        let column = match wide(encoding) {
            None => at.col,
            Some(wide) => self.index.to_wide(wide, at).map_or(at.col, |at| at.col),
        };
        Position { line: at.line, column }
    }

    /// The byte offset of a position. A column past the end of its line counts as that
    /// end, a line past the last as the end of the text; a position inside a character
    /// as that character's start.
    pub fn offset(&self, position: Position, encoding: Encoding) -> usize {
        let Some(line) = self.index.line(position.line) else { return self.text.len() };
        let range = usize::from(line.start())..usize::from(line.end());
        let content = self.text[range.clone()].trim_end_matches(['\n', '\r']).len();
        let at = WideLineCol { line: position.line, col: position.column };
        let column = match wide(encoding) {
            None => Some(position.column),
            Some(wide) => self.index.to_utf8(wide, at).map(|LineCol { col, .. }| col),
        };
        let column = column.map_or(content, |column| content.min(column as usize));
        self.start_of_character(range.start + column)
    }

    fn start_of_character(&self, offset: usize) -> usize {
        let mut offset = offset.min(self.text.len());
        while !self.text.is_char_boundary(offset) {
            offset -= 1;
        }
        offset
    }

    /// Line and column for people: both from one, the column in characters.
    pub fn line_column(&self, offset: usize) -> (usize, usize) {
        let at = self.position(offset, Encoding::Utf32);
        (at.line as usize + 1, at.column as usize + 1)
    }

    /// How many lines there are; a text that ends with a line break has an empty last.
    pub fn count(&self) -> usize {
        self.index.try_line_col(self.index.len()).map_or(1, |at| at.line as usize + 1)
    }
}

fn wide(encoding: Encoding) -> Option<WideEncoding> {
    match encoding {
        Encoding::Utf8 => None,
        Encoding::Utf16 => Some(WideEncoding::Utf16),
        Encoding::Utf32 => Some(WideEncoding::Utf32),
    }
}

/// The text with LF for each CR that stands alone: of the same length, so that the
/// line index, which knows LF only, finds those lines too.
fn lone_returns(text: &str) -> Option<String> {
    let mut rest = text.split('\r').skip(1);
    if rest.all(|after| after.starts_with('\n')) {
        return None;
    }
    let mut result = String::with_capacity(text.len());
    let mut parts = text.split('\r');
    result.push_str(parts.next().unwrap_or(""));
    for part in parts {
        result.push(if part.starts_with('\n') { '\r' } else { '\n' });
        result.push_str(part);
    }
    Some(result)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn lines(text: &str) -> Lines {
        Lines::new(text.into())
    }

    fn at(line: u32, column: u32) -> Position {
        Position { line, column }
    }

    #[test]
    fn columns_count_what_the_encoding_counts() {
        let lines = lines("a\nµ𝄞x°\n");
        let x = "a\nµ𝄞".len();
        assert_eq!(lines.position(x, Encoding::Utf8), at(1, 6));
        assert_eq!(lines.position(x, Encoding::Utf16), at(1, 3));
        assert_eq!(lines.position(x, Encoding::Utf32), at(1, 2));
        assert_eq!(lines.line_column(x), (2, 3));
        for encoding in [Encoding::Utf8, Encoding::Utf16, Encoding::Utf32] {
            assert_eq!(lines.offset(lines.position(x, encoding), encoding), x);
        }
    }

    #[test]
    fn a_position_inside_a_character_is_its_start() {
        let lines = lines("µ𝄞x");
        assert_eq!(lines.offset(at(0, 2), Encoding::Utf16), 2, "inside the surrogate pair");
        assert_eq!(lines.offset(at(0, 1), Encoding::Utf8), 0);
        assert_eq!(lines.offset(at(0, 4), Encoding::Utf8), 2);
        assert_eq!(lines.position(1, Encoding::Utf16), at(0, 0));
    }

    #[test]
    fn a_position_past_the_end_is_the_end() {
        let lines = lines("ab\r\n\r\ncd");
        assert_eq!(lines.offset(at(0, 99), Encoding::Utf16), 2, "before the line break");
        assert_eq!(lines.offset(at(1, 1), Encoding::Utf16), 4);
        assert_eq!(lines.offset(at(2, u32::MAX), Encoding::Utf16), 8);
        assert_eq!(lines.offset(at(99, 0), Encoding::Utf16), 8);
        assert_eq!(lines.offset(at(0, u32::MAX), Encoding::Utf8), 2);
        assert_eq!(lines.position(99, Encoding::Utf16), at(2, 2));
    }

    #[test]
    fn every_line_end_counts_once() {
        for text in ["a\nb\nc", "a\r\nb\r\nc", "a\rb\rc", "a\rb\r\nc"] {
            let lines = lines(text);
            assert_eq!(lines.count(), 3, "{text:?}");
            assert_eq!(lines.offset(at(2, 0), Encoding::Utf16), text.len() - 1, "{text:?}");
            assert_eq!(lines.position(text.len() - 1, Encoding::Utf16), at(2, 0), "{text:?}");
        }
        assert_eq!(lines("").count(), 1);
        assert_eq!(lines("a\n").count(), 2);
    }
}
