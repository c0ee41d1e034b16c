//! Free chlorine and ammonia meet in this water.
//!
//! Hypochlorite and ammonia make chloramines, and with much chlorine nitrogen trichloride:
//! irritating gases over the water, and an explosive one where much of it gathers. Bleach and
//! ammonia solution are never poured together. In chloramination both are dosed dilute, apart,
//! and under the rules of the waterworks.
//!
//! It is no fault of the file. Safety data sheets, local codes and licensed practice go first.
//!
//! Before:
//!
//! ```lyate
//! use aqueous
//! component NH3, OCl-, Na+, Cl-
//! reaction HOCl <=> OCl- + H+, pKa = 7.54, source "plant constants, sheet 3"
//! add NaClO 0.05 mmol/L
//! add NH4Cl 0.05 mmol/L
//! ```
//!
//! After:
//!
//! ```lyate
//! use aqueous
//! component OCl-, Na+, Cl-
//! reaction HOCl <=> OCl- + H+, pKa = 7.54, source "plant constants, sheet 3"
//! add NaClO 0.05 mmol/L
//! ```

use super::gas::{HYPOCHLORITE, HYPOCHLOROUS, belonging, concentration};
use super::{DEFER, speaks_of};
use crate::problem::scope::PROTON;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::text::span::Place;

rule!("chlorine-with-ammonia", Caution, "chlorine_with_ammonia.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    let (problem, Some(solved)) = (context.problem, context.solved()) else { return };
    let first = |names: &[&'static str]| {
        names.iter().copied().find(|name| concentration(problem, solved, name) > 0.0)
    };
    let chlorine = first(&HYPOCHLOROUS).or_else(|| first(&HYPOCHLORITE));
    let (Some(chlorine), Some(_)) = (chlorine, first(&["NH3", "NH4+"])) else { return };
    let component = belonging(problem, chlorine)
        .and_then(|species| problem.scope.belonging.made[species].as_ref())
        .and_then(|made| made.row.iter().map(|&(j, _)| j).find(|&j| j != PROTON));
    let at = component.and_then(|component| speaks_of::component(context, component));
    let Some(at) = at.or_else(|| context.anchor()) else { return };
    if speaks_of::is_inherited(context, at) {
        return;
    }
    let message = "free chlorine meets ammonia here: together they make chloramines, and with \
                   more chlorine nitrogen trichloride, which are toxic over the water";
    let help = format!("never mix the stocks, and dose them apart and dilute; {DEFER}");
    found.push(RULE.at(at, message).with_help(help));
}
