//! An activity model is not known.
//!
//! `activity` names the model that gives the activity coefficients of ions: `ideal`,
//! `debye-huckel`, `extended-debye-huckel`, `guntelberg`, `davies` or `pitzer`; `davies` where the
//! file says nothing. At 0.1 mol/L the models lie some tenths of a pH unit apart, so an
//! unknown one is not replaced by another.
//!
//! Before:
//!
//! ```lyate
//! activity davis
//! ```
//!
//! After:
//!
//! ```lyate
//! activity davies
//! ```

use crate::chemistry::activity::ActivityKind;
use crate::problem::defect::DefectKind;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::rules::words::names;
use crate::text::span::Place;

rule!("unknown-activity-model", Error, "unknown_activity_model.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for defect in context.defects() {
        if let DefectKind::UnknownModel { word, nearest } = &defect.kind {
            let models = ActivityKind::ALL.map(ActivityKind::name);
            let finding = RULE
                .at(defect.at, format!("there is no activity model `{word}`"))
                .with_help(format!("the models are {}", names(&models, "and")));
            found.push(match nearest {
                Some(near) => finding.with_fix(format!("write `{near}`"), false, defect.at, *near),
                None => finding,
            });
        }
    }
}
