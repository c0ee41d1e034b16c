//! A file counts per litre in one place and per kilogram of water in another.
//!
//! A problem has one scale, the one of its first concentration, and its constants are
//! taken as given on that scale. Values on the other scale are converted with the
//! density of water at the problem's temperature. In dilute water at room temperature
//! the two differ by 0.3 %; in a hot or a salty one by several per cent.
//!
//! Before:
//!
//! ```lyate
//! use ammonia
//! component NH3, Cl-
//! add NH4Cl 2 mmol/L
//! add HCl 1 mmol/kg
//! ```
//!
//! After:
//!
//! ```lyate
//! use ammonia
//! component NH3, Cl-
//! add NH4Cl 2 mmol/L
//! add HCl 1 mmol/L
//! ```

use crate::chemistry::quantity::Scale;
use crate::problem::defect::DefectKind;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::text::span::Place;

rule!("mixed-scales", Note, "mixed_scales.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for defect in context.defects() {
        let DefectKind::MixedScales { other } = defect.kind else { continue };
        let (here, file) = match context.problem.scale {
            Scale::PerLitre => ("kilogram of water", "litre"),
            Scale::PerKilogram => ("litre", "kilogram of water"),
        };
        let message = format!(
            "this is per {here} and the file counts per {file}; \
             such values are converted with the density of water"
        );
        found.push(RULE.at(defect.at, message).with_related(other, "the scale is set here"));
    }
}
