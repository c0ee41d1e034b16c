//! A formula opens a parenthesis and does not close it, or the other way round.
//!
//! What stands in parentheses is counted together, `(NH4)2SO4`, or names a phase,
//! `CaCO3(s)`. With one of the pair missing the formula has no one composition: the
//! mass and the charge of what is dosed would be a guess.
//!
//! Before:
//!
//! ```lyate
//! component NH3, SO4^2-
//! add (NH42SO4 12 mmol/L
//! ```
//!
//! After:
//!
//! ```lyate
//! component NH3, SO4^2-
//! add (NH4)2SO4 12 mmol/L
//! ```

use crate::chemistry::formula::FormulaProblemKind;
use crate::problem::defect::DefectKind;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::text::span::Place;

rule!("unbalanced-parenthesis", Error, "unbalanced_parenthesis.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for defect in context.defects() {
        let DefectKind::Formula { text, problem: FormulaProblemKind::UnbalancedParenthesis } =
            &defect.kind
        else {
            continue;
        };
        let opens = context.text(defect.at).starts_with('(');
        let (message, help) = if opens {
            (format!("the parenthesis is never closed in `{text}`"), "write the missing `)`")
        } else {
            (format!("the parenthesis closes nothing in `{text}`"), "write the missing `(`")
        };
        found.push(RULE.at(defect.at, message).with_help(help));
    }
}
