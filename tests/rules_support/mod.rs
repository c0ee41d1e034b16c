//! Caret fixtures: small problem files with the findings that they must give drawn under
//! the characters that cause them.
//!
//! ```text
//! ## rule-name: what this fixture shows
//! only: rule-name            (optional: other rules are not looked at)
//! component CO3^2-
//! reaction HCO3- <=> CO3- + H+, pKa = 10.33, source "x"
//!          ^^^^^^^^^^^^^^^^^^^^ rule-name: a part of the message
//!          help: a part of the help
//! --- other.lyate            (another file beside it)
//! fix: a part of the title   (the text once the fixes are applied)
//! ```
//!
//! `^` stands under each character of a finding, `>` after the last one where it goes on in
//! the next line, `|` before the character where a finding without width stands, `~` under
//! each character of a related place. `rule-name (case)` names the case it was found in.
//! `fix safe:` and `fix unsafe:` also say which kind of fix it is. Notes of
//! `source-missing` need not be drawn, nor cautions in a fixture that is about another rule.

use std::fmt::Write as _;
use std::ops::Range;
use std::path::Path;
use std::sync::atomic::AtomicBool;

use lyate::problem::files::Disk;
use lyate::problem::import::Imports;
use lyate::rules::catalogue::find;
use lyate::rules::check::{Checked, Surroundings, check};
use lyate::rules::finding::{LocatedFinding, Severity};
use lyate::text::tree::Document;

#[derive(Default)]
pub struct Fixture {
    pub title: String,
    pub line: usize,
    only: Vec<String>,
    pub text: String,
    marks: Vec<Mark>,
    files: Vec<(String, String)>,
    fixes: Vec<FixSection>,
}

/// A drawn line: which characters of which line of the text, and what stands there.
#[derive(Debug)]
struct Mark {
    line: usize,
    columns: Range<usize>,
    related: bool,
    /// Whether it goes on in the next line.
    goes_on: bool,
    rule: String,
    case: Option<String>,
    message: String,
    help: Vec<String>,
}

struct FixSection {
    safe: Option<bool>,
    title: String,
    text: String,
}

/// Checks a text in a folder of its own, with other files beside it.
pub fn check_text(text: &str, files: &[(String, String)]) -> Checked {
    let folder = tempfile::tempdir().expect("a folder for a fixture");
    for (name, content) in files {
        let path = folder.path().join(name);
        if let Some(parent) = path.parent() {
            std::fs::create_dir_all(parent).expect("a folder for a fixture");
        }
        std::fs::write(path, bytes(content)).expect("a file for a fixture");
    }
    let path = folder.path().join("problem.lyate");
    std::fs::write(&path, text).expect("a file for a fixture");
    let around = Surroundings {
        path: Some(&path),
        roots: &[],
        files: &Disk,
        imports: &Imports::default(),
        cancel: &AtomicBool::new(false),
    };
    check(Document::parse(text), &around, None).expect("nobody cancels")
}

/// What a file beside a fixture holds: `\xFF` in its text is that byte.
fn bytes(content: &str) -> Vec<u8> {
    let mut parts = content.split("\\x");
    let mut bytes = parts.next().unwrap_or_default().as_bytes().to_vec();
    for part in parts {
        let (code, rest) = part.split_at(2);
        bytes.push(u8::from_str_radix(code, 16).expect("two digits after \\x"));
        bytes.extend_from_slice(rest.as_bytes());
    }
    bytes
}

/// Reads the fixtures of a file.
pub fn read(path: &Path) -> Vec<Fixture> {
    let content = std::fs::read_to_string(path).expect("a fixture file");
    let mut fixtures: Vec<Fixture> = Vec::new();
    enum Into {
        Text,
        File,
        Fix,
    }
    let mut into = Into::Text;
    let mut lines = 0;
    for (number, line) in content.lines().enumerate() {
        if let Some(title) = line.strip_prefix("## ") {
            let (title, line) = (title.to_owned(), number + 1);
            fixtures.push(Fixture { title, line, ..Fixture::default() });
            into = Into::Text;
            lines = 0;
            continue;
        }
        let Some(fixture) = fixtures.last_mut() else { continue };
        let at = format!("{}:{}", path.display(), number + 1);
        if let Some(name) = line.strip_prefix("--- ") {
            fixture.files.push((name.trim().to_owned(), String::new()));
            into = Into::File;
        } else if let Some(section) = fix_section(line) {
            fixture.fixes.push(section);
            into = Into::Fix;
        } else if let Some(rules) = line.strip_prefix("only: ") {
            fixture.only = rules.split_whitespace().map(str::to_owned).collect();
        } else {
            match into {
                Into::Text => match drawn(line, lines) {
                    Drawn::No => {
                        lines += 1;
                        fixture.text.push_str(line);
                        fixture.text.push('\n');
                    }
                    Drawn::Mark(mark) => {
                        assert!(lines > 0, "{at}: a mark with no line above it");
                        fixture.marks.push(mark);
                    }
                    Drawn::Help(words) => match fixture.marks.last_mut() {
                        Some(mark) => mark.help.push(words),
                        None => panic!("{at}: help with no finding above it"),
                    },
                },
                Into::File => append(fixture.files.last_mut().map(|(_, text)| text), line),
                Into::Fix => append(fixture.fixes.last_mut().map(|fix| &mut fix.text), line),
            }
        }
    }
    for fixture in &mut fixtures {
        trim_end(&mut fixture.text);
        fixture.fixes.iter_mut().for_each(|fix| trim_end(&mut fix.text));
    }
    fixtures
}

