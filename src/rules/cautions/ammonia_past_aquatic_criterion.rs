//! The file speaks of fish or of a discharge, and its ammonia is past a published criterion.
//!
//! Un-ionised ammonia harms fish, and how much of it there is rises with pH and temperature.
//! Where the title or a case's title speaks of fish, a hatchery, a discharge or an outfall,
//! total ammonia is held to the criteria for fresh water of the United States (EPA
//! 822-R-13-001, 2013): an acute one for an hour's average and a chronic one for thirty days.
//!
//! A permit or a species may ask for less, and sampling and not calculation decides. Local
//! codes and licensed practice go first.
//!
//! Before:
//!
//! ```lyate
//! problem "Hatchery return"
//! use aqueous
//! component NH3, Cl-
//! total NH3 = 6 mg/L as N
//! total Cl- = 1 mmol/L
//! hold pH = 8.4
//! ```
//!
//! After:
//!
//! ```lyate
//! problem "Hatchery return"
//! use aqueous
//! component NH3, Cl-
//! total NH3 = 0.4 mg/L as N
//! total Cl- = 1 mmol/L
//! hold pH = 7.4
//! ```

use super::gas::concentration;
use super::hazard::ammonia;
use super::{DEFER, speaks_of};
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::figures::{celsius, decimals, significant};
use crate::rules::finding::Finding;
use crate::text::span::Place;

rule!(
    "ammonia-past-aquatic-criterion",
    Caution,
    "ammonia_past_aquatic_criterion.rs",
    find
);

/// Beginnings of words; a title with one of them is about living water.
const WORDS: [&str; 9] =
    ["fish", "hatchery", "trout", "salmon", "raceway", "aquacultur", "discharge", "outfall", "effluent"];

/// mg of nitrogen in one mmol.
const NITROGEN: f64 = 14.007;

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    let (problem, Some(solved)) = (context.problem, context.solved()) else { return };
    let Some(at) = speaks_of::place(context, &WORDS) else { return };
    let moles =
        concentration(problem, solved, "NH3") + concentration(problem, solved, "NH4+");
    let total = moles * 1e3 * NITROGEN;
    let (ph, temperature) = (solved.ph(), problem.kelvin - 273.15);
    let (acute, chronic) = (ammonia::acute(ph, temperature), ammonia::chronic(ph, temperature));
    let (name, limit) = if total > acute {
        ("acute criterion (one hour)", acute)
    } else if total > chronic {
        ("chronic criterion (thirty days)", chronic)
    } else {
        return;
    };
    let message = format!(
        "{} mg/L of ammonia nitrogen at pH {} and {} is past the {name} of {} for fresh water (EPA, \
         2013)",
        significant(total, 3),
        decimals(ph, 2),
        celsius(problem.kelvin),
        significant(limit, 2),
    );
    let help = format!("the permit, the species and measured samples decide; {DEFER}");
    found.push(RULE.at(at, message).with_help(help));
}
