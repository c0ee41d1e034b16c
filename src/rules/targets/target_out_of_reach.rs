//! No amount of a reagent brings a quantity to its target.
//!
//! `hold … by` looks for the amount of one reagent, from none to more than dissolves, or to a
//! hundred times as much stock as water. Where nothing in between meets the target, the finding
//! says what comes nearest, and which way the reagent moves the quantity: a base does not lower
//! a pH, and carbon dioxide from a bottle does not raise it. An amount below zero is no dose.
//!
//! Choose a reagent that works the other way, a target that can be had, or ask whether the
//! water is as the file says. Several targets can each be in reach and still not be together.
//!
//! Before:
//!
//! ```lyate
//! use aqueous
//! component NH3, Na+
//! add NH3 10 mmol/L
//! hold pH = 9 by NaOH
//! ```
//!
//! After:
//!
//! ```lyate
//! use aqueous
//! component NH3, Cl-
//! add NH3 10 mmol/L
//! hold pH = 9 by HCl
//! ```

use crate::equilibrium::target::{Missed, Nearest};
use crate::problem::model::{Problem, Target};
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::expectation::quantity_words;
use crate::rules::figures::concentration;
use crate::rules::finding::Finding;
use crate::rules::outcome::State;
use crate::rules::words::{list, names};
use crate::text::span::Place;

rule!("target-out-of-reach", Error, "target_out_of_reach.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    let State::OutOfReach(missed) = context.state else { return };
    let problem = context.problem;
    let Some((target, others)) = problem.targets.split_first() else { return };
    match missed {
        Missed::Still { .. } => {}
        Missed::Short(nearest) => found.push(short(problem, target, nearest)),
        Missed::Together { amounts } => {
            let unknowns: Vec<String> =
                problem.targets.iter().map(|t| problem.unknown_name(t.unknown)).collect();
            let words: Vec<String> = problem.targets.iter().map(|t| t.words.clone()).collect();
            let mut message = format!(
                "no amounts of {} meet {} together",
                names(&unknowns, "and"),
                list(&words, "and")
            );
            let below: Vec<String> = amounts
                .iter()
                .flatten()
                .zip(&unknowns)
                .filter(|(amount, _)| **amount < 0.0)
                .map(|(amount, name)| {
                    format!("{} of `{name}`", concentration(*amount, problem.scale))
                })
                .collect();
            if !below.is_empty() {
                message += &format!(": it would take {}", list(&below, "and"));
            }
            let mut finding = RULE.at(target.at, message);
            for other in others {
                finding = finding.with_related(other.at, "and this");
            }
            let help = "try each target alone, in a case of its own, to see how far its reagent goes";
            found.push(finding.with_help(help));
        }
    }
}

fn short(problem: &Problem, target: &Target, nearest: &Nearest) -> Finding<Place> {
    let name = problem.unknown_name(target.unknown);
    let value = |value| quantity_words(problem, target.unit.as_ref(), target.sought, value);
    let words = &target.words;
    let wanted = value(target.wanted);
    let way = if nearest.raises { "raises" } else { "lowers" };
    let without =
        nearest.without.map(|without| format!("without any it is {}", value(without)));
    let come = value(nearest.value);
    let dose = concentration(nearest.dose, problem.scale);
    let nearly = match (&without, nearest.grows) {
        (Some(without), _) if nearest.dose == 0.0 => format!("{without}, and more {way} it"),
        (None, _) if nearest.dose == 0.0 => format!("the nearest is {come}, with none of it"),
        (_, true) => format!("the nearest is {come}, approached as the dose grows"),
        (Some(without), false) => format!("{without}, and the nearest is {come}, at {dose}"),
        (None, false) => format!("the nearest is {come}, at {dose}"),
    };
    let help = if nearest.dose == 0.0 {
        let other = if nearest.raises { "lowers" } else { "raises" };
        format!("take a reagent that {other} it, or less of what is put in already")
    } else {
        "take another reagent, or a target that can be had".to_owned()
    };
    let message = format!("no amount of `{name}` brings {words} to {wanted}: {nearly}");
    RULE.at(target.at, message).with_help(help)
}