fn append(to: Option<&mut String>, line: &str) {
    if let Some(to) = to {
        to.push_str(line);
        to.push('\n');
    }
}

/// Blank lines before the next fixture belong to none.
fn trim_end(text: &mut String) {
    while text.ends_with("\n\n") {
        text.pop();
    }
}

fn fix_section(line: &str) -> Option<FixSection> {
    let (head, title) = line.split_once(':')?;
    let safe = match head {
        "fix" => None,
        "fix safe" => Some(true),
        "fix unsafe" => Some(false),
        _ => return None,
    };
    Some(FixSection { safe, title: title.trim().to_owned(), text: String::new() })
}

enum Drawn {
    No,
    Mark(Mark),
    Help(String),
}

/// What a line of a fixture is, where `lines` lines of text stand above it.
fn drawn(line: &str, lines: usize) -> Drawn {
    let content = line.trim_start();
    if let Some(words) = content.strip_prefix("help: ") {
        return Drawn::Help(words.trim().to_owned());
    }
    let Some(sign) = content.chars().next().filter(|c| "^~|".contains(*c)) else {
        return Drawn::No;
    };
    let start = line.chars().count() - content.chars().count();
    let width = content.chars().take_while(|c| *c == sign).count();
    let mut rest: &str = content.trim_start_matches(sign);
    let goes_on = rest.starts_with('>');
    rest = rest.trim_start_matches('>').trim();
    let (name, message) = rest.split_once(": ").unwrap_or((rest, ""));
    let (rule, case) = match name.split_once(" (") {
        Some((rule, case)) => (rule, Some(case.trim_end_matches(')').to_owned())),
        None => (name, None),
    };
    Drawn::Mark(Mark {
        line: lines.saturating_sub(1),
        columns: start..start + if sign == '|' { 0 } else { width },
        related: sign == '~',
        goes_on,
        rule: rule.trim_end_matches(':').to_owned(),
        case,
        message: message.trim().to_owned(),
        help: Vec::new(),
    })
}

impl Fixture {
    /// The rule that the fixture is about.
    pub fn about(&self) -> &str {
        self.title.split(':').next().unwrap_or_default().trim()
    }

    /// Whether the rule that it is about must be found in it.
    pub fn is_positive(&self) -> bool {
        self.marks.iter().any(|mark| !mark.related && mark.rule == self.about())
    }

    /// The files beside it.
    pub fn files(&self) -> &[(String, String)] {
        &self.files
    }

    /// All that the check says of it.
    pub fn findings(&self) -> Vec<LocatedFinding> {
        check_text(&self.text, &self.files).findings
    }

    /// What is wrong with what the check said of it; nothing where all is as drawn.
    pub fn problems(&self) -> Vec<String> {
        let checked = check_text(&self.text, &self.files);
        let found: Vec<&LocatedFinding> =
            checked.findings.iter().filter(|finding| self.looks_at(finding)).collect();
        let mut problems = Vec::new();
        let mut met = vec![false; found.len()];
        for mark in self.marks.iter().filter(|mark| !mark.related) {
            let wanted = self.range(mark);
            let fits = |finding: &LocatedFinding| {
                finding.rule == mark.rule
                    && self.covers(mark, &wanted, &finding.at)
                    && finding.message.contains(&mark.message)
                    && mark.case.as_ref().is_none_or(|case| finding.case.as_ref() == Some(case))
                    && mark
                        .help
                        .iter()
                        .all(|words| finding.help.as_ref().is_some_and(|help| help.contains(words)))
            };
            match (0..found.len()).find(|&i| !met[i] && fits(found[i])) {
                Some(i) => met[i] = true,
                None => problems.push(format!("not found as drawn: {mark:?}")),
            }
        }
        for (finding, met) in found.iter().zip(&met) {
            if !met {
                problems.push(format!("found and not drawn: {}", finding.rule));
            }
        }
        for mark in self.marks.iter().filter(|mark| mark.related) {
            let wanted = self.range(mark);
            let met = found.iter().filter(|finding| finding.rule == mark.rule).any(|finding| {
                finding
                    .related
                    .iter()
                    .any(|(at, words)| *at == wanted && words.contains(&mark.message))
            });
            if !met {
                problems.push(format!("no such related place: {mark:?}"));
            }
        }
        for fix in &self.fixes {
            problems.extend(self.fix_problem(fix, &found));
        }
        if !problems.is_empty() {
            problems.push(format!("this was found:\n{}", self.draw(&checked.findings)));
        }
        problems
    }

