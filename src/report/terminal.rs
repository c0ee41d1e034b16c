//! Findings as text for a terminal: the lines they lie on, with the characters marked.

use std::collections::HashMap;
use std::ops::Range;

use annotate_snippets::renderer::DecorStyle;
use annotate_snippets::{AnnotationKind, Group, Level, Origin, Patch, Renderer, Snippet};

use super::source::Source;
pub use super::style::Style;
use super::wrap::wrapped;
use crate::rules::finding::{Fix, LocatedFinding, Severity};
use crate::text::lines::Encoding;

/// A line longer than this, in bytes, is shown in part.
const LONGEST_LINE: usize = 240;
/// The width that messages and cut lines keep to.
const WIDTH: usize = 100;
/// Where the words of a help start, for line numbers of up to three digits.
const HELP_INDENT: usize = 12;
/// So many other cases are told with a finding.
const OTHER_CASES: usize = 4;

/// One finding in its text.
pub fn finding(finding: &LocatedFinding, source: &Source, style: Style) -> String {
    likewise(finding, &[], source, style)
}

/// A finding with those of the same rule at the same place in other cases.
pub fn likewise(
    finding: &LocatedFinding,
    others: &[&LocatedFinding],
    source: &Source,
    style: Style,
) -> String {
    let others: Vec<String> = told(others);
    let mut ranges = vec![&finding.at];
    ranges.extend(finding.related.iter().map(|(at, _)| at));
    let window = Window::around(source, &ranges);
    let title = level(finding.severity).primary_title(message(finding)).id(finding.rule);
    let mut group = Group::with_title(title);
    if source.text.is_empty() {
        group = group.element(Origin::path(&source.name));
    } else {
        let mut snippet = window.snippet(source);
        if let Some(at) = window.inside(&finding.at) {
            snippet = snippet.annotation(AnnotationKind::Primary.span(at));
        }
        for (at, words) in &finding.related {
            if let Some(at) = window.inside(at) {
                let mark = AnnotationKind::Context.span(at).label(words.as_str());
                snippet = snippet.annotation(mark);
            }
        }
        group = group.element(snippet);
    }
    if let Some(help) = &finding.help {
        group = group.element(Level::HELP.message(wrapped(help, HELP_INDENT, 0, WIDTH)));
    }
    for other in &others {
        group = group.element(Level::NOTE.message(other.as_str()));
    }
    let mut groups: Vec<Group> = vec![group];
    groups.extend(finding.fixes.iter().map(|fix| fix_group(fix, source)));
    window.with_column(renderer(style).render(&groups), source, &finding.at)
}

/// What other cases say, a few of them in full.
fn told(others: &[&LocatedFinding]) -> Vec<String> {
    let case = |finding: &LocatedFinding| match &finding.case {
        Some(case) => format!("case \"{case}\""),
        None => "the base".into(),
    };
    let shown = if others.len() > OTHER_CASES { OTHER_CASES - 1 } else { others.len() };
    let mut told: Vec<String> = others[..shown]
        .iter()
        .map(|other| format!("in {}: {}", case(other), other.message))
        .collect();
    if shown < others.len() {
        told.push(format!("likewise in {} more cases", others.len() - shown));
    }
    told
}

fn fix_group<'a>(fix: &'a Fix<Range<usize>>, source: &'a Source) -> Group<'a> {
    let ranges: Vec<&Range<usize>> = fix.edits.iter().map(|(at, _)| at).collect();
    let window = Window::around(source, &ranges);
    let mut snippet = Snippet::source(window.text).line_start(window.line);
    for (at, replacement) in &fix.edits {
        if let Some(at) = window.inside(at) {
            snippet = snippet.patch(Patch::new(at, replacement.as_str()));
        }
    }
    Level::HELP.secondary_title(fix.title.as_str()).element(snippet)
}

/// Notes on one line each. Those that say the same of several places share one:
/// `sump.lyate:12:1: note[source-missing]: … (also lines 13 and 14)`.
pub fn notes(findings: &[&LocatedFinding], source: &Source, style: Style) -> String {
    let mut groups: Vec<Vec<&LocatedFinding>> = Vec::new();
    let mut known = HashMap::new();
    for note in findings {
        let key = (note.rule, &note.message, &note.case);
        let index = *known.entry(key).or_insert(groups.len());
        if index == groups.len() {
            groups.push(Vec::new());
        }
        groups[index].push(note);
    }
    let mut text = String::new();
    for group in groups {
        let note = group[0];
        let mut lines: Vec<usize> =
            group[1..].iter().map(|later| source.region(&later.at).line).collect();
        lines.dedup();
        let title = format!("{}{}", message(note), also(&lines));
        let window = Window::around(source, &[&note.at]);
        let title = level(note.severity).primary_title(title).id(note.rule);
        let mut group = Group::with_title(title);
        if let Some(at) = window.inside(&note.at) {
            let mark = AnnotationKind::Primary.span(at);
            group = group.element(window.snippet(source).annotation(mark));
        }
        let line = renderer(style).short_message(true).render(&[group]);
        text += &window.with_column(line, source, &note.at);
        text.push('\n');
    }
    text
}

