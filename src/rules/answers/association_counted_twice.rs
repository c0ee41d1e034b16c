//! An ion pair whose attraction the activity model holds already.
//!
//! The parameters of Pitzer's method for two ions hold all of their attraction, as far as it
//! shows in measured activity coefficients. A reaction that makes an ion pair of the same two
//! ions takes part of them away once more.
//!
//! Free concentrations, saturation indices and the pH then come out too low or too high by as
//! much as the pair holds. Leave the reaction out with this model, or take `activity davies`,
//! below its 0.5 mol/kg, with it.
//!
//! Before:
//!
//! ```lyate
//! activity pitzer
//! component Ca^2+, SO4^2-
//! reaction Ca^2+ + SO4^2- <=> CaSO4, log K = 2.3, source "site table, row 12"
//! add CaSO4 10 mmol/kg
//! ```
//!
//! After:
//!
//! ```lyate
//! activity pitzer
//! component Ca^2+, SO4^2-
//! add CaSO4 10 mmol/kg
//! ```

use crate::chemistry::activity::ActivityKind;
use crate::chemistry::formula::Formula;
use crate::chemistry::interaction::{binary, is_pair};
use crate::problem::scope::{PROTON, Scope};
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::rules::words::list;
use crate::text::span::Place;

rule!("association-counted-twice", Warning, "association_counted_twice.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    let problem = context.problem;
    if problem.activity != ActivityKind::Pitzer {
        return;
    }
    let Some(at) = problem.activity_at.or_else(|| context.anchor()) else { return };
    let pairs = pairs(&problem.scope);
    if pairs.is_empty() {
        return;
    }
    let message = format!(
        "`pitzer` counts the attraction within {} by its parameters, and the reactions here once \
         more",
        list(&pairs, "and"),
    );
    let help = "leave the reactions of these ion pairs out, or take `davies` with them";
    found.push(RULE.at(at, message).with_help(help));
}

/// Dissolved species that are one cation and one anion with parameters, put together. Acids
/// are none: their protons are bound.
fn pairs(scope: &Scope) -> Vec<String> {
    let formulas: Vec<&Formula> =
        scope.dissolved.iter().map(|&s| scope.species[s].as_ref()).collect();
    let proton = scope.species[PROTON].as_ref();
    let cations = || formulas.iter().filter(|f| f.charge > 0 && f.name != proton.name);
    let anions = || formulas.iter().filter(|f| f.charge < 0);
    formulas
        .iter()
        .filter(|pair| {
            cations().any(|cation| {
                anions().any(|anion| {
                    is_pair(pair, cation, anion) && binary(cation, anion).is_some()
                })
            })
        })
        .map(|pair| pair.name.clone())
        .collect()
}
