//! The catalogue of rules. A rule is a file of its own, whose opening comment is the page
//! that `lyate explain` and the editor show, and one line in its family.

use super::context::Context;
use super::finding::{Finding, Severity};
use crate::text::span::Place;

pub struct Rule {
    pub name: &'static str,
    pub severity: Severity,
    /// The rule's source; its opening comment is the page.
    pub source: &'static str,
    pub find: fn(&Context, &mut Vec<Finding<Place>>),
}

impl Rule {
    /// The page: what it means, why it matters, an example before and after. Markdown.
    pub fn page(&self) -> String {
        let mut page = format!("# {}\n\n", self.name);
        for line in self.source.lines().map_while(|line| line.strip_prefix("//!")) {
            page.push_str(line.strip_prefix(' ').unwrap_or(line));
            page.push('\n');
        }
        page
    }

    /// The page's first sentence.
    pub fn summary(&self) -> &'static str {
        let first = self.source.lines().next().unwrap_or_default();
        first.trim_start_matches("//!").trim()
    }

    /// A finding of this rule.
    pub fn at(&self, place: Place, message: impl Into<String>) -> Finding<Place> {
        Finding::new(self.name, self.severity, place, message)
    }
}

/// Every rule, family by family.
pub fn rules() -> impl Iterator<Item = &'static Rule> {
    super::FAMILIES.iter().flat_map(|family| family.rules.iter().copied())
}

pub fn find(name: &str) -> Option<&'static Rule> {
    rules().find(|rule| rule.name == name)
}

/// Rules on one subject.
pub struct Family {
    /// In a few words, such as `Reactions`.
    pub title: &'static str,
    pub rules: &'static [&'static Rule],
}

/// Declares the rules of a family: one line, the file's name, for each.
macro_rules! family {
    ($title:literal: $($module:ident),* $(,)?) => {
        $(pub mod $module;)*

        pub const FAMILY: crate::rules::catalogue::Family = crate::rules::catalogue::Family {
            title: $title,
            rules: &[$(&$module::RULE),*],
        };
    };
}
pub(crate) use family;

/// Declares the rule of a file: its name, severity, the file itself, and what finds it.
macro_rules! rule {
    ($name:literal, $severity:ident, $file:literal, $find:ident) => {
        pub const RULE: crate::rules::catalogue::Rule = crate::rules::catalogue::Rule {
            name: $name,
            severity: crate::rules::finding::Severity::$severity,
            source: include_str!($file),
            find: $find,
        };
    };
}
pub(crate) use rule;
