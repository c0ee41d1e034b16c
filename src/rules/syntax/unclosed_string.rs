//! A text in quotes does not end on its line.
//!
//! A title or a source stands in double quotes on one line. Without the second quote
//! the rest of the line, clauses and comments with it, becomes part of the text: a
//! constant or a limit that stood there would silently be gone.
//!
//! Before:
//!
//! ```lyate
//! problem "Condensate return, line 2
//! ```
//!
//! After:
//!
//! ```lyate
//! problem "Condensate return, line 2"
//! ```

use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::text::problem::SyntaxProblemKind;
use crate::text::span::{Place, Span};

rule!("unclosed-string", Error, "unclosed_string.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for (written, problem) in context.syntax() {
        if problem.kind != SyntaxProblemKind::UnclosedString {
            continue;
        }
        let at = written.place(problem.span);
        let text = context.text(at);
        let kept = text.trim_end();
        let start = problem.span.start as usize;
        let mut edits = Vec::new();
        // A typographic quote becomes a straight one, as the language has it.
        if let Some(quote) = text.chars().next().filter(|c| *c != '"') {
            edits.push((written.place(Span::new(start, start + quote.len_utf8())), "\"".into()));
        }
        let end = start + kept.len();
        edits.push((written.place(Span::new(end, end)), "\"".to_owned()));
        let message = "the text in quotes does not end on its line";
        found.push(RULE.at(at, message).with_edits("close it at the end of the line", true, edits));
    }
}
