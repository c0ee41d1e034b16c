//! Solids in excess and held values ask for more than there is freedom for.
//!
//! A solid in excess fixes the product of its ions, a held gas or pH fixes a value too. Where
//! what one fixes follows already from the others, they agree by chance or not at all. Two
//! forms of one solid are the plainest case: water in equilibrium with the less soluble one
//! is undersaturated with the other, which dissolves until it is gone.
//!
//! So such a set of solids does not last, and the numbers that it would need do not exist.
//! Say of a solid that may be used up that it may `precipitate`, with what there is of it
//! in the totals.
//!
//! Before:
//!
//! ```lyate
//! component Ca^2+, CO3^2-, Na+
//! reaction HCO3- <=> H+ + CO3^2-, pKa = 10.33, source "site table, row 4"
//! reaction CaCO3(s, calcite)   <=> Ca^2+ + CO3^2-, pKsp = 8.48, source "site table, row 9"
//! reaction CaCO3(s, aragonite) <=> Ca^2+ + CO3^2-, pKsp = 8.34, source "site table, row 10"
//! add NaOH 1 mmol/L
//! saturate with CaCO3(s, calcite)
//! saturate with CaCO3(s, aragonite)
//! ```
//!
//! After:
//!
//! ```lyate
//! component Ca^2+, CO3^2-, Na+
//! reaction HCO3- <=> H+ + CO3^2-, pKa = 10.33, source "site table, row 4"
//! reaction CaCO3(s, calcite)   <=> Ca^2+ + CO3^2-, pKsp = 8.48, source "site table, row 9"
//! reaction CaCO3(s, aragonite) <=> Ca^2+ + CO3^2-, pKsp = 8.34, source "site table, row 10"
//! add NaOH 1 mmol/L
//! saturate with CaCO3(s, calcite)
//! ```

use crate::equilibrium::build::ln_formation;
use crate::equilibrium::system::Failure;
use crate::problem::model::{Problem, Solid};
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::rules::outcome::State;
use crate::rules::words::names;
use crate::text::span::Place;

rule!("too-many-phases", Error, "too_many_phases.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    let State::Failed(Failure::Dependent { fixed, .. }) = context.state else { return };
    let problem = context.problem;
    let Some(last) = fixed.iter().rev().find_map(|&k| problem.excess(k)) else { return };
    let others: Vec<(Place, String)> =
        fixed.iter().filter_map(|&k| words(problem, k)).filter(|(at, _)| *at != last.at).collect();
    let name = problem.solid_name(last);
    let twins: Vec<&Solid> = fixed
        .iter()
        .filter_map(|&k| problem.excess(k))
        .filter(|solid| solid.at != last.at && is_same_matter(problem, last, solid))
        .collect();
    let finding = if let (true, [twin]) = (others.len() == 1, &twins[..]) {
        let other = problem.solid_name(twin);
        let finding =
            RULE.at(last.at, format!("`{name}` and `{other}` cannot both be in excess"));
        let [own, of_twin] = [last, twin].map(|solid| ln_formation(problem, solid.species));
        if own == of_twin {
            finding.with_help("their solubility is the same: state one of them")
        } else {
            let lasting = if own > of_twin { name } else { other };
            finding.with_help(format!(
                "at equilibrium only the less soluble is left: here `{lasting}`"
            ))
        }
    } else if others.is_empty() {
        let message = format!("`{name}` cannot be in excess: nothing can change to saturate it");
        RULE.at(last.at, message)
    } else {
        let mut all: Vec<String> = others.iter().map(|(_, words)| words.clone()).collect();
        all.push(name.to_owned());
        let all = names(&all, "and");
        RULE.at(last.at, format!("{all} cannot all be held: one follows from the others"))
            .with_help(format!(
                "leave one of them out, or write `precipitate {name}` if it may be used up"
            ))
    };
    let note = |finding: Finding<Place>, (at, _): &(Place, String)| {
        finding.with_related(*at, "this fixes it already")
    };
    found.push(others.iter().fold(finding, note));
}

/// A held phase, and where it stands.
pub fn words(problem: &Problem, k: usize) -> Option<(Place, String)> {
    let held = problem.held.get(k).map(|held| (held.at, held.words.clone()));
    held.or_else(|| problem.excess(k).map(|solid| (solid.at, problem.solid_name(solid).to_owned())))
}

fn is_same_matter(problem: &Problem, one: &Solid, two: &Solid) -> bool {
    let row = |solid: &Solid| {
        problem.scope.belonging.made[solid.species].as_ref().map(|made| made.row.clone())
    };
    row(one) == row(two)
}
