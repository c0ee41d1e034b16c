//! Amounts per litre in a solution where they differ from those per kilogram of water.
//!
//! Pitzer's method is fitted to amounts per kilogram of water. Where the file states them per
//! litre they are taken as if they were per kilogram.
//!
//! Below some 0.5 mol/L that is within one or two hundredths. In a brine it is not: saturated
//! salt brine has 6.1 mol/kg and 5.4 mol/L. State amounts per kilogram of water: per litre,
//! divided by the mass of water that a litre holds (density less dissolved salt).
//!
//! Before:
//!
//! ```lyate
//! activity pitzer
//! component Na+, Cl-
//! add NaCl 3 mol/L
//! ```
//!
//! After:
//!
//! ```lyate
//! activity pitzer
//! component Na+, Cl-
//! add NaCl 3.2 mol/kg
//! ```

use crate::chemistry::activity::ActivityKind;
use crate::chemistry::quantity::Scale;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::figures::significant;
use crate::rules::finding::Finding;
use crate::text::span::Place;

rule!("litre-taken-as-kilogram", Warning, "litre_taken_as_kilogram.rs", find);

/// Ionic strength, mol/L, to which a litre holds nearly a kilogram of water.
const ALIKE: f64 = 0.5;

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    let problem = context.problem;
    if problem.activity != ActivityKind::Pitzer || problem.scale != Scale::PerLitre {
        return;
    }
    let Some(solved) = context.solved() else { return };
    let ionic_strength = solved.answer.ionic_strength;
    if ionic_strength <= ALIKE {
        return;
    }
    let Some(at) = problem.activity_at.or_else(|| context.anchor()) else { return };
    let message = format!(
        "`pitzer` takes these amounts per litre as per kilogram of water, which differ at an \
         ionic strength of {} mol/L",
        significant(ionic_strength, 3),
    );
    found.push(RULE.at(at, message).with_help("state the amounts in mol/kg of water"));
}
