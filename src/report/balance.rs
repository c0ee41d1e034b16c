//! Balances in words: their terms, which of them the answer rests on, whether they close.

use num_rational::Rational64;
use num_traits::One;

use super::figures::{concentration, decimals, percent};
use crate::balance::written::TermOf;
use crate::balance::{BalanceKind, Part};
use crate::equilibrium::weighed::{Weighed, WeighedTerm};
use crate::problem::model::Problem;

/// `charge`, `NH3`, `protons`.
pub fn kind_words(problem: &Problem, kind: BalanceKind) -> String {
    match kind {
        BalanceKind::Charge => "charge".into(),
        BalanceKind::Protons => "protons".into(),
        BalanceKind::Component(j) => problem.scope.components[j].formula.name.clone(),
    }
}

/// `2 [SO4^2-]`, `total NH3`, `added NaOH`.
pub fn term_words(problem: &Problem, what: TermOf, coefficient: Rational64) -> String {
    let name = match what {
        TermOf::Species(row) => format!("[{}]", problem.row_name(row)),
        TermOf::Constant(Part::Total(j)) => {
            format!("total {}", problem.scope.components[j].formula.name)
        }
        TermOf::Constant(Part::Added(reagent)) => {
            format!("added {}", problem.reagents[reagent].formula.name)
        }
        TermOf::Constant(Part::Held(held)) => held_words(problem, held),
        TermOf::Constant(Part::Precipitated(solid)) => {
            format!("precipitated {}", problem.precipitate_name(solid))
        }
    };
    if coefficient == Rational64::one() { name } else { format!("{coefficient} {name}") }
}

/// What a held value or, behind those, a solid brought: `brought by CO2(g) held`.
pub fn held_words(problem: &Problem, index: usize) -> String {
    let solid = || problem.excess(index);
    match (problem.held.get(index), solid()) {
        (Some(held), _) => format!("brought by {} held", held.words),
        (None, Some(solid)) => format!("brought by {}", problem.solid_name(solid)),
        (None, None) => "brought by what is held".into(),
    }
}

/// One side as a sum; `0` where it is empty.
pub fn side_words(problem: &Problem, side: &[WeighedTerm], dominant_only: bool) -> String {
    let terms: Vec<String> = side
        .iter()
        .filter(|term| !dominant_only || term.weight.dominant)
        .map(|term| term_words(problem, term.what, term.coefficient))
        .collect();
    if terms.is_empty() { "0".into() } else { terms.join(" + ") }
}

/// `rests on [NH3] = added NaOH`: the terms that alone give the answer.
pub fn rests_on(problem: &Problem, balance: &Weighed) -> String {
    let all = |side: &[WeighedTerm]| side.iter().all(|term| term.weight.dominant);
    if all(&balance.left) && all(&balance.right) {
        return "rests on every term".into();
    }
    let left = side_words(problem, &balance.left, true);
    let right = side_words(problem, &balance.right, true);
    format!("rests on {left} = {right}")
}

/// Each term with its amount, its share of its side, and what leaving it out does to the
/// pH; Markdown.
pub fn long(problem: &Problem, balance: &Weighed) -> String {
    let mut lines = Vec::new();
    for (title, side) in [("left", &balance.left), ("right", &balance.right)] {
        lines.push(format!("**{title}**"));
        for term in side {
            let mut line = format!(
                "- {}: {}, {}",
                term_words(problem, term.what, term.coefficient),
                concentration(term.weight.value, problem.scale),
                percent(term.weight.share),
            );
            if let Some(shift) = term.weight.ph_shift {
                line += &format!("; without it pH moves by {}", decimals(shift, 3));
            }
            lines.push(line);
        }
    }
    lines.join("\n")
}
