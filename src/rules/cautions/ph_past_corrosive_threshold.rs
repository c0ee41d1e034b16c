//! The pH of the answer lies past a published threshold for corrosive water.
//!
//! In the United States, aqueous waste at pH 2 and below or 12.5 and above counts as corrosive
//! (40 CFR 261.22, by a measured pH). In the European Union, a mixture at pH 2 and below or
//! 11.5 and above is taken as corrosive to skin unless other information says otherwise
//! (Regulation (EC) 1272/2008, Annex I, 3.2.3.1.2).
//!
//! It is no fault of the file: boil-outs and pickling baths are meant to be so. The rules ask
//! for a measured pH, and this one is calculated. Safety data sheets, local codes and licensed
//! practice go first.
//!
//! Before:
//!
//! ```lyate
//! problem "Boil-out"
//! component Na+
//! add NaOH 0.1 mol/L
//! ```
//!
//! After:
//!
//! ```lyate
//! problem "Rinse"
//! component Na+
//! add NaOH 1 mmol/L
//! ```

use super::hazard::{CORROSIVE_TO_SKIN, CORROSIVE_WASTE};
use super::{DEFER, speaks_of};
use crate::problem::model::{HeldWhat, Sought};
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::figures::decimals;
use crate::rules::finding::Finding;
use crate::text::span::Place;

rule!("ph-past-corrosive-threshold", Caution, "ph_past_corrosive_threshold.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    let Some(solved) = context.solved() else { return };
    let ph = solved.ph();
    // Past this the file has a fault, and that is told instead.
    if !(-2.0..=16.0).contains(&ph) {
        return;
    }
    let what = if ph <= CORROSIVE_WASTE.0 || ph >= CORROSIVE_WASTE.1 {
        "counts as corrosive waste in the United States (40 CFR 261.22) and is taken as corrosive \
         to skin in the European Union (Regulation (EC) 1272/2008)"
    } else if ph >= CORROSIVE_TO_SKIN.1 {
        "is taken as corrosive to skin in the European Union for want of other information \
         (Regulation (EC) 1272/2008)"
    } else {
        return;
    };
    let Some(at) = place(context) else { return };
    let message = format!("water of pH {} {what}", decimals(ph, 2));
    found.push(RULE.at(at, message).with_help(format!("protect skin and eyes; {DEFER}")));
}

/// Where the pH is spoken of, or else at the most plentiful reagent.
fn place(context: &Context) -> Option<Place> {
    let problem = context.problem;
    let held = problem.held.iter().find(|held| matches!(held.what, HeldWhat::Ph(_)));
    let expected = problem.expectations.iter().find(|e| e.sought == Sought::Ph);
    let most = || problem.reagents.iter().max_by(|a, b| a.amount.total_cmp(&b.amount));
    held.map(|held| held.at)
        .or_else(|| expected.map(|expected| expected.at))
        .or_else(|| most().map(|reagent| reagent.at))
        .or_else(|| speaks_of::place(context, &[""]))
        .or_else(|| context.anchor())
}
