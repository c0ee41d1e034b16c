//! The ionic strength lies past the range of the activity model.
//!
//! Each model of activity coefficients was made for waters up to some ionic strength: the
//! limiting law for 0.005 mol/kg, its extended forms for 0.1, Davies for 0.5 (common
//! practice). Past that the coefficients, and with them the pH and every share, drift away
//! from the truth, and nothing in the answer shows it.
//!
//! Take the next model. Past the range of the last one, take constants that were measured in
//! such a medium, with `activity ideal`, and check the pH with a meter before a dose rests
//! on it.
//!
//! Before:
//!
//! ```lyate
//! activity debye-huckel
//! component Na+, Cl-
//! add NaCl 40 mmol/L
//! ```
//!
//! After:
//!
//! ```lyate
//! activity extended-debye-huckel
//! component Na+, Cl-
//! add NaCl 40 mmol/L
//! ```

use crate::chemistry::activity::ActivityKind;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::figures::{scale_unit, significant};
use crate::rules::finding::Finding;
use crate::text::span::Place;
use crate::text::tree::Statement;

rule!("ionic-strength-past-model", Warning, "ionic_strength_past_model.rs", find);

/// The limits are round figures: what shows as one of them is not past it.
const TOUCHES: f64 = 1.005;

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    let problem = context.problem;
    let (Some(solved), Some(limit)) = (context.solved(), problem.activity.range_limit()) else {
        return;
    };
    let value = solved.answer.ionic_strength;
    if value <= limit * TOUCHES {
        return;
    }
    let given = context.statements.iter().find_map(|written| match written.statement() {
        Statement::IonicStrength { value } => Some(written.place(value.span)),
        _ => None,
    });
    let Some(at) = problem.activity_at.or(given).or_else(|| context.anchor()) else { return };
    let message = format!(
        "the ionic strength is {} {}, past the {limit} up to which `{}` is used",
        significant(value, 3),
        scale_unit(problem.scale),
        problem.activity.name(),
    );
    let mut finding = RULE.at(at, message);
    match next(value) {
        Some(next) => {
            let name = next.name();
            if problem.activity_at == Some(at) {
                finding = finding.with_fix(format!("take `{name}`"), false, at, name);
            }
            finding = finding.with_help(format!("`activity {name}` reaches this far"));
        }
        None => {
            finding = finding.with_help(
                "no model here reaches this far: take constants measured in such a medium, with \
                 `activity ideal`",
            );
        }
    }
    found.push(finding);
}

/// The model of the least range that still reaches this ionic strength.
fn next(ionic_strength: f64) -> Option<ActivityKind> {
    [ActivityKind::ExtendedDebyeHuckel, ActivityKind::Davies]
        .into_iter()
        .find(|kind| kind.range_limit().is_some_and(|limit| ionic_strength <= limit * TOUCHES))
}
