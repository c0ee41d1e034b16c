//! A quantity stands without its unit.
//!
//! A number alone does not say whether it counts moles or milligrams, degrees Celsius or
//! kelvin. Between millimoles and milligrams per litre of sodium hydroxide lies a factor
//! of 40, so a dose without its unit is never guessed at.
//!
//! Before:
//!
//! ```lyate
//! component Na+
//! add NaOH 9
//! ```
//!
//! After:
//!
//! ```lyate
//! component Na+
//! add NaOH 9 mmol/L
//! ```

use super::kinds::{needed, units};
use crate::problem::defect::DefectKind;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::rules::words::names;
use crate::text::span::Place;

rule!("unit-missing", Error, "unit_missing.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for defect in context.defects() {
        let DefectKind::MissingUnit { expected } = defect.kind else { continue };
        let text = context.text(defect.at);
        let mut units = units(expected).to_vec();
        if !names_substance(context, defect.at) {
            // Without a substance a mass has no molar mass.
            units.retain(|unit| *unit != "mg/L");
        }
        let mut finding =
            RULE.at(defect.at, format!("{} needs its unit after `{text}`", needed(expected)));
        if !units.is_empty() {
            finding = finding.with_help(format!("for example {}", names(&units, "or")));
        }
        for unit in units {
            let title = format!("write `{text} {unit}`");
            finding = finding.with_fix(title, false, context.after(defect.at), format!(" {unit}"));
        }
        found.push(finding);
    }
}

/// Whether the statement says of which substance the quantity is.
fn names_substance(context: &Context, at: Place) -> bool {
    let mut named = false;
    if let Some(written) = context.statement(at) {
        written.statement().each_formula(&mut |_| named = true);
    }
    named
}
