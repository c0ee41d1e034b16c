//! A weak acid is written as the reaction of its base with water.
//!
//! `NH3 + H2O <=> NH4+ + OH-` is right, and its constant is a Kb. By common practice
//! every acid and base is entered as its acid reaction, `NH4+ <=> NH3 + H+` with a pKa:
//! then all constants can be compared, and none depends on which ion product of water
//! it was worked out with. The fix uses the ion product in force in the file, at the
//! temperature of the constant.
//!
//! Before:
//!
//! ```lyate
//! reaction NH3 + H2O <=> NH4+ + OH-, pK = 4.75, source "site table, row 2"
//! ```
//!
//! After:
//!
//! ```lyate
//! reaction NH4+ <=> NH3 + H+, pKa = 9.25, source "site table, row 2"
//! ```

use num_traits::ToPrimitive;

use super::own;
use crate::problem::defect::DefectKind;
use crate::problem::reaction::LogK;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::rules::figures::celsius;
use crate::text::span::Place;
use crate::text::tree::{ConstantKind, ConstantValue, Quantity};

rule!("weak-acid-as-base", Note, "weak_acid_as_base.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for defect in context.defects() {
        let DefectKind::BaseReaction { acid } = &defect.kind else { continue };
        let message = format!("by common practice this is entered as its acid, `{acid}`");
        let finding = RULE.at(defect.at, message);
        found.push(match converted(context, defect.at) {
            Some(Converted { constant, place, pkw }) => {
                let edits = vec![(defect.at, acid.clone()), (place, constant.clone())];
                finding
                    .with_help(format!("the constant becomes {constant}, with {pkw}"))
                    .with_edits(format!("write `{acid}, {constant}`"), false, edits)
            }
            None => finding.with_help("its pKa is pKw less the pKb"),
        });
    }
}

struct Converted {
    constant: String,
    place: Place,
    pkw: String,
}

/// The pKa; none where the constant moves with temperature by clauses of its own, which
/// would have to be converted too.
fn converted(context: &Context, at: Place) -> Option<Converted> {
    let tree = own::tree(context, at)?;
    let (_, reaction) = own::reaction(context, at)?;
    let LogK::At { log_k, kelvin } = reaction.constant.as_ref()?.value else { return None };
    let [constant] = &tree.constants[..] else { return None };
    let ConstantValue::Number(quantity) = &constant.value else { return None };
    if tree.enthalpy.is_some() || tree.heat_capacity.is_some() {
        return None;
    }
    let pkw = -log_kw(context, kelvin)?;
    let places = places(constant.kind.value, quantity);
    let mut text = format!("pKa = {:.places$}", pkw + log_k);
    // An uncertainty of a logarithm stays what it is; that of K would have to be converted.
    if let Some(uncertainty) = quantity.uncertainty.as_ref().filter(|u| !u.percent)
        && constant.kind.value != ConstantKind::K
    {
        text = format!("{text} ± {}", uncertainty.number.text);
    }
    Some(Converted {
        constant: text,
        place: Place { span: constant.span, ..at },
        pkw: format!("pKw = {pkw:.3} at {}", celsius(kelvin)),
    })
}

/// log Kw by the reaction of water that is in force.
fn log_kw(context: &Context, kelvin: f64) -> Option<f64> {
    let reactions = &context.problem.scope.reactions;
    let water = reactions.iter().find(|reaction| reaction.key == "H+ OH-")?;
    let (log_k, _) = water.log_k(kelvin)?;
    let proton = water.participants.iter().find(|p| p.formula.is_proton())?;
    Some(log_k / proton.coefficient.to_f64()?)
}

/// Decimals that the constant is known to, at least two.
fn places(kind: ConstantKind, quantity: &Quantity) -> usize {
    let number = &quantity.number;
    let half = match kind {
        ConstantKind::K => number.half_digit / number.value / std::f64::consts::LN_10,
        _ => number.half_digit,
    };
    (-(2.0 * half).log10()).round().clamp(2.0, 6.0) as usize
}
