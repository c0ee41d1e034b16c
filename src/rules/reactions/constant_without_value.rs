//! An expression for a constant gives no number at this temperature.
//!
//! `log K(T)` is evaluated with `T` in kelvin. A division by zero, the logarithm of a
//! negative number, or a power beyond all bounds gives nothing to calculate with. Most
//! often a term was meant for degrees Celsius, or a sign was lost.
//!
//! Before:
//!
//! ```lyate
//! component NH3
//! reaction NH4+ <=> NH3 + H+, log K(T) = -9.25 + log(25 - T), source "site fit of March"
//! ```
//!
//! After:
//!
//! ```lyate
//! component NH3
//! reaction NH4+ <=> NH3 + H+, log K(T) = -0.09018 - 2729.92/T, source "site fit of March"
//! ```

use super::own;
use crate::problem::defect::DefectKind;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::rules::figures::celsius;
use crate::text::span::Place;

rule!("constant-without-value", Error, "constant_without_value.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for defect in context.defects() {
        let DefectKind::ConstantHasNoValue { reaction, wanted, own } = &defect.kind else {
            continue;
        };
        let constant = own::tree(context, defect.at).and_then(|tree| tree.constants.first());
        let at = constant.map_or(defect.at, |constant| Place { span: constant.span, ..defect.at });
        let at_temperature = format!("at {} (T = {wanted:.2})", celsius(*wanted));
        let message = if *own {
            format!("the constant has no finite value {at_temperature}")
        } else {
            format!("the constant of `{reaction}` has no finite value {at_temperature}")
        };
        found.push(RULE.at(at, message).with_help("T is the temperature in kelvin"));
    }
}
