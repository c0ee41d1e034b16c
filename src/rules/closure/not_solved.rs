//! The equations have no answer, or none was found.
//!
//! Three things can be behind it, and the finding says which. A total that nothing can make
//! up: proven, whatever the pH. Demands that say the same thing twice, or contradict each
//! other: proven too. Or a search that did not come to rest, which happens with activity
//! coefficients far outside the range of their model.
//!
//! No number is shown in its place: an answer to other equations would be worse than none.
//!
//! Before:
//!
//! ```lyate
//! component Na+, Cl-, e-
//! total Na+ = 5 mmol/L
//! total Cl- = 5 mmol/L
//! total e-  = 1 mmol/L
//! ```
//!
//! After:
//!
//! ```lyate
//! component Na+, Cl-, Fe^3+, e-
//! reaction Fe^3+ + e- <=> Fe^2+, log K = 13.0, source "site table, row 20"
//! total Na+   = 5 mmol/L
//! total Cl-   = 11 mmol/L
//! total Fe^3+ = 2 mmol/L
//! total e-    = 1 mmol/L
//! ```

use super::remaining::remaining;
use crate::equilibrium::system::Failure;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::figures::percent;
use crate::rules::finding::Finding;
use crate::rules::outcome::State;
use crate::rules::words::names;
use crate::text::span::Place;

rule!("not-solved", Error, "not_solved.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    let State::Failed(failure) = context.state else { return };
    // A charge that cannot close has a rule of its own.
    if remaining(context).is_some() {
        return;
    }
    found.extend(match failure {
        Failure::Infeasible { component } => infeasible(context, *component),
        Failure::Dependent { fixed, .. }
            if fixed.iter().any(|&k| context.problem.excess(k).is_some()) =>
        {
            None
        }
        Failure::Dependent { components, fixed } => dependent(context, components, fixed),
        Failure::NotConverged { residual, iterations } => {
            not_converged(context, *residual, *iterations)
        }
        // Those have rules of their own.
        Failure::Endless { .. } | Failure::Cancelled => None,
    });
}

fn place_of(context: &Context, component: usize) -> Option<Place> {
    let amount = context.problem.amounts.get(component).and_then(|amount| amount.at);
    let listed = context.problem.scope.components.get(component).and_then(|c| c.at);
    amount.or(listed).or_else(|| context.anchor())
}

fn name(context: &Context, component: usize) -> String {
    context.problem.scope.components[component].formula.name.clone()
}

fn infeasible(context: &Context, component: usize) -> Option<Finding<Place>> {
    let name = name(context, component);
    let message = format!("no state of this solution holds this amount of `{name}`");
    let finding = RULE.at(place_of(context, component)?, message);
    Some(finding.with_help(format!(
        "a reaction that binds `{name}` may be missing, or another amount that goes with it"
    )))
}

fn dependent(
    context: &Context,
    components: &[usize],
    fixed: &[usize],
) -> Option<Finding<Place>> {
    let held: Vec<_> = fixed.iter().filter_map(|&k| context.problem.held.get(k)).collect();
    let all: Vec<String> = components.iter().map(|&j| name(context, j)).collect();
    if let Some((last, others)) = held.split_last() {
        let all: Vec<String> = held.iter().map(|held| held.words.clone()).collect();
        let message = format!("{} cannot all be held: one follows from the others", names(&all, "and"));
        let mut finding = RULE.at(last.at, message).with_help("leave one of them out");
        for other in others {
            finding = finding.with_related(other.at, "held here");
        }
        return Some(finding);
    }
    let (&last, others) = components.split_last()?;
    let message = format!("every species holds {} in one proportion", names(&all, "and"));
    let mut finding = RULE.at(place_of(context, last)?, message);
    for &other in others {
        if let Some(at) = place_of(context, other) {
            finding = finding.with_related(at, "and this");
        }
    }
    Some(finding.with_help("list them as one component"))
}

fn not_converged(context: &Context, residual: f64, iterations: u32) -> Option<Finding<Place>> {
    if let Some(held) = context.held_ion() {
        let message = format!("no pH between −3 and 18 gives `{}` the value it is held at", held.words);
        let help = "the totals or reagents do not allow it; hold less of it, or give its total";
        return Some(RULE.at(held.at, message).with_help(help));
    }
    let at = context.problem.activity_at.or_else(|| context.anchor())?;
    let message = format!(
        "no answer was found: after {iterations} steps the balances are still open by {}",
        percent(residual)
    );
    let help = "far outside the range of the activity model there may be none; `activity ideal` \
                shows which amount is so large";
    Some(RULE.at(at, message).with_help(help))
}
