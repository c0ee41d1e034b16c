//! A constant of a written balance is wrong.
//!
//! The balance of a component adds up to its total, and a proton balance to the strong acids
//! and bases put in. A plain amount is right to half a unit of its last written digit; written
//! as `total X` or `added X`, it stays right when a case changes the amounts.
//!
//! A total copied from another sheet, or a salt counted once whose formula holds two, moves
//! the whole balance.
//!
//! Before:
//!
//! ```lyate
//! use aqueous
//! component NH3, SO4^2-
//! add (NH4)2SO4 12 mmol/L
//! balance NH3
//!     [NH4+] + [NH3] = 12 mmol/L
//! ```
//!
//! After:
//!
//! ```lyate
//! use aqueous
//! component NH3, SO4^2-
//! add (NH4)2SO4 12 mmol/L
//! balance NH3
//!     [NH4+] + [NH3] = total NH3
//! ```

use num_rational::Rational64;
use num_traits::{One, Signed};

use super::terms::{Wrong, bare, is_blocked, kind_words, term_text, term_words, wrong};
use crate::balance::Part;
use crate::balance::written::{Difference, TermOf};
use crate::problem::model::{BalanceKindResolved, WrittenTerm, WrittenWhat};
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::figures::{concentration, significant};
use crate::rules::finding::Finding;
use crate::text::span::Place;
use crate::text::tree::{Quantity, Statement, TermKind};

rule!("balance-amount-wrong", Error, "balance_amount_wrong.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    if is_blocked(context) {
        return;
    }
    for wrong in wrong(context) {
        for difference in wrong.differences {
            match difference {
                Difference::WrongConstant { index, should_be, coefficient } => {
                    let Some(term) = wrong.term(*index) else { continue };
                    found.push(constant(context, &wrong, term, (*should_be, *coefficient)));
                }
                Difference::WrongAmount { index, should_be } => {
                    let Some(term) = wrong.term(*index) else { continue };
                    found.push(amount(context, &wrong, term, *should_be));
                }
                _ => {}
            }
        }
    }
}

fn constant(
    context: &Context,
    wrong: &Wrong,
    term: &WrittenTerm,
    (part, coefficient): (Part, Rational64),
) -> Finding<Place> {
    let problem = context.problem;
    let name = context.text(term.at);
    let should_be = TermOf::Constant(part);
    let words = term_words(problem, should_be, coefficient);
    let of = kind_words(problem, wrong.balance.kind);
    let finding = RULE.at(term.at, format!("`{name}` in {of} should be `{words}`"));
    let text = term_text(problem, should_be, coefficient);
    match text.filter(|_| coefficient.is_positive() && term.coefficient.is_positive()) {
        Some(text) => finding.with_fix(format!("write `{text}`"), false, term.at, text),
        None => finding,
    }
}

fn amount(
    context: &Context,
    wrong: &Wrong,
    term: &WrittenTerm,
    should_be: f64,
) -> Finding<Place> {
    let problem = context.problem;
    let name = bare(context, term);
    let of = kind_words(problem, wrong.balance.kind);
    let quantity = quantity_at(context, term);
    let written = quantity.and_then(|quantity| in_its_unit(quantity, term, should_be));
    let needed = match (&written, quantity.and_then(|q| q.unit.as_ref())) {
        (Some(number), Some(unit)) => format!("{number} {}", unit.value),
        _ => concentration(should_be, problem.scale),
    };
    let mut finding = RULE.at(term.at, format!("`{name}` in {of} should be {needed}"));
    if let BalanceKindResolved::Component(j) = wrong.balance.kind
        && term.coefficient.is_one()
        && is_only_constant(wrong, term)
    {
        let total = format!("total {}", problem.scope.components[j].formula.name);
        finding = finding.with_fix(format!("write `{total}`"), false, term.at, total);
    }
    if let (Some(number), Some(quantity)) = (written, quantity) {
        let at = Place { span: quantity.number.span, ..term.at };
        finding = finding.with_fix(format!("write {number}"), false, at, number);
    }
    finding
}

/// Whether all other terms are species, so that the whole total stands in this one.
fn is_only_constant(wrong: &Wrong, term: &WrittenTerm) -> bool {
    let mut terms = wrong.balance.left.iter().chain(&wrong.balance.right);
    terms.all(|other| other.at == term.at || matches!(other.what, WrittenWhat::Species(_)))
}

fn quantity_at<'a>(context: &Context<'a>, term: &WrittenTerm) -> Option<&'a Quantity> {
    match context.statement(term.at)?.statement() {
        Statement::Balance { left, right, .. } => {
            left.iter().chain(right).find_map(|tree| match &tree.what {
                TermKind::Amount(quantity) if tree.span == term.at.span => Some(quantity),
                _ => None,
            })
        }
        _ => None,
    }
}

/// The number to write, in the unit and to the digits written; more digits where those do
/// not reach it.
fn in_its_unit(quantity: &Quantity, term: &WrittenTerm, should_be: f64) -> Option<String> {
    let WrittenWhat::Amount { value, half_digit } = term.what else { return None };
    let per_unit = if quantity.number.value != 0.0 {
        value / quantity.number.value
    } else {
        half_digit / quantity.number.half_digit
    };
    let number = should_be / per_unit;
    if !number.is_finite() || number <= 0.0 {
        return None;
    }
    let digits = (number / (2.0 * quantity.number.half_digit)).log10().floor() + 1.0;
    Some(significant(number, (digits.clamp(2.0, 8.0)) as usize))
}
