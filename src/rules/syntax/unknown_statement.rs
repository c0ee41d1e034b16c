//! A statement starts with a word that starts none.
//!
//! The first word of a statement says what it states: `add`, `total`, `reaction` and so
//! on. A line with another first word is not understood at all, so what it was meant to
//! say is missing from the problem. A reagent lost to a slip of the pen is a dose that
//! was never counted; nothing is solved until the word is put right. A line that was
//! meant to continue the statement above it is indented deeper than that statement.
//!
//! Before:
//!
//! ```lyate
//! component NH3
//! totl NH3 = 2 mmol/L
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
use crate::rules::words::names;
use crate::text::parse::KEYWORDS;
use crate::text::problem::SyntaxProblemKind;
use crate::text::span::{Place, Span};
use crate::text::token::Token;

rule!("unknown-statement", Error, "unknown_statement.rs", find);

/// Words that people try, with the statement that says it here.
const OTHER_WORDS: &[(&str, &str)] = &[
    ("pH", "hold"),
    ("pe", "hold"),
    ("title", "problem"),
    ("include", "use"),
    ("import", "use"),
    ("species", "component"),
    ("components", "component"),
    ("equilibrium", "reaction"),
    ("dose", "add"),
    ("reagent", "add"),
    ("model", "activity"),
    ("solid", "precipitate"),
    ("target", "expect"),
    ("check", "expect"),
    ("remove", "without"),
];

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for (written, problem) in context.syntax() {
        if let SyntaxProblemKind::UnknownStatement { word, nearest } = &problem.kind {
            let at = written.place(problem.span);
            let finding = RULE.at(at, format!("`{word}` starts no statement"));
            found.push(match nearest {
                Some(nearest) => with_example(finding, nearest).with_fix(
                    format!("write `{nearest}`"),
                    false,
                    at,
                    *nearest,
                ),
                None => explained(finding, &written, word),
            });
        }
    }
}

fn with_example(finding: Finding<Place>, keyword: &str) -> Finding<Place> {
    match example(keyword) {
        Some(example) => finding.with_help(format!("for example: {example}")),
        None => finding,
    }
}

/// What was meant, by what the rest of the line looks like.
fn explained(finding: Finding<Place>, written: &Written, word: &str) -> Finding<Place> {
    let start = written.place(Span::default());
    let before = |finding: Finding<Place>, keyword: &str| {
        let title = format!("write `{keyword}` before it");
        with_example(finding, keyword).with_fix(title, false, start, format!("{keyword} "))
    };
    let tokens = || written.parsed.tokens.iter().filter(|(token, _)| !token.is_trivia());
    if let Some((_, keyword)) = OTHER_WORDS.iter().find(|(other, _)| *other == word) {
        return with_example(finding, keyword);
    }
    if CLAUSES.contains(&word) {
        return finding.with_help(
            "a line that continues the statement above is indented deeper than it, \
             and a comma stands before each clause",
        );
    }
    if tokens().any(|(token, _)| matches!(token, Token::Arrow | Token::WrongArrow)) {
        return before(finding, "reaction");
    }
    match tokens().next().map(|(token, _)| *token) {
        Some(Token::Name) if tokens().nth(1).is_some_and(|(t, _)| *t == Token::Number) => {
            before(finding, "add")
        }
        Some(Token::LeftBracket) => finding.with_help(
            "a balance is written after its name: balance charge [H+] + [Na+] = [OH-]",
        ),
        _ => finding.with_help(format!("a statement starts with {}", names(&KEYWORDS, "or"))),
    }
}
