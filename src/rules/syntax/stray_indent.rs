//! A line is indented to a depth that belongs to nothing.
//!
//! Indentation says what belongs together: a line deeper than a statement continues it,
//! and the lines below a `case` are that case's, all at one depth. A line at another
//! depth is read as a statement where it stands, but which of the two was meant is not
//! clear to the next reader: an amount may seem to belong to one case and count in all.
//!
//! Before:
//!
//! ```lyate
//! case "winter"
//!         temperature 4 °C
//!     activity davies
//! ```
//!
//! After:
//!
//! ```lyate
//! case "winter"
//!     temperature 4 °C
//!     activity davies
//! ```

use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::text::problem::SyntaxProblemKind;
use crate::text::span::{Part, Place};
use crate::text::tree::Statement;

rule!("stray-indent", Warning, "stray_indent.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for (written, problem) in context.syntax() {
        if problem.kind == SyntaxProblemKind::StrayIndent {
            let at = written.place(problem.span);
            let is_case = matches!(written.statement(), Statement::Case { .. });
            let (message, help) = match (is_case, written.part) {
                (true, _) => ("a case is indented", "start it at the margin"),
                (false, Part::Base) => (
                    "the line is indented and continues nothing",
                    "start it at the margin, or write `case \"…\"` above it",
                ),
                (false, Part::Case) => (
                    "the line is indented to no depth of its case",
                    "start it where the other statements of the case start",
                ),
            };
            found.push(RULE.at(at, message).with_help(help));
        }
    }
}
