//! A term of a written balance has the wrong coefficient, or stands on the wrong side.
//!
//! In a charge balance the coefficient is the charge of the ion: [SO4^2-] counts twice. In a
//! mass balance it is how many of the component the species holds, in the proton balance how
//! many protons it holds above or below the forms put in. A common factor of the whole
//! balance does not matter.
//!
//! It is the classic slip of a hand calculation: half the sulfate's charge forgotten is a
//! caustic dose out by as much.
//!
//! Before:
//!
//! ```lyate
//! use aqueous
//! component NH3, SO4^2-
//! add (NH4)2SO4 12 mmol/L
//! balance charge
//!     [H+] + [NH4+] = [OH-] + [HSO4-] + [SO4^2-]
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

use num_rational::Rational64;
use num_traits::{One, Signed};

use super::terms::{Wrong, bare, is_blocked, kind_words, on, other, wrong};
use crate::balance::written::Difference;
use crate::problem::model::{BalanceKindResolved, WrittenTerm, WrittenWhat};
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::rules::words::signed;
use crate::text::span::{Place, Span};

rule!("balance-coefficient-wrong", Error, "balance_coefficient_wrong.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for wrong in wrong(context) {
        for difference in wrong.differences {
            let (index, should_be) = match difference {
                Difference::WrongCoefficient { index, should_be } => (*index, Some(*should_be)),
                Difference::WrongSide { index } => (*index, None),
                _ => continue,
            };
            let Some(term) = wrong.term(index) else { continue };
            if is_blocked(context) && !matches!(term.what, WrittenWhat::Species(_)) {
                continue;
            }
            let should_be = should_be.unwrap_or(-term.coefficient);
            found.push(finding(context, &wrong, (index, term, should_be)));
        }
    }
}

fn finding(
    context: &Context,
    wrong: &Wrong,
    (index, term, should_be): (usize, &WrittenTerm, Rational64),
) -> Finding<Place> {
    let name = bare(context, term);
    let of = kind_words(context.problem, wrong.balance.kind);
    let count = should_be.abs();
    if should_be.is_negative() != term.coefficient.is_negative() {
        // It has to change sides; one behind a minus turns into a sum on its own.
        let side = wrong.side(index);
        let to = if should_be.is_negative() { other(side) } else { side };
        let amount = if count.is_one() { name.to_owned() } else { format!("{count} {name}") };
        let message = if to == side {
            format!("`{name}` adds to this side of {of}, and is taken off it")
        } else if count == term.coefficient.abs() {
            format!("`{name}` belongs {} of {of}", on(to))
        } else {
            format!("`{name}` belongs {} of {of}, with the coefficient {count}", on(to))
        };
        let finding = RULE.at(term.at, message);
        return match wrong.remove(index).zip(wrong.append(to, &[amount])) {
            // Both edits may not touch one place.
            Some((cut, added)) if cut.0.span.end <= added.0.span.start
                || added.0.span.end <= cut.0.span.start =>
            {
                finding.with_edits(format!("move it {}", on(to)), false, vec![cut, added])
            }
            _ => finding,
        };
    }
    let at = term.coefficient_at.unwrap_or(term.at);
    let message = format!(
        "the coefficient of `{name}` in {of} is {} and should be {count}{}",
        term.coefficient.abs(),
        reason(context, wrong.balance.kind, term, count),
    );
    let (edit_at, text) = match term.coefficient_at {
        Some(own) if count.is_one() => {
            // With the space between it and its term.
            let whole = context.text(term.at);
            let start = term.at.span.end - (whole.len().min(name.len())) as u32;
            (Place { span: Span { start: own.span.start, end: start }, ..own }, String::new())
        }
        Some(own) => (own, count.to_string()),
        None => {
            let start = term.at.span.start;
            (Place { span: Span { start, end: start }, ..term.at }, format!("{count} "))
        }
    };
    let title = format!("write the coefficient {count}");
    RULE.at(at, message).with_fix(title, false, edit_at, text)
}

fn reason(
    context: &Context,
    kind: BalanceKindResolved,
    term: &WrittenTerm,
    count: Rational64,
) -> String {
    let WrittenWhat::Species(row) = term.what else { return String::new() };
    let species = &context.problem.scope.stoichiometry.species[row];
    let charge = Rational64::from(i64::from(species.charge));
    match kind {
        BalanceKindResolved::Charge if charge.abs() == count => {
            format!(": its charge is {}", signed(charge))
        }
        BalanceKindResolved::Component(j) => {
            let held = species.row.iter().find(|&&(k, _)| k == j).map(|&(_, n)| n);
            match held {
                Some(held) if held == count => {
                    format!(": it holds {held} `{}`", kind.words(&context.problem.scope))
                }
                _ => String::new(),
            }
        }
        _ => String::new(),
    }
}
