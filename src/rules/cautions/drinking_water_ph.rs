//! The file speaks of drinking water, and its pH lies outside the range recommended there.
//!
//! Where the title or a case's title has the word drinking, potable or tap, the pH is held to
//! the 6.5 to 8.5 that is recommended in the United States (40 CFR 143.3, a secondary level).
//! Other countries and the waterworks' own permit may ask for something else.
//!
//! A calculation is no measurement: what people drink is judged by samples, by the laboratory
//! and the authority that is in charge. Local codes and licensed practice go first.
//!
//! Before:
//!
//! ```lyate
//! problem "Drinking water, after softening"
//! component Na+
//! add NaOH 0.2 mmol/L
//! ```
//!
//! After:
//!
//! ```lyate
//! problem "Drinking water, after softening"
//! component Na+
//! add NaOH 0.1 µmol/L
//! ```

use super::hazard::DRINKING_WATER;
use super::{DEFER, speaks_of};
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::figures::decimals;
use crate::rules::finding::Finding;
use crate::text::span::Place;

rule!("drinking-water-ph", Caution, "drinking_water_ph.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    let Some(solved) = context.solved() else { return };
    let ph = solved.ph();
    if ph >= DRINKING_WATER.0 && ph <= DRINKING_WATER.1 {
        return;
    }
    let Some(at) = speaks_of::place(context, &["drinking", "potable", "tapwater"]) else { return };
    let message = format!(
        "pH {} lies outside the 6.5 to 8.5 recommended for drinking water (40 CFR 143.3)",
        decimals(ph, 2)
    );
    let help = format!("measured samples and the authority in charge decide; {DEFER}");
    found.push(RULE.at(at, message).with_help(help));
}
