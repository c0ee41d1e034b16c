//! The shares of a blend do not make a whole.
//!
//! Shares in percent come to 100 %: what is lacking is some water that is not named, and what
//! is too much is counted twice. Where the proportions are what is known, write plain numbers:
//! `blend 3 of "river.lyate", 1 of "well.lyate"` is three parts to one, whatever they come to.
//!
//! A blend that is a few percent out puts the hardness and the alkalinity out by as much, and
//! a dose with them.
//!
//! Before:
//!
//! ```lyate
//! component Na+, Cl-
//! blend 70 % of "river.lyate", 40 % of "well.lyate"
//! ```
//!
//! ```lyate river.lyate
//! component Na+, Cl-
//! add NaCl 0.4 mmol/L
//! ```
//!
//! ```lyate well.lyate
//! component Na+, Cl-
//! add NaCl 2.1 mmol/L
//! ```
//!
//! After:
//!
//! ```lyate
//! component Na+, Cl-
//! blend 60 % of "river.lyate", 40 % of "well.lyate"
//! ```
//!
//! ```lyate river.lyate
//! component Na+, Cl-
//! add NaCl 0.4 mmol/L
//! ```
//!
//! ```lyate well.lyate
//! component Na+, Cl-
//! add NaCl 2.1 mmol/L
//! ```

use crate::problem::defect::DefectKind;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::figures::significant;
use crate::rules::finding::Finding;
use crate::text::span::Place;
use crate::text::tree::{BlendPart, Statement};

rule!("blend-shares-wrong", Error, "blend_shares_wrong.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for defect in context.defects() {
        let (message, help) = match &defect.kind {
            DefectKind::BlendSharesSum { percent } => (
                format!("the shares come to {} % and not to 100 %", sum_words(*percent)),
                "put a share right, or write the proportions as plain numbers of parts",
            ),
            DefectKind::BlendSharesMixed => (
                "some shares are in percent and others are parts".to_owned(),
                "write all of them with `%`, or none",
            ),
            DefectKind::BlendOfNothing => {
                ("all shares are zero".to_owned(), "give at least one water a share")
            }
            _ => continue,
        };
        let mut finding = RULE.at(defect.at, message).with_help(help);
        if let (DefectKind::BlendSharesSum { .. }, Some(Statement::Blend { parts })) =
            (&defect.kind, context.statement(defect.at).map(|written| written.statement()))
            && let [first, last] = &parts[..]
            && let Some(rest) = rest_of(first)
        {
            let at = Place { span: last.share.number.span, ..defect.at };
            finding = finding.with_fix(format!("make the other {rest} %"), false, at, rest);
        }
        found.push(finding);
    }
}

/// What the other of two shares must be, in as many digits as its own; none where nothing is
/// left for it.
fn rest_of(part: &BlendPart) -> Option<String> {
    let number = &part.share.number;
    let places = number.text.split_once('.').map_or(0, |(_, places)| places.len());
    let rest = 100.0 - number.value;
    (rest > 0.0 && places <= 9 && !number.text.contains(['e', 'E', '^'])
        && number.text.bytes().all(|b| b.is_ascii_digit() || b == b'.'))
    .then(|| format!("{rest:.places$}"))
}

/// Four figures, or more where that would read 100.
fn sum_words(percent: f64) -> String {
    (4..=12)
        .map(|digits| significant(percent, digits))
        .find(|words| trimmed(words) != "100")
        .map_or_else(|| percent.to_string(), |words| trimmed(&words))
}

fn trimmed(words: &str) -> String {
    match words.contains('.') {
        true => words.trim_end_matches('0').trim_end_matches('.').to_owned(),
        false => words.to_owned(),
    }
}
