//! Layout: which lines make one statement, and which section each statement is in.
//! It looks at indentation alone, so that a broken statement leaves the others whole.

/// A statement's extent: from its first character to the end of its last line, the
/// line break left out.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) struct Extent {
    pub start: usize,
    pub end: usize,
    /// 0 is the base; cases count from 1.
    pub section: u32,
    /// Indented where nothing is open, or to no open depth.
    pub stray: bool,
}

/// A tab moves on to the next multiple of this many columns.
const TAB: usize = 4;

/// What is open while lines are read.
struct Open {
    /// The section of the case that is open, with the depth of its statements once
    /// one is seen.
    case: Option<(u32, Option<usize>)>,
    /// How deep the last statement starts.
    last: Option<usize>,
}

/// The statements of a text in the order written, in time linear in its length.
pub(super) fn statements(text: &str) -> Vec<Extent> {
    let mut extents: Vec<Extent> = Vec::new();
    let mut sections = 1;
    let mut open = Open { case: None, last: None };
    for (start, end) in Lines::new(text) {
        let line = &text[start..end];
        let Some((depth, offset)) = indentation(line) else { continue };
        let content = &line[offset..];
        let mut extent = Extent { start: start + offset, end, section: 0, stray: false };
        if depth == 0 {
            if is_case(content) {
                extent.section = sections;
                open.case = Some((sections, None));
                sections += 1;
            } else {
                open.case = None;
            }
        } else {
            let (continues, stray) = match (&mut open.case, open.last) {
                (Some((_, first @ None)), _) => {
                    *first = Some(depth);
                    (false, false)
                }
                (Some((_, Some(own))), _) if depth == *own => (false, false),
                (_, Some(last)) if depth > last => (true, false),
                _ => (false, true),
            };
            if continues {
                if let Some(last) = extents.last_mut() {
                    last.end = end;
                }
                continue;
            }
            extent.section = open.case.map_or(0, |(section, _)| section);
            extent.stray = stray || is_case(content);
        }
        open.last = Some(depth);
        extents.push(extent);
    }
    extents
}

fn is_case(content: &str) -> bool {
    content
        .strip_prefix("case")
        .is_some_and(|rest| !rest.starts_with(|c: char| c.is_alphanumeric() || "_-".contains(c)))
}

/// The width of a line's indentation and its length in bytes; nothing where the line
/// is blank or a comment.
fn indentation(line: &str) -> Option<(usize, usize)> {
    let (mut width, mut offset) = (0, 0);
    loop {
        // Almost every byte that is seen here is a space or starts a statement.
        match line.as_bytes().get(offset)? {
            b' ' => {
                width += 1;
                offset += 1;
                continue;
            }
            b'#' => return None,
            b'!'..=b'~' => return Some((width, offset)),
            _ => {}
        }
        let c = line[offset..].chars().next()?;
        match c {
            '\t' => width += TAB - width % TAB,
            // A byte-order mark, at the top of a file.
            '\u{FEFF}' => {}
            c if c.is_whitespace() => width += 1,
            _ => return Some((width, offset)),
        }
        offset += c.len_utf8();
    }
}

/// The lines of a text without their ends, which are LF, CRLF or CR.
struct Lines<'t> {
    text: &'t str,
    position: usize,
    has_return: bool,
}

impl<'t> Lines<'t> {
    fn new(text: &'t str) -> Self {
        Lines { text, position: 0, has_return: text.contains('\r') }
    }
}

impl Iterator for Lines<'_> {
    type Item = (usize, usize);

    fn next(&mut self) -> Option<(usize, usize)> {
        let start = self.position;
        let rest = &self.text[start..];
        if rest.is_empty() {
            return None;
        }
        let found = if self.has_return { rest.find(['\n', '\r']) } else { rest.find('\n') };
        let end = start + found.unwrap_or(rest.len());
        let line_break = &self.text.as_bytes()[end..];
        self.position = end + if line_break.starts_with(b"\r\n") { 2 } else { 1 };
        self.position = self.position.min(self.text.len());
        Some((start, end))
    }
}
