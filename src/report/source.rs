//! A file's text with its lines, and what became of its check: where every report starts.

use std::ops::Range;
use std::sync::Arc;

use crate::rules::check::Checked;
use crate::rules::finding::{LocatedFinding, Severity};
use crate::rules::outcome::{Outcome, State};
use crate::text::lines::Lines;
use crate::text::tree::{Document, Statement};

/// A text and the name that it is shown under.
pub struct Source {
    pub name: String,
    pub text: Arc<str>,
    pub lines: Lines,
}

/// Lines and columns from one; columns in Unicode scalar values; the end is one past the
/// last character.
#[derive(Clone, Copy, Debug, PartialEq, Eq, serde::Serialize)]
pub struct Region {
    pub line: usize,
    pub column: usize,
    pub end_line: usize,
    pub end_column: usize,
}

impl Source {
    pub fn new(name: String, text: Arc<str>) -> Source {
        Source { name, lines: Lines::new(text.clone()), text }
    }

    pub fn region(&self, range: &Range<usize>) -> Region {
        let (line, column) = self.lines.line_column(range.start);
        let (end_line, end_column) = self.lines.line_column(range.end.max(range.start));
        Region { line, column, end_line, end_column }
    }
}

/// A file and everything that was found in it.
pub struct FileReport {
    pub source: Source,
    pub findings: Vec<LocatedFinding>,
    pub reading: Reading,
}

/// Whether the file could be read, and its check where it was.
pub enum Reading {
    Checked(Box<Checked>),
    /// It is there and is no UTF-8 text.
    NotText,
    /// It is not there, or may not be read.
    Missing,
}

/// A base or a case that states a problem.
#[derive(Clone, Copy)]
pub struct Stated<'a> {
    /// Among the sections of the document; zero for the base.
    pub section: usize,
    /// The case's title; none for the base, and for a case whose line is broken.
    pub case: Option<&'a str>,
    pub outcome: &'a Outcome,
}

impl FileReport {
    pub fn checked(&self) -> Option<&Checked> {
        match &self.reading {
            Reading::Checked(checked) => Some(checked),
            Reading::NotText | Reading::Missing => None,
        }
    }

    /// The problems that the file states: its base, unless only its cases complete it, and
    /// its cases.
    pub fn problems(&self) -> Vec<Stated<'_>> {
        self.checked().map(problems).unwrap_or_default()
    }
}

/// The problems that a checked document states.
pub fn problems(checked: &Checked) -> Vec<Stated<'_>> {
    let open_base = is_open_base(checked);
    checked
        .outcomes
        .iter()
        .enumerate()
        .filter(|(_, outcome)| !matches!(outcome.state, State::NothingStated))
        .filter(|(section, _)| *section > 0 || !open_base)
        .map(|(section, outcome)| Stated {
            section,
            case: case_title(&checked.document, section),
            outcome,
        })
        .collect()
}

/// Whether the base leaves amounts to its cases: nothing is wrong with it, and yet it
/// cannot be solved by itself.
fn is_open_base(checked: &Checked) -> bool {
    let Some((base, cases)) = checked.outcomes.split_first() else { return false };
    matches!(base.state, State::NotWellPosed)
        && !cases.is_empty()
        && !checked.findings.iter().any(|f| f.case.is_none() && f.severity == Severity::Error)
}

/// The title of a case; none for the base.
fn case_title(document: &Document, section: usize) -> Option<&str> {
    match &document.sections[section].statements.first()?.parsed.statement {
        Statement::Case { title } if section > 0 => Some(&title.value),
        _ => None,
    }
}
