//! A blended water holds what this file lists no component for.
//!
//! What a water brings is counted over this file's own components. A substance that none of
//! them makes would be lost on the way, and with it its share of the charge, of the hardness
//! or of the alkalinity. So it is asked for; a substance of which the water holds nothing
//! need not be listed.
//!
//! Before:
//!
//! ```lyate
//! component Na+, Cl-
//! blend 100 % of "well.lyate"
//! ```
//!
//! ```lyate well.lyate
//! component Na+, Cl-, K+
//! add NaCl 2.1 mmol/L
//! add KCl 0.1 mmol/L
//! ```
//!
//! After:
//!
//! ```lyate
//! component Na+, Cl-, K+
//! blend 100 % of "well.lyate"
//! ```
//!
//! ```lyate well.lyate
//! component Na+, Cl-, K+
//! add NaCl 2.1 mmol/L
//! add KCl 0.1 mmol/L
//! ```

use crate::problem::defect::DefectKind;
use crate::rules::catalogue::rule;
use crate::rules::components::listing;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::rules::words;
use crate::text::span::Place;

rule!("blended-component-missing", Error, "blended_component_missing.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for defect in context.defects() {
        let DefectKind::BlendedComponentMissing { file, names } = &defect.kind else { continue };
        let shown = words::names(names, "and");
        let message = format!("`{file}` holds {shown}, for which no component is listed here");
        let mut finding = RULE.at(defect.at, message);
        let listed = names.join(", ");
        if let Some((at, text)) = listing::add(context, &listed) {
            finding = finding.with_fix(format!("list {shown}"), false, at, text);
        } else {
            finding = finding.with_help(format!("write `component {listed}`"));
        }
        found.push(finding);
    }
}
