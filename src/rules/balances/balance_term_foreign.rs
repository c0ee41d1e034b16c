//! A written balance holds a term that does not belong, or holds it twice.
//!
//! A neutral species has no place in a charge balance, a species without the component none
//! in its mass balance, and a form that was put in none in the proton balance, since it is
//! the level from which protons are counted.
//!
//! Mostly it is a term that was carried over from another balance. It counts matter or charge
//! that the balance is not about.
//!
//! Before:
//!
//! ```lyate
//! use aqueous
//! component NH3, Cl-
//! add NH4Cl 12 mmol/L
//! balance charge
//!     [H+] + [NH4+] + [NH3] = [OH-] + [Cl-]
//! ```
//!
//! After:
//!
//! ```lyate
//! use aqueous
//! component NH3, Cl-
//! add NH4Cl 12 mmol/L
//! balance charge
//!     [H+] + [NH4+] = [OH-] + [Cl-]
//! ```

use super::terms::{bare, is_blocked, kind_words, wrong};
use crate::balance::written::Difference;
use crate::problem::model::{BalanceKindResolved, WrittenTerm, WrittenWhat};
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::text::span::Place;

rule!("balance-term-foreign", Error, "balance_term_foreign.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for wrong in wrong(context) {
        let kind = wrong.balance.kind;
        for difference in wrong.differences {
            let (index, twice) = match difference {
                Difference::ForeignTerm { index } => (*index, false),
                Difference::RepeatedTerm { index } => (*index, true),
                _ => continue,
            };
            let Some(term) = wrong.term(index) else { continue };
            if is_blocked(context) && !matches!(term.what, WrittenWhat::Species(_)) {
                continue;
            }
            let name = bare(context, term);
            let of = kind_words(context.problem, kind);
            let message = if twice {
                format!("`{name}` stands in {of} already")
            } else {
                format!("`{name}` does not belong in {of}{}", reason(context, kind, term))
            };
            let mut finding = RULE.at(term.at, message);
            if let Some(edit) = wrong.remove(index) {
                finding = finding.with_edits(format!("take `{name}` out"), false, vec![edit]);
            }
            found.push(finding);
        }
    }
}

fn reason(context: &Context, kind: BalanceKindResolved, term: &WrittenTerm) -> String {
    let WrittenWhat::Species(row) = term.what else { return String::new() };
    let species = &context.problem.scope.stoichiometry.species[row];
    match kind {
        BalanceKindResolved::Charge if species.charge == 0 => ": it carries no charge".to_owned(),
        BalanceKindResolved::Component(j) if species.row.iter().all(|&(k, _)| k != j) => {
            format!(": it holds no `{}`", kind.words(&context.problem.scope))
        }
        BalanceKindResolved::Protons => ": it is at the reference level".to_owned(),
        _ => String::new(),
    }
}
