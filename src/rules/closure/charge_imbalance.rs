//! The pH is held, and the charge does not balance.
//!
//! With `hold pH` the charge balance is not used, so what is left of it is a test of the
//! analysis: an ion not measured, an error, or a wrong pH. It is given in meq/L and as
//! 100 (cations − anions) / (cations + anions).
//!
//! Up to 5 % is commonly accepted in a full water analysis (common practice; many codes ask
//! for less in strong waters). Beyond that an ion is missing. Where the missing ion is an
//! acid or a base, the answer is as far out. To judge it by a limit of your own, write
//! `expect charge imbalance`: then this is silent. Where no counter-ion is listed at all, the
//! file asks for shares at a pH, and this is only noted.
//!
//! Before:
//!
//! ```lyate
//! use aqueous
//! component NH3, Cl-
//! total NH3 = 10 mmol/L
//! total Cl- = 4 mmol/L
//! hold pH = 7.2
//! ```
//!
//! After:
//!
//! ```lyate
//! use aqueous
//! component NH3, Cl-
//! total NH3 = 10 mmol/L
//! total Cl- = 9.9 mmol/L
//! hold pH = 7.2
//! expect charge imbalance between -2 and 2 %
//! ```

use super::charge_cannot_close::counter_charge;
use crate::equilibrium::quantities::Solved;
use crate::problem::model::{HeldWhat, Sought};
use crate::problem::scope::PROTON;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::figures::{equivalents, percent};
use crate::rules::finding::{Finding, Severity};
use crate::text::span::{Part, Place};

rule!("charge-imbalance", Note, "charge_imbalance.rs", find);

/// In percent. Common practice for the ion balance of a water analysis.
const ACCEPTED: f64 = 5.0;
/// In percent: closed, as far as the digits of a held pH can tell.
const CLOSED: f64 = 0.05;

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    let problem = context.problem;
    let Some(held) = problem.held.iter().find(|held| matches!(held.what, HeldWhat::Ph(_))) else {
        return;
    };
    let Some(solved) = context.solved() else { return };
    let judged =
        problem.expectations.iter().any(|e| matches!(e.sought, Sought::ChargeImbalance { .. }));
    let share = solved.imbalance_percent();
    if judged || share.abs() < CLOSED {
        return;
    }
    let (cations, anions) = solved.charges();
    let charge = cations - anions;
    let message = format!(
        "with `{}` held, {} of {} is missing: {} of all charge",
        held.words,
        equivalents(charge.abs(), problem.scale),
        counter_charge(charge),
        percent(share.abs() / 100.0),
    );
    let bad = share.abs() > ACCEPTED && is_whole(context, solved);
    let severity = if bad { Severity::Warning } else { Severity::Note };
    // A note is told once, with the base.
    let is_case = context.statements.iter().any(|written| written.part == Part::Case);
    if !bad && is_case && held.at.section == Part::Base {
        return;
    }
    let mut finding = RULE.at(held.at, message).with_severity(severity);
    if bad {
        let kind = if charge > 0.0 { "an anion" } else { "a cation" };
        finding = finding.with_help(format!(
            "{kind} may be missing from the analysis; to judge it yourself, write `expect charge \
             imbalance …`"
        ));
    }
    found.push(finding);
}

/// Whether there are ions of both signs besides those of water. A file without any
/// counter-ion asks for shares at a pH and does not pretend to a whole analysis.
fn is_whole(context: &Context, solved: &Solved) -> bool {
    let species = &context.problem.scope.stoichiometry.species;
    let is_there = |sign: i32| {
        species.iter().zip(&solved.answer.concentrations).any(|(species, c)| {
            let of_water = species.row.iter().all(|&(j, _)| j == PROTON);
            species.charge.signum() == sign && !of_water && *c > 0.0
        })
    };
    is_there(1) && is_there(-1)
}
