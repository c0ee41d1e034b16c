//! A species stands in a phase that this place cannot take.
//!
//! `[X]` and `{X}` are of what is dissolved, a bare `X(g)` is the pressure of a gas, and a
//! saturation index is of a solid. The phase is part of the name: `CO2` is dissolved,
//! `CO2(g)` is the gas above the water, and the two differ by Henry's law.
//!
//! The slip is easily made and large: for carbon dioxide at 25 °C one atmosphere stands over
//! about 0.034 mol/L, so a pressure read as a concentration is out by a factor of thirty.
//!
//! Before:
//!
//! ```lyate
//! use aqueous
//! component CO3^2-, Na+
//! add NaHCO3 2 mmol/L
//! expect [CO2(g)] < 20 µmol/L
//! ```
//!
//! After:
//!
//! ```lyate
//! use aqueous
//! component CO3^2-, Na+
//! add NaHCO3 2 mmol/L
//! expect [CO2] < 20 µmol/L
//! ```

use crate::chemistry::formula::{Formula, Phase};
use crate::problem::defect::DefectKind;
use crate::problem::scope::{Scope, WATER};
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::text::span::Place;

rule!("wrong-phase", Error, "wrong_phase.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    let scope = &context.problem.scope;
    for defect in context.defects() {
        let DefectKind::WrongPhase { name, needs } = &defect.kind else { continue };
        let species = scope.find(name);
        let is = match species.map(|s| &scope.species[s]) {
            _ if species == Some(WATER) => "the water itself",
            Some(formula) if formula.is_electron() => "never dissolved",
            Some(formula) => words(&formula.phase),
            None => "of another phase",
        };
        let mut finding = RULE.at(defect.at, format!("`{name}` is {is}; this takes {needs}"));
        if let Some(other) = species.and_then(|s| in_phase(scope, &scope.species[s], needs)) {
            finding = finding.with_fix(format!("write `{other}`"), false, defect.at, other);
        }
        found.push(finding);
    }
}

fn words(phase: &Phase) -> &'static str {
    match phase {
        Phase::Aqueous => "a dissolved species",
        Phase::Gas => "a gas",
        Phase::Liquid => "a liquid",
        Phase::Solid(_) => "a solid",
    }
}

/// The same matter in the phase that is needed, where the problem holds it.
fn in_phase(scope: &Scope, formula: &Formula, needs: &str) -> Option<String> {
    let fits = |other: &Formula| {
        words(&other.phase) == needs
            && other.charge == formula.charge
            && other.atoms == formula.atoms
    };
    (0..scope.species.len())
        .filter(|&s| s != WATER && scope.belongs(s))
        .map(|s| &scope.species[s])
        .find(|other| fits(other))
        .map(|other| other.name.clone())
}
