//! A written balance lacks a term.
//!
//! The balance is compared with the one that the reactions imply, up to a factor. Every
//! species that carries charge stands in the charge balance, every species that holds the
//! component in its mass balance, and every one that holds more or fewer protons than the
//! forms put in, in the proton balance.
//!
//! A term left out as too small belongs in the check all the same: it may be the one that
//! counts at another pH or dose. How much it counts here is shown beside the balance.
//!
//! Before:
//!
//! ```lyate
//! use aqueous
//! component NH3, SO4^2-
//! add (NH4)2SO4 12 mmol/L
//! balance charge
//!     [H+] + [NH4+] = [OH-] + 2 [SO4^2-]
//! ```
//!
//! After:
//!
//! ```lyate
//! use aqueous
//! component NH3, SO4^2-
//! add (NH4)2SO4 12 mmol/L
//! balance charge
//!     [H+] + [NH4+] = [OH-] + [HSO4-] + 2 [SO4^2-]
//! ```

use super::terms::{is_blocked, kind_words, on, term_text, term_words, wrong};
use crate::balance::written::{Difference, Side, TermOf};
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::rules::words::names;
use crate::text::span::Place;

rule!("balance-term-missing", Error, "balance_term_missing.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    let problem = context.problem;
    for wrong in wrong(context) {
        // One finding for each side, at that side.
        for side in [Side::Left, Side::Right] {
            let missing: Vec<_> = wrong
                .differences
                .iter()
                .filter_map(|difference| match difference {
                    Difference::MissingTerm { term, coefficient, side: own } if *own == side => {
                        Some((*term, *coefficient))
                    }
                    _ => None,
                })
                .filter(|(term, _)| matches!(term, TermOf::Species(_)) || !is_blocked(context))
                .collect();
            if missing.is_empty() {
                continue;
            }
            let words: Vec<String> =
                missing.iter().map(|&(term, n)| term_words(problem, term, n)).collect();
            let verb = if words.len() == 1 { "is" } else { "are" };
            let message = format!(
                "{} {verb} missing {} of {}",
                names(&words, "and"),
                on(side),
                kind_words(problem, wrong.balance.kind),
            );
            let mut finding = RULE.at(wrong.whole_side(side), message);
            let texts: Option<Vec<String>> =
                missing.iter().map(|&(term, n)| term_text(problem, term, n)).collect();
            if let Some(edit) = texts.and_then(|texts| wrong.append(side, &texts)) {
                finding = finding.with_edits(format!("add {}", names(&words, "and")), false, vec![edit]);
            }
            found.push(finding);
        }
    }
}
