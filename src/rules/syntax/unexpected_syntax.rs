//! Something stands where the statement needs something else.
//!
//! Each statement has its own order of words, signs and numbers. Where the order breaks,
//! the finding names what may stand there, and gives the statement as it is usually
//! written. The broken statement counts for nothing, and its neighbours are read as
//! ever; a problem with a broken amount or reaction is not solved, since the answer
//! would be one to another question.
//!
//! Before:
//!
//! ```lyate
//! component NH3
//! total NH3 2 mmol/L
//! ```
//!
//! After:
//!
//! ```lyate
//! component NH3
//! total NH3 = 2 mmol/L
//! ```

use super::forms::{CLAUSES, example};
use crate::problem::effective::Written;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::rules::words::list;
use crate::text::problem::SyntaxProblemKind;
use crate::text::span::{Place, Span};
use crate::text::token::Token;

rule!("unexpected-syntax", Error, "unexpected_syntax.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for (written, problem) in context.syntax() {
        if let SyntaxProblemKind::Unexpected { found: text, expected } = &problem.kind {
            let at = written.place(problem.span);
            let mut finding = RULE.at(at, message(text, expected));
            let first = written.parsed.text.split_whitespace().next().unwrap_or_default();
            let in_expression = expected.iter().any(|words| words.contains("T, log("))
                || expected.iter().any(|words| words.starts_with("`+`"));
            let example = if in_expression {
                Some("log K(T) = 3.165 - 1170.5/T - 0.0134*T")
            } else {
                example(first)
            };
            if let Some(example) = example {
                finding = finding.with_help(format!("for example: {example}"));
            }
            found.push(with_fixes(finding, &written, text, expected));
        }
    }
}

fn message(text: &str, expected: &[String]) -> String {
    let needed = list(expected, "or");
    match (text.is_empty(), expected) {
        (true, []) => "the statement is not complete".into(),
        (true, _) => format!("the statement ends where {needed} is needed"),
        (false, []) => format!("`{text}` has no meaning here"),
        (false, [only]) if only == "the end of the statement" => {
            format!("`{text}` stands after the end of the statement")
        }
        (false, _) => format!("`{text}` stands where {needed} is needed"),
    }
}

/// One-way arrows may be meant as such; all others say that the reaction goes both ways.
const ONE_WAY: [&str; 6] = ["->", "-->", "→", "⟶", "=>", "==>"];

fn with_fixes(
    mut finding: Finding<Place>,
    written: &Written,
    text: &str,
    expected: &[String],
) -> Finding<Place> {
    let at = finding.at;
    let code = |words: &str| -> Option<String> {
        let inside = words.strip_prefix('`')?.strip_suffix('`')?.trim();
        // Several in one expectation are no one thing to write.
        (!inside.contains('`')).then(|| inside.to_owned())
    };
    // A formula on its own: `[X]`, `{X}` and, after the two, a gas.
    if expected.first().is_some_and(|first| *first == format!("`[{text}]`")) {
        let gas = format!("{text}(g)");
        for new in expected.iter().filter_map(|words| code(words)).chain([gas]) {
            finding = finding.with_fix(format!("write `{new}`"), false, at, new);
        }
        return finding;
    }
    if let [only] = expected
        && let Some(new) = code(only)
    {
        let title = format!("write `{new}`");
        let is_arrow = new == "<=>" && (text == "=" || !is_plain(text));
        let before = Place { span: Span { end: at.span.start, ..at.span }, ..at };
        return if is_arrow || is_misspelt(text, &new) {
            finding.with_fix(title, is_arrow && !ONE_WAY.contains(&text), at, new)
        } else if is_closing(&new) {
            finding.with_fix(title, false, end_of_last(written, before), new)
        } else if text.is_empty() {
            // More is missing than this one sign.
            finding
        } else {
            finding.with_fix(title, false, before, new + " ")
        };
    }
    if let [only] = expected
        && only == "the end of the statement"
        && follows_unit(written, at, text)
    {
        let title = format!("write `as {text}`");
        return finding.with_fix(title, false, at, format!("as {text}"));
    }
    if !text.is_empty() && expected.iter().any(|words| words == "a comma") {
        let place = end_of_last(written, at);
        finding = finding.with_fix("write a comma", CLAUSES.contains(&text), place, ",");
    }
    finding
}

fn is_plain(text: &str) -> bool {
    text.is_empty() || text.chars().any(char::is_alphanumeric)
}

fn is_closing(sign: &str) -> bool {
    matches!(sign, "]" | "}" | ")")
}

/// Whether one word was most likely meant for another.
fn is_misspelt(text: &str, word: &str) -> bool {
    is_plain(word)
        && text.starts_with(|c: char| c.is_ascii_lowercase())
        && strsim::damerau_levenshtein(text, word) <= word.len() / 3
}

/// Whether an element stands after a quantity, as in `3 mg/L P`.
fn follows_unit(written: &Written, at: Place, text: &str) -> bool {
    let takes_basis = ["total", "add", "hold", "expect"]
        .iter()
        .any(|word| written.parsed.text.starts_with(word));
    let before = last_before(written, at);
    takes_basis
        && text.starts_with(|c: char| c.is_ascii_uppercase())
        && before.is_some_and(|(token, _)| matches!(token, Token::Name | Token::Word))
}

/// Just after the last thing that stands before a place.
fn end_of_last(written: &Written, at: Place) -> Place {
    let end = last_before(written, at).map_or(at.span.start, |(_, span)| span.end);
    Place { span: Span { start: end, end }, ..at }
}

/// The last token before a place that is neither white space nor a comment.
fn last_before(written: &Written, at: Place) -> Option<(Token, Span)> {
    let tokens = &written.parsed.tokens;
    let before = tokens.partition_point(|(_, span)| span.end <= at.span.start);
    tokens[..before].iter().rev().find(|(token, _)| !token.is_trivia()).copied()
}
