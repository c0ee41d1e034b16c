//! A character has no meaning in the language.
//!
//! Text pasted from a report or a spreadsheet may bring typographic quotes, invisible
//! spaces or bullets. Some of them cannot be seen at all, and a formula with one inside
//! is not the formula that it looks like.
//!
//! Before:
//!
//! ```lyate
//! problem “Rinse water, tank 3”
//! ```
//!
//! After:
//!
//! ```lyate
//! problem "Rinse water, tank 3"
//! ```

use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::text::problem::SyntaxProblemKind;
use crate::text::span::Place;

rule!("unknown-character", Error, "unknown_character.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for (written, problem) in context.syntax() {
        let SyntaxProblemKind::UnknownCharacter(character) = problem.kind else { continue };
        let at = written.place(problem.span);
        let text = context.text(at);
        if let Some(inside) = quoted(text) {
            let message = "a text stands in straight double quotes";
            let new = format!("\"{inside}\"");
            found.push(RULE.at(at, message).with_fix("write straight quotes", true, at, new));
            continue;
        }
        let code = u32::from(character);
        let message = if is_invisible(character) {
            format!("an invisible character, U+{code:04X}, has no meaning here")
        } else if !character.is_ascii() {
            format!("`{character}`, U+{code:04X}, has no meaning here")
        } else {
            format!("`{character}` has no meaning here")
        };
        let finding = RULE.at(at, message);
        found.push(if text.chars().all(is_invisible) {
            finding.with_fix("take it out", true, at, "")
        } else {
            finding.with_help("take it out, or put it into a comment after `#`")
        });
    }
}

/// The text between typographic quotes, where it holds no straight ones.
fn quoted(text: &str) -> Option<&str> {
    const QUOTES: [char; 4] = ['“', '”', '„', '"'];
    let inside = text.strip_prefix(QUOTES)?.strip_suffix(QUOTES)?;
    (!inside.contains('"')).then_some(inside)
}

/// Takes no room on the screen: a mark for joining, for direction, or of control.
fn is_invisible(c: char) -> bool {
    c.is_control()
        || matches!(c, '\u{AD}' | '\u{200B}'..='\u{200F}' | '\u{202A}'..='\u{202E}')
        || matches!(c, '\u{2060}'..='\u{2064}' | '\u{2066}'..='\u{206F}' | '\u{FEFF}')
}
