//! Pitzer's method lacks parameters for ions of this solution.
//!
//! The method knows each ion by parameters that were fitted to measurements of its salts.
//! Here stand only those that give back published activity coefficients. An ion without any
//! keeps the long-range term alone, and a pair without any adds nothing of its own.
//!
//! Some pairs have none because an ion pair stands for them: Mg^2+ and Ca^2+ with CO3^2-, and
//! Mg^2+ with OH-. They are not told of where the file has the reaction of that pair.
//!
//! In dilute water that hardly matters. In a brine the activity coefficient of such an ion can
//! be wrong by half, and with it whatever the ion takes part in. Told are ions that hold a
//! hundredth of the ionic strength or of a component, and pairs in which the other ion holds a
//! twentieth of the ionic strength.
//!
//! Below an ionic strength of 0.5 mol/kg `davies` treats all ions alike. Above it, constants
//! that were measured in such a medium, with `activity ideal`, are the way.
//!
//! Before:
//!
//! ```lyate
//! activity pitzer
//! component Na+, I-
//! add NaI 0.2 mol/kg
//! ```
//!
//! After:
//!
//! ```lyate
//! activity davies
//! component Na+, I-
//! add NaI 0.2 mol/kg
//! ```

use crate::chemistry::activity::ActivityKind;
use crate::chemistry::formula::Formula;
use crate::chemistry::interaction::{binary, is_pair, known};
use crate::equilibrium::quantities::Solved;
use crate::problem::model::Problem;
use crate::problem::scope::PROTON;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::rules::words::list;
use crate::text::span::Place;

rule!("ion-lacks-interaction", Warning, "ion_lacks_interaction.rs", find);

/// An ion counts with this share of the ionic strength, or of a component.
const COUNTS: f64 = 0.01;
/// What an ion meets counts with this share of the ionic strength.
const MET: f64 = 0.05;

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    let problem = context.problem;
    if problem.activity != ActivityKind::Pitzer {
        return;
    }
    let Some(solved) = context.solved() else { return };
    let Some(at) = problem.activity_at.or_else(|| context.anchor()) else { return };
    let missing = missing(problem, solved);
    if missing.is_empty() {
        return;
    }
    let message =
        format!("`pitzer` has no parameters here that were checked for {}", list(&missing, "and"));
    let help = "an ion without any keeps the long-range term alone, and a pair without any adds \
                nothing: in a brine their activity coefficients may be far off";
    found.push(RULE.at(at, message).with_help(help));
}

/// Ions without any parameters, then pairs without any, in words.
fn missing(problem: &Problem, solved: &Solved) -> Vec<String> {
    let ions = ions(problem, solved);
    let counted = || ions.iter().filter(|ion| ion.counts);
    let mut words: Vec<String> = counted()
        .filter(|ion| known(ion.formula).is_none())
        .map(|ion| ion.formula.name.clone())
        .collect();
    for ion in counted().filter(|ion| known(ion.formula).is_some()) {
        let others: Vec<String> = ions
            .iter()
            .filter(|other| {
                let unlike = other.formula.charge.signum() * ion.formula.charge.signum() < 0;
                // A pair is told once, by its cation where both count.
                let once = ion.formula.charge > 0 || ion.share < MET || !other.counts;
                unlike && once && other.share >= MET && known(other.formula).is_some()
            })
            .filter(|other| binary(ion.formula, other.formula).is_none())
            .filter(|other| !associate(problem, ion.formula, other.formula))
            .map(|other| other.formula.name.clone())
            .collect();
        if !others.is_empty() {
            words.push(format!("{} with {}", ion.formula.name, list(&others, "and")));
        }
    }
    words
}

/// Whether the attraction of two ions is told by an ion pair in place of parameters.
fn associate(problem: &Problem, one: &Formula, other: &Formula) -> bool {
    let scope = &problem.scope;
    scope.dissolved.iter().any(|&s| is_pair(&scope.species[s], one, other))
}

struct Ion<'a> {
    formula: &'a Formula,
    /// Of the ionic strength.
    share: f64,
    counts: bool,
}

fn ions<'a>(problem: &'a Problem, solved: &Solved) -> Vec<Ion<'a>> {
    let scope = &problem.scope;
    let totals: Vec<f64> = (0..scope.components.len()).map(|j| solved.total(j)).collect();
    let answer = &solved.answer;
    scope
        .dissolved
        .iter()
        .enumerate()
        .filter(|&(row, &s)| scope.species[s].charge != 0 && answer.concentrations[row] > 0.0)
        .map(|(row, &s)| {
            let formula = scope.species[s].as_ref();
            let c = answer.concentrations[row];
            let share = 0.5 * f64::from(formula.charge).powi(2) * c / answer.ionic_strength;
            let of_component = scope.stoichiometry.species[row]
                .row
                .iter()
                .any(|&(j, _)| j != PROTON && c >= COUNTS * totals[j]);
            Ion { formula, share, counts: share >= COUNTS || of_component }
        })
        .collect()
}
