//! No pH between −2 and 16 closes the charge balance.
//!
//! The pH is found from the charge balance: protons or hydroxide make up for what the other
//! ions leave open. Here they would have to be more than any real solution holds, so an ion
//! of the opposite charge is missing, or an amount is out by its unit.
//!
//! What is left at the nearer of the two bounds is what the missing ion must bring. Such a
//! number must not be trusted with a dose: find the ion, or the unit, first.
//!
//! Before:
//!
//! ```lyate
//! component Na+, Cl-
//! activity ideal
//! total Na+ = 140 mol/L
//! total Cl- = 12 mmol/L
//! ```
//!
//! After:
//!
//! ```lyate
//! component Na+, Cl-
//! activity ideal
//! total Na+ = 140 mmol/L
//! total Cl- = 139 mmol/L
//! ```

use super::remaining::{Remaining, remaining};
use crate::problem::model::AmountSource;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::figures::{decimals, equivalents};
use crate::rules::finding::Finding;
use crate::text::span::Place;

rule!("charge-cannot-close", Error, "charge_cannot_close.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    let Some(remaining) = remaining(context) else { return };
    let Some(at) = cause(context, &remaining) else { return };
    let bound = decimals(remaining.at, 0);
    let closes = match remaining.closes_at {
        Some(ph) => format!("the charge balance would close only at pH {}", decimals(ph, 1)),
        None => "no pH between −2 and 16 closes the charge balance".to_owned(),
    };
    let Some(charge) = remaining.charge else {
        found.push(RULE.at(at, closes));
        return;
    };
    let kind = counter_charge(charge);
    let left = equivalents(charge.abs(), context.problem.scale);
    let message = format!("{closes}; at pH {bound} it lacks {left} of {kind}");
    let help = format!("list and give the ion that brings the {kind}, or put right a unit");
    found.push(RULE.at(at, message).with_help(help));
}

/// What must be added to cations less anions of this sign.
pub fn counter_charge(charge: f64) -> &'static str {
    if charge > 0.0 { "negative charge" } else { "positive charge" }
}

/// The amount that brings most of the charge that is left over; else a held value.
fn cause(context: &Context, remaining: &Remaining) -> Option<Place> {
    let problem = context.problem;
    let sign = remaining.charge.unwrap_or(remaining.at).signum();
    let brought = |j: usize| {
        let amount = &problem.amounts[j];
        let charge = f64::from(problem.scope.components[j].formula.charge);
        (amount.total.unwrap_or(0.0) * charge * sign, amount)
    };
    let largest = (1..problem.amounts.len())
        .map(brought)
        .filter(|(charge, amount)| *charge > 0.0 && amount.at.is_some())
        .max_by(|(a, _), (b, _)| a.total_cmp(b));
    let held = problem.held.iter().find(|held| held.releases.is_some()).map(|held| held.at);
    match largest {
        Some((_, amount)) if held.is_none() || amount.source == AmountSource::Total => amount.at,
        _ => held.or_else(|| context.anchor()),
    }
}
