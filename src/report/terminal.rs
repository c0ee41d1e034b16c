//! Findings as text for a terminal: the lines they lie on, with the characters marked.

use std::ops::Range;

use annotate_snippets::renderer::DecorStyle;
use annotate_snippets::{AnnotationKind, Group, Level, Patch, Renderer, Snippet};

use crate::rules::finding::{LocatedFinding, Severity};

/// Colours and line art, or plain characters alone.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Style {
    Plain,
    Coloured,
}

/// A line longer than this is shown in part.
const LONGEST_LINE: usize = 240;

/// One finding in its text. `path` is shown as given.
pub fn finding(finding: &LocatedFinding, text: &str, path: &str, style: Style) -> String {
    let level = level(finding.severity);
    let message = match &finding.case {
        Some(case) => format!("{} (case \"{case}\")", finding.message),
        None => finding.message.clone(),
    };
    let mut ranges: Vec<&Range<usize>> = vec![&finding.at];
    ranges.extend(finding.related.iter().map(|(at, _)| at));
    let window = Window::around(text, &ranges);
    let mut snippet = Snippet::source(window.text).line_start(window.line).path(path.to_owned());
    snippet = snippet.annotation(AnnotationKind::Primary.span(window.inside(&finding.at)));
    for (at, words) in &finding.related {
        let label = words.clone();
        snippet = snippet.annotation(AnnotationKind::Context.span(window.inside(at)).label(label));
    }
    let mut group = level.primary_title(message).id(finding.rule).element(snippet);
    if let Some(help) = &finding.help {
        group = group.element(Level::HELP.message(help.clone()));
    }
    let mut groups: Vec<Group> = vec![group];
    for fix in &finding.fixes {
        let ranges: Vec<&Range<usize>> = fix.edits.iter().map(|(at, _)| at).collect();
        let window = Window::around(text, &ranges);
        let mut snippet = Snippet::source(window.text).line_start(window.line);
        for (at, replacement) in &fix.edits {
            snippet = snippet.patch(Patch::new(window.inside(at), replacement.clone()));
        }
        groups.push(Level::HELP.secondary_title(fix.title.clone()).element(snippet));
    }
    let renderer = match style {
        Style::Plain => Renderer::plain(),
        Style::Coloured => Renderer::styled().decor_style(DecorStyle::Unicode),
    };
    renderer.render(&groups)
}

fn level(severity: Severity) -> Level<'static> {
    match severity {
        Severity::Error => Level::ERROR,
        Severity::Warning => Level::WARNING,
        Severity::Note => Level::NOTE,
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
    fn around(text: &'a str, ranges: &[&Range<usize>]) -> Window<'a> {
        let first = ranges.iter().map(|r| r.start).min().unwrap_or(0).min(text.len());
        let last = ranges.iter().map(|r| r.end).max().unwrap_or(0).clamp(first, text.len());
        let (first, last) = (floor(text, first), floor(text, last));
        let start = text[..first].rfind('\n').map_or(0, |at| at + 1);
        let end = text[last..].find('\n').map_or(text.len(), |at| last + at);
        let line = text[..start].bytes().filter(|&b| b == b'\n').count() + 1;
        let long = text[start..end].lines().any(|line| line.len() > LONGEST_LINE);
        if !long {
            return Window { text: &text[start..end], start, line };
        }
        let at = ranges.first().map_or(first, |range| floor(text, range.start.min(text.len())));
        let from = floor(text, at.saturating_sub(LONGEST_LINE / 2)).max(start);
        let to = floor(text, (at + LONGEST_LINE / 2).min(end));
        let cut = &text[from..to];
        let line = line + text[start..from].bytes().filter(|&b| b == b'\n').count();
        Window { text: cut, start: from, line }
    }

    /// The range as seen from the window, cut to it.
    fn inside(&self, range: &Range<usize>) -> Range<usize> {
        let clip = |at: usize| floor(self.text, at.saturating_sub(self.start).min(self.text.len()));
        clip(range.start)..clip(range.end)
    }
}

/// The nearest character boundary at or before an offset.
fn floor(text: &str, mut at: usize) -> usize {
    while !text.is_char_boundary(at) {
        at -= 1;
    }
    at
}
