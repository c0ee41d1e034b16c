//! The air over this water can hold a toxic gas above a published limit.
//!
//! Acid sets hydrogen cyanide free from cyanide, hydrogen sulfide from sulfide, sulfur dioxide
//! from sulfite and chlorine from hypochlorite with chloride; base sets ammonia free. The
//! finding tells what the air holds that is in equilibrium with the solved water: a closed
//! headspace, or the surface of an unstirred sump. It is computed with the file's own reaction
//! of the gas, or else with a published Henry constant. Of a curve, its two ends are looked at.
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

use std::sync::atomic::AtomicBool;

use super::gas::{GASES, ToxicGas, belonging};
use super::hazard::AirLimit;
use super::{DEFER, speaks_of};
use crate::equilibrium::curve::solved_at;
use crate::equilibrium::quantities::Solved;
use crate::problem::model::Problem;
use crate::problem::scope::PROTON;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::figures::{decimals, significant};
use crate::rules::finding::Finding;
use crate::text::span::Place;

rule!("toxic-gas-over-water", Caution, "toxic_gas_over_water.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    let (problem, Some(solved)) = (context.problem, context.solved()) else { return };
    let mut told = [0.0; GASES.len()];
    for (gas, told) in GASES.iter().zip(&mut told) {
        let Some((ppm, limit)) = past(gas, problem, solved) else { continue };
        let Some(at) = place(context, gas) else { continue };
        let here = format!("at pH {}", decimals(solved.ph(), 2));
        found.push(caution(at, &here, gas, ppm, limit));
        *told = limit.ppm;
    }
    if GASES.iter().all(|gas| gas.over(problem, solved).is_none()) {
        return;
    }
    // No curve is followed for this, but its ends are where a gas is set free the most.
    for curve in &problem.curves {
        let ends = [curve.from, curve.to].map(|x| {
            solved_at(problem, curve, x, &AtomicBool::new(false)).ok()
        });
        for (gas, told) in GASES.iter().zip(&told) {
            let past = |(moved, solved): &(Problem, Solved)| {
                past(gas, moved, solved).map(|(ppm, limit)| (ppm, limit, solved.ph()))
            };
            let worst = ends.iter().flatten().filter_map(past).max_by(|a, b| a.0.total_cmp(&b.0));
            // Told once, unless the curve goes past a higher limit than the water itself.
            if let Some((ppm, limit, ph)) = worst.filter(|(_, limit, _)| limit.ppm > *told) {
                let here = format!("at pH {} on the curve over {}", decimals(ph, 2), curve.words);
                found.push(caution(curve.at, &here, gas, ppm, limit));
            }
        }
    }
}

/// How much of a gas is over the water, and the highest limit that it is past.
fn past(gas: &ToxicGas, problem: &Problem, solved: &Solved) -> Option<(f64, &'static AirLimit)> {
    let ppm = gas.over(problem, solved)?;
    let limit = gas.limits.iter().rev().find(|limit| ppm > limit.ppm)?;
    Some((ppm, limit))
}

fn caution(at: Place, here: &str, gas: &ToxicGas, ppm: f64, limit: &AirLimit) -> Finding<Place> {
    let message = format!(
        "{here} the air over this water can hold {} ppm of {}, above {} of {} ppm",
        significant(ppm, 2),
        gas.name,
        limit.name,
        significant(limit.ppm, 2),
    );
    RULE.at(at, message).with_help(format!("ventilate, monitor the air and mix slowly; {DEFER}"))
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
