//! A unit measures something else than its place takes.
//!
//! A total is a concentration, a held gas has a pressure, a pH has no unit at all. A unit
//! of another kind shows that the number belongs elsewhere, or that the wrong line of
//! the laboratory report was copied.
//!
//! Before:
//!
//! ```lyate
//! component NH3
//! total NH3 = 12 kPa
//! ```
//!
//! After:
//!
//! ```lyate
//! component NH3
//! total NH3 = 12 mmol/L
//! ```

use super::kinds::{measured, needed, units};
use crate::chemistry::unit::{Dimension, Unit};
use crate::problem::defect::{DefectKind, Expected};
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::rules::words::names;
use crate::text::span::{Place, Span};

rule!("wrong-dimension", Error, "wrong_dimension.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for defect in context.defects() {
        let DefectKind::WrongDimension { unit, found: dimension, expected } = &defect.kind else {
            continue;
        };
        let needed = needed(*expected);
        let message =
            format!("`{unit}` is {}, and {needed} is needed here", measured(*dimension));
        let mut finding = RULE.at(defect.at, message);
        let units = units(*expected);
        let as_carbonate = matches!(expected, Expected::Equivalents | Expected::Hardness);
        if as_carbonate && *dimension == Dimension::MassPerLitre {
            let new = format!("{unit} as CaCO3");
            let title = format!("write `{new}`");
            finding = finding.with_fix(title, false, defect.at, new);
        }
        if *expected == Expected::Plain && dimension.is_concentration() {
            // Without its unit a millimole would count as a mole.
            finding = finding.with_help(match Unit::parse(unit) {
                Ok(unit) if unit.factor != 1.0 => {
                    format!("write a number alone; 1 {} counts as {}", unit.name, unit.factor)
                }
                _ => "write a number alone".to_owned(),
            });
        } else if *expected == Expected::Plain {
            let whole = with_space(context, defect.at);
            finding = finding.with_fix(format!("take `{unit}` out"), false, whole, "");
        } else {
            finding = finding.with_help(format!("for example {}", names(units, "or")));
        }
        found.push(finding);
    }
}

/// The place with the white space before it.
fn with_space(context: &Context, at: Place) -> Place {
    let before = Place { span: Span { start: 0, end: at.span.start }, ..at };
    let start = context.text(before).trim_end().len() as u32;
    Place { span: Span { start, ..at.span }, ..at }
}
