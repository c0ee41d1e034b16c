//! A unit, or what follows `as`, cannot be used for this substance.
//!
//! A mass is turned into moles by the molar mass, which a group of unknown composition
//! does not have. `as N` counts nitrogen, so the substance must hold some. `meq/L` and
//! `as CaCO3` count charge, and a neutral species has none. A volume per volume needs
//! the density of the product, which no formula tells: read it from its data sheet.
//!
//! Before:
//!
//! ```lyate
//! component Cl-
//! total Cl- = 10 mg/L as N
//! ```
//!
//! After:
//!
//! ```lyate
//! component Cl-
//! total Cl- = 10 mg/L
//! ```

use crate::chemistry::quantity::ConversionProblem;
use crate::problem::defect::DefectKind;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::text::span::Place;

rule!("unit-not-applicable", Error, "unit_not_applicable.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for defect in context.defects() {
        let DefectKind::UnitNotApplicable { unit, problem, .. } = &defect.kind else { continue };
        let written = context.text(defect.at);
        let (message, help) = words(unit, written, problem);
        found.push(RULE.at(defect.at, message).with_help(help));
    }
}

fn words(unit: &str, written: &str, problem: &ConversionProblem) -> (String, String) {
    match problem {
        ConversionProblem::NoMolarMass { species } => (
            format!("`{unit}` needs the molar mass of {species}, which is not known"),
            "give it in mmol/L, or give its group a composition: group Lig = C10H12O5".into(),
        ),
        ConversionProblem::Neutral { species } => (
            format!("`{written}` counts charge, and {species} has none"),
            "give it in mmol/L or mg/L".into(),
        ),
        ConversionProblem::BasisAbsent { species, basis } => (
            format!("`as {basis}` counts {basis}, and {species} holds none"),
            format!("leave `as {basis}` out, or name what {species} holds"),
        ),
        ConversionProblem::BasisProportion { species, basis } => (
            format!("{species} does not hold the parts of {basis} in their proportion"),
            "name a single element after `as`".into(),
        ),
        ConversionProblem::BasisWithUnit { unit } => (
            format!("`{unit}` takes no `as`"),
            "`as` goes with a mass such as mg/L, or with an amount such as mmol/L".into(),
        ),
        ConversionProblem::NeedsDensity { unit } => (
            format!("`{unit}` is a volume, and the density of the product is not known"),
            "work out the amount from its data sheet and give it in mmol/L or g/L".into(),
        ),
        ConversionProblem::FractionOutOfRange => (
            "a mass fraction lies between 0 and below 100 %".into(),
            "give it in g/kg of water, or correct the number".into(),
        ),
        ConversionProblem::WrongDimension { found, expected } => (
            format!("`{unit}` is a {}, and a {} is needed", found.name(), expected.name()),
            format!("for example {}", expected.units().map(|u| u.name).next().unwrap_or("mmol/L")),
        ),
        ConversionProblem::BelowAbsoluteZero => {
            ("it lies below absolute zero".into(), "0 K is −273.15 °C".into())
        }
    }
}
