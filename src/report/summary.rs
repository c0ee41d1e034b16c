//! How much was checked and what came of it, in numbers and as one line.

use super::expectation::is_met;
use super::source::{FileReport, Stated};
use super::style::{Paint, Style};
use crate::rules::finding::Severity;

#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct Summary {
    pub files: usize,
    /// Bases and cases that state a problem.
    pub problems: usize,
    pub solved: usize,
    pub expectations: usize,
    pub met: usize,
    pub errors: usize,
    pub warnings: usize,
    pub notes: usize,
}

impl Summary {
    /// An expectation of a problem that could not be solved counts as not met.
    pub fn of(files: &[FileReport]) -> Summary {
        let mut summary = Summary { files: files.len(), ..Summary::default() };
        for file in files {
            for Stated { outcome, .. } in file.problems() {
                let expectations = &outcome.problem.expectations;
                summary.problems += 1;
                summary.expectations += expectations.len();
                if outcome.solved().is_none() {
                    continue;
                }
                summary.solved += 1;
                summary.met += expectations.iter().filter(|e| is_met(outcome, e)).count();
            }
            for finding in &file.findings {
                *match finding.severity {
                    Severity::Error => &mut summary.errors,
                    Severity::Warning => &mut summary.warnings,
                    Severity::Note => &mut summary.notes,
                } += 1;
            }
        }
        summary
    }

    /// How many findings there are of at least this severity.
    pub fn count(&self, at_least: Severity) -> usize {
        match at_least {
            Severity::Error => self.errors,
            Severity::Warning => self.errors + self.warnings,
            Severity::Note => self.errors + self.warnings + self.notes,
        }
    }

    /// `79 files, 131 problems solved, 214 of 214 expectations met, 2 errors, 5 notes`.
    pub fn words(&self, style: Style) -> String {
        let mut parts = vec![counted(self.files, "file")];
        if self.problems == self.solved {
            parts.push(format!("{} solved", counted(self.problems, "problem")));
        } else {
            let words = format!("{} of {} solved", self.solved, counted(self.problems, "problem"));
            parts.push(style.paint(Paint::Bad, &words));
        }
        if self.expectations > 0 {
            let all = counted(self.expectations, "expectation");
            let words = format!("{} of {all} met", self.met);
            let paint = if self.met == self.expectations { Paint::Good } else { Paint::Bad };
            parts.push(style.paint(paint, &words));
        }
        for (count, what, paint) in [
            (self.errors, "error", Paint::Bad),
            (self.warnings, "warning", Paint::Doubtful),
            (self.notes, "note", Paint::Quiet),
        ] {
            if count > 0 {
                parts.push(style.paint(paint, &counted(count, what)));
            }
        }
        if self.count(Severity::Note) == 0 {
            parts.push("no findings".into());
        }
        parts.join(", ")
    }
}

/// `1 file`, `2 files`.
pub fn counted(count: usize, what: &str) -> String {
    if count == 1 { format!("1 {what}") } else { format!("{count} {what}s") }
}
