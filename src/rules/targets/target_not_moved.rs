//! The amount that is to meet a target has no part in it.
//!
//! Hydrochloric acid brings no sodium, and no amount of it changes the total of sodium. Either
//! the wrong reagent stands after `by`, or something else holds the quantity already.
//!
//! Before:
//!
//! ```lyate
//! component Na+, Cl-
//! add NaCl 10 mmol/L
//! hold total Na+ = 15 mmol/L by HCl
//! ```
//!
//! After:
//!
//! ```lyate
//! component Na+, Cl-
//! add HCl 10 mmol/L
//! hold total Na+ = 15 mmol/L by NaOH
//! ```

use crate::equilibrium::target::Missed;
use crate::problem::defect::DefectKind;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::expectation::quantity_words;
use crate::rules::finding::Finding;
use crate::rules::outcome::State;
use crate::text::span::Place;

rule!("target-not-moved", Error, "target_not_moved.rs", find);

const HELP: &str = "name a reagent that does, or look for what holds it already";

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for defect in context.defects() {
        let DefectKind::NotMoved { subject, by } = &defect.kind else { continue };
        let message = format!("`{by}` has no part in `{subject}` and cannot bring it to a value");
        found.push(RULE.at(defect.at, message).with_help(HELP));
    }
    let State::OutOfReach(Missed::Still { value }) = context.state else { return };
    let Some(target) = context.problem.targets.first() else { return };
    let by = context.problem.unknown_name(target.unknown);
    let value = value.map_or_else(
        || "has no value here".to_owned(),
        |value| {
            let unit = target.unit.as_ref();
            let value = quantity_words(context.problem, unit, target.sought, value);
            format!("stays {value}")
        },
    );
    let message = format!("no amount of `{by}` moves `{}`, which {value}", target.words);
    found.push(RULE.at(target.by, message).with_help(HELP));
}
