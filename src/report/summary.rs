//! How much was checked and what came of it, in numbers and as one line.

use super::expectation::verdict;
use super::source::{FileReport, Stated};
use super::style::{Paint, Style};
use crate::rules::finding::{Failing, Severity};

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
    pub cautions: usize,
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
                let Some(solved) = outcome.solved() else { continue };
                summary.solved += 1;
                let met = |e: &&_| verdict(&outcome.problem, solved, e).met;
                summary.met += expectations.iter().filter(met).count();
            }
            for finding in &file.findings {
                *match finding.severity {
                    Severity::Error => &mut summary.errors,
                    Severity::Warning => &mut summary.warnings,
                    Severity::Note => &mut summary.notes,
                    Severity::Caution => &mut summary.cautions,
                } += 1;
            }
        }
        summary
    }

    /// How many findings make the check fail.
    pub fn failing(&self, failing: Failing) -> usize {
        [
            (Severity::Error, self.errors),
            (Severity::Warning, self.warnings),
            (Severity::Note, self.notes),
            (Severity::Caution, self.cautions),
        ]
        .iter()
        .filter(|(severity, _)| failing.includes(*severity))
        .map(|(_, count)| count)
        .sum()
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
            (self.cautions, "caution", Paint::Doubtful),
        ] {
            if count > 0 {
                parts.push(style.paint(paint, &counted(count, what)));
            }
        }
        if self.errors + self.warnings + self.notes + self.cautions == 0 {
            parts.push("no findings".into());
        }
        parts.join(", ")
    }
}

/// `1 file`, `2 files`.
pub fn counted(count: usize, what: &str) -> String {
    if count == 1 { format!("1 {what}") } else { format!("{count} {what}s") }
}
