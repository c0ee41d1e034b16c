//! A number cannot be read.
//!
//! Numbers are written `0.01`, `1e-2`, `10^-2` or `3×10^-4`: decimals after a full stop,
//! and a digit on both sides of it. A decimal comma, a thousands separator or a second
//! full stop leaves open which number is meant, and a number of more than about 308
//! digits is no amount of anything. A decimal that slips by a factor of a thousand is a
//! dose a thousand times too large, so nothing is guessed.
//!
//! Before:
//!
//! ```lyate
//! component Na+
//! add NaOH 1,5 mmol/L
//! ```
//!
//! After:
//!
//! ```lyate
//! component Na+
//! add NaOH 1.5 mmol/L
//! ```

use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::text::number;
use crate::text::problem::SyntaxProblemKind;
use crate::text::span::Place;

rule!("broken-number", Error, "broken_number.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for (written, problem) in context.syntax() {
        if let SyntaxProblemKind::BrokenNumber { text } = &problem.kind {
            let at = written.place(problem.span);
            let (why, mended) = look(text);
            let mut finding = RULE.at(at, format!("`{text}` {why}"));
            for (safe, new) in mended {
                if number::read(&new).is_some() {
                    finding = finding.with_fix(format!("write `{new}`"), safe, at, new);
                }
            }
            if finding.fixes.is_empty() {
                finding = finding.with_help("write it as 0.01, 1e-2, 10^-2 or 3×10^-4");
            }
            found.push(finding);
        }
    }
}

/// What is wrong with it, and the numbers that it may be meant for: each with whether
/// there is no doubt.
fn look(text: &str) -> (&'static str, Vec<(bool, String)>) {
    if let Some((whole, rest)) = text.split_once(',') {
        let digits = rest.find(|c: char| !c.is_ascii_digit()).unwrap_or(rest.len());
        let point = text.replacen(',', ".", 1);
        // `1,500` may be either; `0,500` and `1,50` can only be decimals.
        let is_decimal = !rest.contains(',') && (digits != 3 || whole == "0");
        return if is_decimal {
            ("is no number: decimals stand after a full stop", vec![(true, point)])
        } else if rest.contains(',') {
            ("is no number: write it without separators", vec![(false, text.replace(',', ""))])
        } else {
            let whole = (false, text.replace(',', ""));
            ("may be a decimal or have its thousands parted", vec![(false, point), whole])
        };
    }
    if text.contains(['_', '\'', '’']) {
        let joined = text.replace(['_', '\'', '’'], "");
        return ("is no number: write it without separators", vec![(true, joined)]);
    }
    if text.starts_with('.') {
        return ("is no number: a digit stands before the full stop", vec![(true, format!("0{text}"))]);
    }
    if let Some(whole) = text.strip_suffix('.') {
        return ("is no number: a digit stands after the full stop", vec![(true, whole.to_owned())]);
    }
    if text.matches('.').count() > 1 {
        return ("is no number: it has more than one full stop", Vec::new());
    }
    if text.ends_with(|c: char| !c.is_ascii_digit()) {
        return ("is no number: its exponent has no digits", Vec::new());
    }
    let small = text.contains("e-") || text.contains("e−") || text.contains("^-");
    let small = small || text.contains('⁻') || text.starts_with("0.");
    if small {
        ("is too small to be told from zero", Vec::new())
    } else {
        ("is too large to be a number", Vec::new())
    }
}