fn also(lines: &[usize]) -> String {
    match lines {
        [] => String::new(),
        [one] => format!(" (also line {one})"),
        [most @ .., last] => {
            let most: Vec<String> = most.iter().map(usize::to_string).collect();
            format!(" (also lines {} and {last})", most.join(", "))
        }
    }
}

fn message(finding: &LocatedFinding) -> String {
    match &finding.case {
        Some(case) => format!("{} (case \"{case}\")", finding.message),
        None => finding.message.clone(),
    }
}

fn renderer(style: Style) -> Renderer {
    match style {
        Style::Plain => Renderer::plain(),
        Style::Coloured => Renderer::styled().decor_style(DecorStyle::Unicode),
    }
    .term_width(WIDTH)
}

fn level(severity: Severity) -> Level<'static> {
    match severity {
        Severity::Error => Level::ERROR,
        Severity::Warning => Level::WARNING,
        Severity::Note => Level::NOTE,
        Severity::Caution => Level::WARNING.with_name("caution"),
    }
}

/// The lines that some ranges lie on; of one very long line, the part round the first.
struct Window<'a> {
    text: &'a str,
    start: usize,
    /// The number of its first line, from one.
    line: usize,
}

impl<'a> Window<'a> {
    fn around(source: &'a Source, ranges: &[&Range<usize>]) -> Window<'a> {
        let text: &str = &source.text;
        let line_start = |at: usize| at - source.lines.position(at, Encoding::Utf8).column as usize;
        let first = ranges.iter().map(|r| r.start).min().unwrap_or(0);
        let last = ranges.iter().map(|r| r.end.max(r.start)).max().unwrap_or(0);
        let (first, last) = (floor(text, first), floor(text, last));
        let start = line_start(first);
        // Looked for no farther than a line that is shown in full may reach.
        let near = floor(text, last.saturating_add(LONGEST_LINE));
        let end = text[last..near].find('\n').map_or(near, |at| last + at);
        let long = |line: &str| line.len() > LONGEST_LINE;
        if !text[start..end].lines().any(long) && (end == text.len() || near != end) {
            let (line, _) = source.lines.line_column(start);
            return Window { text: &text[start..end], start, line };
        }
        let at = floor(text, ranges.first().map_or(first, |range| range.start));
        let from = floor(text, at.saturating_sub(LONGEST_LINE / 2)).max(line_start(at));
        let to = floor(text, at + LONGEST_LINE / 2);
        let (line, _) = source.lines.line_column(from);
        Window { text: &text[from..to], start: from, line }
    }

    fn snippet<T: Clone>(&self, source: &'a Source) -> Snippet<'a, T> {
        Snippet::source(self.text).line_start(self.line).path(source.name.as_str())
    }

    /// A rendered text with the column of a finding told by its whole line, also where the
    /// window starts inside the line and the renderer could only count from there.
    fn with_column(&self, rendered: String, source: &Source, at: &Range<usize>) -> String {
        let region = source.region(at);
        let Some(inside) = self.inside(at).filter(|_| region.line == self.line) else {
            return rendered;
        };
        let shown = self.text[..inside.start].chars().count() + 1;
        if shown == region.column {
            return rendered;
        }
        let place = |column: usize| format!("{}:{}:{column}", source.name, region.line);
        rendered.replacen(&place(shown), &place(region.column), 1)
    }

    /// The range as seen from the window; none where it starts outside.
    fn inside(&self, range: &Range<usize>) -> Option<Range<usize>> {
        let start = range.start.checked_sub(self.start)?;
        let end = range.end.max(range.start) - self.start;
        (start <= self.text.len()).then(|| floor(self.text, start)..floor(self.text, end))
    }
}

/// The nearest character boundary at or before an offset.
fn floor(text: &str, at: usize) -> usize {
    let mut at = at.min(text.len());
    while !text.is_char_boundary(at) {
        at -= 1;
    }
    at
}
