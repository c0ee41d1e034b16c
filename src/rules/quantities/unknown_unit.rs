//! A unit is none that is known, or one that may mean several things.
//!
//! Units are written as on a laboratory report: `mmol/L`, `mg/L`, `meq/L`, `°C`, `µatm`.
//! Case counts: `mM` is a concentration and `MM` is nothing. `ppm`, `ppb` and `N` are
//! refused although they are in use, since they do not say per what, or of what: in a
//! gas `ppm` is a share of the volume, in a brine a share of the mass, in a dilute water
//! about a milligram per litre.
//!
//! Before:
//!
//! ```lyate
//! component NH3
//! total NH3 = 14 ppm
//! ```
//!
//! After:
//!
//! ```lyate
//! component NH3
//! total NH3 = 14 mg/L as N
//! ```

use crate::chemistry::unit::{Dimension, Unit, UnitProblem};
use crate::problem::defect::DefectKind;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::rules::words::names;
use crate::text::span::Place;
use crate::text::tree::{Statement, Subject};

rule!("unknown-unit", Error, "unknown_unit.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for defect in context.defects() {
        let DefectKind::UnknownUnit { text, problem } = &defect.kind else { continue };
        let finding = match problem {
            UnitProblem::Unknown { nearest } => {
                let finding = RULE.at(defect.at, format!("`{text}` is no unit"));
                if nearest.is_empty() {
                    finding.with_help("units are written as mmol/L, mg/L, meq/L, °C, µatm, kJ/mol")
                } else {
                    offer(finding, text, nearest)
                }
            }
            UnitProblem::Ambiguous { candidates } => {
                let fitting = fitting(context, defect.at, candidates);
                let (message, help) = match fitting[..] {
                    [one] => (format!("`{text}` is no unit here"), format!("write `{one}`")),
                    _ => (
                        format!("`{text}` may mean several things"),
                        format!("write {}, whichever is meant", names(&fitting, "or")),
                    ),
                };
                offer(RULE.at(defect.at, message).with_help(help), text, &fitting)
            }
        };
        found.push(finding);
    }
}

fn offer(mut finding: Finding<Place>, text: &str, units: &[&str]) -> Finding<Place> {
    for unit in units {
        // `mmol/l` is read by everyone as `mmol/L`.
        let safe = text.replace("/l", "/L") == *unit;
        let at = finding.at;
        finding = finding.with_fix(format!("write `{unit}`"), safe, at, *unit);
    }
    finding
}

/// Of the units that may be meant, those of a gas for a gas, and the others for others.
fn fitting<'u>(context: &Context, at: Place, units: &[&'u str]) -> Vec<&'u str> {
    let of_gas = context.statement(at).is_some_and(|written| {
        matches!(
            written.statement(),
            Statement::Hold { subject, .. } | Statement::Expect { subject, .. }
                if matches!(subject.value, Subject::Pressure(_))
        )
    });
    let is_pressure =
        |unit: &str| Unit::parse(unit).is_ok_and(|unit| unit.dimension == Dimension::Pressure);
    let fitting: Vec<_> =
        units.iter().copied().filter(|unit| is_pressure(unit) == of_gas).collect();
    if fitting.is_empty() { units.to_vec() } else { fitting }
}
