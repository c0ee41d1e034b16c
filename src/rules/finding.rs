//! A finding: what is wrong, where, how bad, and what to write instead.

use std::ops::Range;

/// What was found. `L` says where: a [`crate::text::span::Place`] while rules run, so
/// that findings survive edits elsewhere; a byte range of the file once located.
#[derive(Clone, Debug, PartialEq)]
pub struct Finding<L> {
    /// The rule's name in the catalogue, such as `charge-not-conserved`.
    pub rule: &'static str,
    pub severity: Severity,
    /// One plain sentence with the figures.
    pub message: String,
    pub at: L,
    /// Other places that belong to it, each with a few words.
    pub related: Vec<(L, String)>,
    /// What to do, where that is not a mechanical fix.
    pub help: Option<String>,
    pub fixes: Vec<Fix<L>>,
    /// The title of the case it was found in; none for the base.
    pub case: Option<String>,
}

/// A replacement of text that cures a finding.
#[derive(Clone, Debug, PartialEq)]
pub struct Fix<L> {
    pub title: String,
    /// Whether it may be applied unasked: it never changes what a reader understood.
    pub safe: bool,
    pub edits: Vec<(L, String)>,
}

/// How a finding is to be taken; from the mildest fault to the worst, cautions before all.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Severity {
    /// No fault of the file: what it asks for can hurt someone.
    Caution,
    Note,
    Warning,
    Error,
}

/// Which findings make a check fail.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Failing {
    /// The mildest fault that does.
    pub at_least: Severity,
    /// Whether a caution does: only where somebody asks for that.
    pub cautions: bool,
}

impl Failing {
    pub fn includes(self, severity: Severity) -> bool {
        match severity {
            Severity::Caution => self.cautions,
            fault => fault >= self.at_least,
        }
    }
}

/// A finding at byte ranges of its file.
pub type LocatedFinding = Finding<Range<usize>>;

impl<L> Finding<L> {
    pub fn new(rule: &'static str, severity: Severity, at: L, message: impl Into<String>) -> Self {
        Self {
            rule,
            severity,
            message: message.into(),
            at,
            related: Vec::new(),
            help: None,
            fixes: Vec::new(),
            case: None,
        }
    }

    /// Where this finding is less, or more, bad than its rule's others.
    pub fn with_severity(mut self, severity: Severity) -> Self {
        self.severity = severity;
        self
    }

    pub fn with_help(mut self, help: impl Into<String>) -> Self {
        self.help = Some(help.into());
        self
    }

    pub fn with_related(mut self, at: L, words: impl Into<String>) -> Self {
        self.related.push((at, words.into()));
        self
    }

    /// Adds a fix that replaces the text at one place.
    pub fn with_fix(
        self,
        title: impl Into<String>,
        safe: bool,
        at: L,
        text: impl Into<String>,
    ) -> Self {
        self.with_edits(title, safe, vec![(at, text.into())])
    }

    pub fn with_edits(
        mut self,
        title: impl Into<String>,
        safe: bool,
        edits: Vec<(L, String)>,
    ) -> Self {
        self.fixes.push(Fix { title: title.into(), safe, edits });
        self
    }

    /// The same finding with its places given in another way.
    pub fn map<M>(self, locate: impl Fn(L) -> M) -> Finding<M> {
        Finding {
            rule: self.rule,
            severity: self.severity,
            message: self.message,
            at: locate(self.at),
            related: self.related.into_iter().map(|(at, words)| (locate(at), words)).collect(),
            help: self.help,
            fixes: self
                .fixes
                .into_iter()
                .map(|fix| Fix {
                    title: fix.title,
                    safe: fix.safe,
                    edits: fix.edits.into_iter().map(|(at, text)| (locate(at), text)).collect(),
                })
                .collect(),
            case: self.case,
        }
    }
}
