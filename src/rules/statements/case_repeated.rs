//! Two cases have the same title.
//!
//! A case is named by its title wherever its answer is shown, and `--case` picks it by
//! that name. Two of one title cannot be told apart in a report.
//!
//! Before:
//!
//! ```lyate
//! case "winter"
//!     temperature 4 °C
//! case "winter"
//!     temperature 8 °C
//! ```
//!
//! After:
//!
//! ```lyate
//! case "winter"
//!     temperature 4 °C
//! case "spring"
//!     temperature 8 °C
//! ```

use std::collections::HashMap;
use std::ops::Range;

use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::{Finding, LocatedFinding};
use crate::text::span::Place;
use crate::text::tree::{Document, Statement};

rule!("case-repeated", Warning, "case_repeated.rs", find);

/// A case alone cannot know of another: [`in_file`] finds it.
fn find(_: &Context, _: &mut Vec<Finding<Place>>) {}

/// The cases of a file that have the title of one above them.
pub fn in_file(document: &Document) -> Vec<LocatedFinding> {
    let mut first: HashMap<&str, Range<usize>> = HashMap::new();
    let mut found = Vec::new();
    for placed in document.sections.iter().skip(1).filter_map(|s| s.statements.first()) {
        let Statement::Case { title } = &placed.parsed.statement else { continue };
        let range = title.span.range();
        let at = placed.start + range.start..placed.start + range.end;
        match first.get(title.value.as_str()) {
            Some(other) => {
                let message = format!("another case is called \"{}\" too", title.value);
                found.push(
                    Finding::new(RULE.name, RULE.severity, at, message)
                        .with_help("give it a title of its own")
                        .with_related(other.clone(), "the first one"),
                );
            }
            None => {
                first.insert(&title.value, at);
            }
        }
    }
    found
}
