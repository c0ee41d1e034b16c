//! The pH is held, and the charge does not balance.
//!
//! With `hold pH` the charge balance is not used, so what is left of it is a test of the
//! analysis: an ion not measured, an error, or a wrong pH. It is given in meq/L and as
//! 100 (cations − anions) / (cations + anions).
//!
//! How much is accepted goes by the sum of the anions, after *Standard Methods for the
//! Examination of Water and Wastewater*, 1030 E (recalled): 0.2 meq/L where they come to less
//! than 3 meq/L, 2 % up to 10 meq/L, 5 % above. Past that an ion is missing or a figure is
//! wrong; where it is an acid or a base, the answer is as far out.
//!
//! The help may name what would most simply explain it: a figure read in another unit, an ion
//! entered as none, or one ion that is too low. It is arithmetic and no finding: ask the
//! laboratory before changing a figure. To judge the balance by a limit of your own, write
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
use super::likely_slip::likely_slip;
use crate::problem::model::{HeldWhat, Sought};
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::figures::{equivalents, percent, significant};
use crate::rules::finding::{Finding, Severity};
use crate::rules::ion_balance::{CRITERION_SOURCE, IonBalance};
use crate::text::span::{Part, Place};

rule!("charge-imbalance", Note, "charge_imbalance.rs", find);

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
    let balance = IonBalance::of(problem, solved);
    let missed = balance.as_ref().filter(|balance| !balance.is_accepted());
    // A note is told once, with the base.
    let is_case = context.statements.iter().any(|written| written.part == Part::Case);
    if missed.is_none() && is_case && held.at.section == Part::Base {
        return;
    }
    let (cations, anions) = solved.charges();
    let Some(balance) = &balance else {
        let charge = cations - anions;
        let message = format!(
            "with `{}` held, {} of {} is missing: {} of all charge",
            held.words,
            equivalents(charge.abs(), problem.scale),
            counter_charge(charge),
            percent(share.abs() / 100.0),
        );
        found.push(RULE.at(held.at, message));
        return;
    };
    let limit = balance.criterion().words();
    let judgement = match missed {
        Some(_) => format!("where {CRITERION_SOURCE} accepts {limit}"),
        None => format!("within the {limit} that {CRITERION_SOURCE} accepts"),
    };
    let message = format!(
        "with `{}` held, cations come to {} and anions to {} meq/L: {} meq/L or {} apart, \
         {judgement}",
        held.words,
        significant(balance.cation_sum, 3),
        significant(balance.anion_sum, 3),
        significant(balance.difference().abs(), 2),
        percent(share.abs() / 100.0),
    );
    let mut finding = RULE.at(held.at, message);
    if missed.is_some() {
        let kind = if balance.difference() > 0.0 { "an anion" } else { "a cation" };
        let slip = likely_slip(context, solved, balance);
        let slip = slip.unwrap_or_else(|| format!("{kind} may be missing from the analysis"));
        finding = finding.with_severity(Severity::Warning).with_help(format!(
            "perhaps {slip}; to judge it yourself, write `expect charge imbalance …`"
        ));
    }
    found.push(finding);
}
