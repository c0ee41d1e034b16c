//! The ionic strength lies past the range of the activity model.
//!
//! Each model of activity coefficients was made for waters up to some ionic strength: the
//! limiting law for 0.005 mol/kg, its extended forms for 0.1, Davies for 0.5 (common
//! practice). Pitzer's method reaches as far as the parameters of the main ions were held
//! against measured salts, at most to 6. Past that the coefficients, and with them the pH and every share, drift away
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
use crate::chemistry::formula::Formula;
use crate::chemistry::interaction::{self, binary};
use crate::equilibrium::quantities::Solved;
use crate::problem::model::Problem;
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
    let pitzer = problem.activity == ActivityKind::Pitzer;
    let (limit, pair) = if pitzer { reach(problem, solved) } else { (limit, None) };
    if value <= limit * TOUCHES {
        return;
    }
    let given = context.statements.iter().find_map(|written| match written.statement() {
        Statement::IonicStrength { value } => Some(written.place(value.span)),
        _ => None,
    });
    let Some(at) = problem.activity_at.or(given).or_else(|| context.anchor()) else { return };
    let of = pair.map_or(String::new(), |[one, other]| format!(" for {one} with {other}"));
    let message = format!(
        "the ionic strength is {} {}, past the {limit} up to which `{}` is used{of}",
        significant(value, 3),
        scale_unit(problem.scale),
        problem.activity.name(),
    );
    let mut finding = RULE.at(at, message);
    let past_all = (!pitzer && reaches(problem, solved)).then_some(ActivityKind::Pitzer);
    match next(value, pitzer).or(past_all) {
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

/// The model of the least range that still reaches this ionic strength; beside Pitzer's
/// method Davies is the only one to turn to.
fn next(ionic_strength: f64, pitzer: bool) -> Option<ActivityKind> {
    [ActivityKind::ExtendedDebyeHuckel, ActivityKind::Davies]
        .into_iter()
        .filter(|kind| !pitzer || *kind == ActivityKind::Davies)
        .find(|kind| kind.range_limit().is_some_and(|limit| ionic_strength <= limit * TOUCHES))
}

/// Ions with this share of the ionic strength are the main ones.
const MAIN: f64 = 0.05;

fn main_ions<'a>(problem: &'a Problem, solved: &Solved) -> Vec<&'a Formula> {
    let scope = &problem.scope;
    let concentrations = scope.dissolved.iter().zip(&solved.answer.concentrations);
    concentrations
        .map(|(&s, c)| (scope.species[s].as_ref(), c))
        .filter(|(formula, c)| {
            let own = 0.5 * f64::from(formula.charge).powi(2) * *c;
            formula.charge != 0 && own >= MAIN * solved.answer.ionic_strength
        })
        .map(|(formula, _)| formula)
        .collect()
}

/// The parameters of each cation with each anion of the main ions, where there are any.
fn pairs<'a>(
    ions: &'a [&'a Formula],
) -> impl Iterator<Item = ([&'a str; 2], Option<&'static interaction::parameters::Binary>)> {
    let cations = ions.iter().filter(|ion| ion.charge > 0);
    cations.flat_map(|cation| {
        let anions = ions.iter().filter(|ion| ion.charge < 0);
        anions.map(|anion| ([cation.name.as_str(), anion.name.as_str()], binary(cation, anion)))
    })
}

/// How far the interactions of the main ions were checked, and which pair ends there; the
/// method's own end where none ends before.
fn reach(problem: &Problem, solved: &Solved) -> (f64, Option<[String; 2]>) {
    let ions = main_ions(problem, solved);
    let mut least = (interaction::REACH, None);
    for (names, binary) in pairs(&ions) {
        if let Some(binary) = binary.filter(|binary| binary.checked.to < least.0) {
            least = (binary.checked.to, Some(names.map(str::to_owned)));
        }
    }
    least
}

/// Whether Pitzer's method knows all main ions this far.
fn reaches(problem: &Problem, solved: &Solved) -> bool {
    let ions = main_ions(problem, solved);
    let known = pairs(&ions).all(|(_, binary)| binary.is_some());
    known && solved.answer.ionic_strength <= reach(problem, solved).0 * TOUCHES
}
