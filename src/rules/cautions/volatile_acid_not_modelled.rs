//! An ion gives off a toxic gas with acid, and the file does not have the acid.
//!
//! Cyanide, sulfide and sulfite go over into hydrogen cyanide, hydrogen sulfide and sulfur
//! dioxide when the pH falls. A file that holds the ion and no such acid cannot tell how much
//! of it there is; between pH 2 and 12.5 waste with cyanide or sulfide that gives off toxic
//! gas counts as reactive (40 CFR 261.23 and state rules after it).
//!
//! Bring the acid's reaction into scope, and the gas over the water is told. Safety data
//! sheets, local codes and licensed practice go first.
//!
//! Before:
//!
//! ```lyate
//! component CN-, Na+, Cl-
//! add NaCN 1 mmol/L
//! add HCl 0.2 mmol/L
//! ```
//!
//! After:
//!
//! ```lyate
//! component CN-, Na+
//! reaction HCN <=> CN- + H+, pKa = 9.21, source "plant constants, sheet 2"
//! add NaCN 1 mmol/L
//! add NaOH 1 mmol/L
//! ```

use super::gas::{GASES, HYPOCHLORITE, belonging, concentration};
use super::hazard::REACTIVE_WASTE;
use super::{DEFER, speaks_of};
use crate::problem::scope::PROTON;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::figures::decimals;
use crate::rules::finding::Finding;
use crate::text::span::Place;

rule!("volatile-acid-not-modelled", Caution, "volatile_acid_not_modelled.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    let (problem, Some(solved)) = (context.problem, context.solved()) else { return };
    let ph = solved.ph();
    if !(REACTIVE_WASTE.0..REACTIVE_WASTE.1).contains(&ph) {
        return;
    }
    for gas in &GASES {
        let is_free_chlorine = gas.ions.contains(&HYPOCHLORITE[0]);
        if gas.dissolved_in(problem).is_some() || is_free_chlorine {
            continue;
        }
        let ion = gas.ions.iter().find(|name| concentration(problem, solved, name) > 0.0);
        let Some((ion, species)) = ion.and_then(|ion| Some((ion, belonging(problem, ion)?))) else {
            continue;
        };
        let made = problem.scope.belonging.made[species].as_ref();
        let component =
            made.and_then(|made| made.row.iter().map(|&(j, _)| j).find(|&j| j != PROTON));
        let at = component.and_then(|component| speaks_of::component(context, component));
        let Some(at) = at.or_else(|| context.anchor()) else { continue };
        let message = format!(
            "{ion} is here at pH {} without the acid that it turns into, so the {} that it gives \
             off is not counted",
            decimals(ph, 2),
            gas.name,
        );
        let help = format!("bring the acid's reaction into scope; with {}, {DEFER}", gas.kin);
        found.push(RULE.at(at, message).with_help(help));
    }
}
