//! Written balances held against those that the reactions and the recipe imply.

use crate::balance::proton::proton_condition;
use crate::balance::recipe::Recipe;
use crate::balance::written::{Side, Verdict, WrittenTerm, WrittenWhat, compare};
use crate::balance::{BalanceKind, Part};
use crate::problem::model::{self, BalanceKindResolved, Presence, Problem, WrittenBalance};
use crate::text::span;

/// A written balance, by its index in the problem, and what it was found to be.
#[derive(Debug)]
pub struct Compared {
    pub balance: usize,
    pub verdict: Verdict,
}

/// Compares every balance whose terms could all be read. `brought` is what each held value
/// and each solid brought, where that is known. `same_sources` says that this is a case with the base's
/// reactions and sources, so that only plain amounts in a balance of the base can differ.
pub fn compared(problem: &Problem, brought: Option<&[f64]>, same_sources: bool) -> Vec<Compared> {
    // What forms in one case does not in another.
    let forms = problem.solids_that_are(Presence::Forms).next().is_some();
    let is_new = |balance: &WrittenBalance| {
        !same_sources
            || forms
            || balance.at.section == span::Part::Case
            || balance
                .left
                .iter()
                .chain(&balance.right)
                .any(|term| matches!(term.what, model::WrittenWhat::Amount { .. }))
    };
    // While doses are to be found, no amount of theirs can be right or wrong.
    let can_tell = |balance: &WrittenBalance| {
        let sides = balance.left.iter().chain(&balance.right);
        let is_amount =
            |term: &model::WrittenTerm| matches!(term.what, model::WrittenWhat::Amount { .. });
        !problem.lacks_doses() || !sides.into_iter().any(is_amount)
    };
    let wanted =
        |balance: &WrittenBalance| balance.complete && is_new(balance) && can_tell(balance);
    if !problem.balances.iter().any(wanted) {
        return Vec::new();
    }
    let stoichiometry = &problem.scope.stoichiometry;
    let recipe = Recipe::of(problem, brought);
    let about_protons = |balance: &WrittenBalance| balance.kind == BalanceKindResolved::Protons;
    let condition = problem
        .balances
        .iter()
        .any(|balance| wanted(balance) && about_protons(balance))
        .then(|| proton_condition(stoichiometry, &recipe, &[]).ok())
        .flatten();
    problem
        .balances
        .iter()
        .enumerate()
        .filter(|(_, balance)| wanted(balance))
        .filter_map(|(index, balance)| {
            let kind = kind(balance.kind);
            let terms = terms(balance);
            let verdict = compare(kind, &terms, stoichiometry, &recipe, condition.as_ref()).ok()?;
            Some(Compared { balance: index, verdict })
        })
        .collect()
}

/// The balance's kind as the balance room has it.
pub fn kind(kind: BalanceKindResolved) -> BalanceKind {
    match kind {
        BalanceKindResolved::Charge => BalanceKind::Charge,
        BalanceKindResolved::Protons => BalanceKind::Protons,
        BalanceKindResolved::Component(j) => BalanceKind::Component(j),
    }
}

/// The written terms, left side first: a difference's index counts through both.
fn terms(balance: &WrittenBalance) -> Vec<WrittenTerm> {
    let side = |terms: &[model::WrittenTerm], side: Side| -> Vec<WrittenTerm> {
        terms
            .iter()
            .map(|term| WrittenTerm {
                side,
                coefficient: term.coefficient,
                what: match term.what {
                    model::WrittenWhat::Species(row) => WrittenWhat::Species(row),
                    model::WrittenWhat::Total(j) => WrittenWhat::Constant(Part::Total(j)),
                    model::WrittenWhat::Added(r) => WrittenWhat::Constant(Part::Added(r)),
                    model::WrittenWhat::Precipitated(k) => {
                        WrittenWhat::Constant(Part::Precipitated(k))
                    }
                    model::WrittenWhat::Amount { value, half_digit } => {
                        WrittenWhat::Amount { value, half_digit }
                    }
                },
            })
            .collect()
    };
    let mut terms = side(&balance.left, Side::Left);
    terms.extend(side(&balance.right, Side::Right));
    terms
}
