//! The air over this water can hold a toxic gas above a published limit.
//!
//! Acid sets hydrogen cyanide free from cyanide, hydrogen sulfide from sulfide, sulfur dioxide
//! from sulfite and chlorine from hypochlorite with chloride; base sets ammonia free. The
//! finding tells what the air holds that is in equilibrium with the solved water: a closed
//! headspace, or the surface of an unstirred sump. It is computed with the file's own reaction
//! of the gas, or else with a published Henry constant.
//!
//! It is no fault of the file, and it never makes a check fail unless `--fail-on caution` asks
//! for that. A caution that is absent says nothing: gas that is stripped by air, or set free
//! where acid enters before it is mixed, is not counted. Safety data sheets, local codes and
//! licensed practice go first.
//!
//! Before:
//!
//! ```lyate
//! component HS-, Na+, Cl-
//! reaction H2S <=> HS- + H+, pKa = 7.0, source "plant constants, sheet 2"
//! add Na2S 2 mmol/L
//! add HCl 4 mmol/L
//! ```
//!
//! After:
//!
//! ```lyate
//! component HS-, Na+
//! reaction H2S <=> HS- + H+, pKa = 7.0, source "plant constants, sheet 2"
//! add Na2S 2 mmol/L
//! add NaOH 1 mmol/L
//! ```

use super::gas::{GASES, ToxicGas, belonging};
use super::{DEFER, speaks_of};
use crate::problem::scope::PROTON;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::figures::{decimals, significant};
use crate::rules::finding::Finding;
use crate::text::span::Place;

rule!("toxic-gas-over-water", Caution, "toxic_gas_over_water.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    let (problem, Some(solved)) = (context.problem, context.solved()) else { return };
    for gas in &GASES {
        let Some(ppm) = gas.over(problem, solved) else { continue };
        let Some(limit) = gas.limits.iter().rev().find(|limit| ppm > limit.ppm) else { continue };
        let Some(at) = place(context, gas) else { continue };
        let message = format!(
            "at pH {} the air over this water can hold {} ppm of {}, above {} of {} ppm",
            decimals(solved.ph(), 2),
            significant(ppm, 2),
            gas.name,
            limit.name,
            significant(limit.ppm, 2),
        );
        let help = format!("ventilate, monitor the air and mix slowly; {DEFER}");
        found.push(RULE.at(at, message).with_help(help));
    }
}

/// At what brings the component that the gas is made of.
fn place(context: &Context, gas: &ToxicGas) -> Option<Place> {
    let problem = context.problem;
    let species = gas
        .dissolved_in(problem)
        .or_else(|| gas.ions.iter().find_map(|name| belonging(problem, name)))?;
    let row = &problem.scope.belonging.made[species].as_ref()?.row;
    let component = row.iter().map(|&(j, _)| j).find(|&j| j != PROTON)?;
    speaks_of::component(context, component).or_else(|| context.anchor())
}