    fn looks_at(&self, finding: &LocatedFinding) -> bool {
        if self.only.is_empty() {
            let of_itself =
                |name: &str| find(name).is_some_and(|r| r.severity == Severity::Caution);
            match finding.severity {
                Severity::Caution => of_itself(self.about()),
                _ => finding.rule != "source-missing" || self.about() == "source-missing",
            }
        } else {
            self.only.iter().any(|rule| rule == finding.rule)
        }
    }

    fn range(&self, mark: &Mark) -> Range<usize> {
        let start = line_start(&self.text, mark.line);
        let line = self.text[start..].lines().next().unwrap_or_default();
        let byte = |column: usize| {
            line.char_indices().nth(column).map_or(line.len(), |(offset, _)| offset)
        };
        start + byte(mark.columns.start)..start + byte(mark.columns.end)
    }

    fn covers(&self, mark: &Mark, wanted: &Range<usize>, found: &Range<usize>) -> bool {
        if mark.goes_on {
            found.start == wanted.start && self.text[found.clone()].contains('\n')
        } else {
            found == wanted
        }
    }

    /// Applies the fix of each finding, the first with this title, and compares.
    fn fix_problem(&self, fix: &FixSection, found: &[&LocatedFinding]) -> Option<String> {
        let mut edits: Vec<(Range<usize>, &str)> = Vec::new();
        for finding in found {
            let Some(chosen) = finding.fixes.iter().find(|f| f.title.contains(&fix.title)) else {
                continue;
            };
            if fix.safe.is_some_and(|safe| safe != chosen.safe) {
                return Some(format!("`{}`: safe is {}", chosen.title, chosen.safe));
            }
            edits.extend(chosen.edits.iter().map(|(at, text)| (at.clone(), text.as_str())));
        }
        if edits.is_empty() {
            return Some(format!("no fix with this title: `{}`", fix.title));
        }
        edits.sort_by_key(|(at, _)| (at.start, at.end));
        edits.dedup();
        let mut text = self.text.clone();
        for (at, new) in edits.iter().rev() {
            text.replace_range(at.clone(), new);
        }
        trim_end(&mut text);
        if text != fix.text {
            return Some(format!("after the fix the text is:\n{text}"));
        }
        let count = |findings: &[LocatedFinding]| {
            findings.iter().filter(|finding| finding.rule == self.about()).count()
        };
        let before = found.iter().filter(|finding| finding.rule == self.about()).count();
        let left = count(&check_text(&text, &self.files).findings);
        (before > 0 && left >= before).then(|| format!("after the fix it is still found:\n{text}"))
    }

    /// The text with all findings drawn into it, as a fixture has them.
    fn draw(&self, findings: &[LocatedFinding]) -> String {
        let mut drawn = String::new();
        let mut start = 0;
        for line in self.text.split_inclusive('\n') {
            let _ = writeln!(drawn, "{}", line.trim_end_matches('\n'));
            let end = start + line.len();
            let here = |at: &Range<usize>| (start..end).contains(&at.start);
            for finding in findings {
                if here(&finding.at) && self.looks_at(finding) {
                    let case =
                        finding.case.as_ref().map_or_else(String::new, |c| format!(" ({c})"));
                    let marks = marks(line, start, &finding.at, '^');
                    let _ = writeln!(drawn, "{marks} {}{case}: {}", finding.rule, finding.message);
                    if let Some(help) = &finding.help {
                        let indent = marks.len() - marks.trim_start().len();
                        let _ = writeln!(drawn, "{}help: {help}", " ".repeat(indent));
                    }
                    for fix in &finding.fixes {
                        let _ = writeln!(drawn, "        (fix, safe {}: {})", fix.safe, fix.title);
                    }
                }
                for (at, words) in finding.related.iter().filter(|(at, _)| here(at)) {
                    let marks = marks(line, start, at, '~');
                    let _ = writeln!(drawn, "{marks} {}: {words}", finding.rule);
                }
            }
            start = end;
        }
        drawn
    }
}

fn marks(line: &str, start: usize, at: &Range<usize>, sign: char) -> String {
    let end = at.end.min(start + line.trim_end_matches('\n').len()).max(at.start);
    let indent = line[..at.start - start].chars().count();
    let width = line[at.start - start..end - start].chars().count();
    let sign = if width == 0 { "|".to_owned() } else { sign.to_string().repeat(width) };
    let goes_on = if at.end > end { ">" } else { "" };
    format!("{}{sign}{goes_on}", " ".repeat(indent))
}

fn line_start(text: &str, line: usize) -> usize {
    text.split_inclusive('\n').take(line).map(str::len).sum()
}
