//! A charge is written so that it may be read in more ways than one.
//!
//! A charge above one takes a caret, number then sign: `SO4^2-`, `Ca^2+`. `SO4-2`,
//! `SO4--`, `SO42-` and `Ca+2` are each read differently by different people and are
//! refused. `Ca2+` can be read, as two calcium atoms with one charge; where no reaction
//! knows such a species, a warning says that `Ca^2+` was surely meant. A charge misread
//! puts every charge balance, and so the dose of acid or base, off by as much.
//!
//! Before:
//!
//! ```lyate
//! component SO4-2
//! ```
//!
//! After:
//!
//! ```lyate
//! component SO4^2-
//! ```

use crate::chemistry::formula::FormulaProblemKind;
use crate::problem::defect::DefectKind;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::{Finding, Severity};
use crate::text::span::Place;

rule!("ambiguous-charge", Error, "ambiguous_charge.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for defect in context.defects() {
        match &defect.kind {
            DefectKind::Formula {
                text,
                problem: FormulaProblemKind::AmbiguousCharge { suggestion },
            } => {
                let charge = context.text(defect.at);
                let message = format!("the charge `{charge}` may be read in several ways");
                let whole = context.whole_name(defect.at, text).unwrap_or(defect.at);
                let title = format!("write `{suggestion}`");
                found.push(RULE.at(defect.at, message).with_fix(
                    title,
                    true,
                    whole,
                    suggestion.as_str(),
                ));
            }
            DefectKind::AmbiguousCharge { text, suggestion } => {
                let sign = text.find(['+', '-', '−', '–']).unwrap_or(text.len());
                let (atoms, charge) = text.split_at(sign);
                let charge = if charge.starts_with('+') { "+1" } else { "−1" };
                let message = format!(
                    "`{text}` is read as {atoms} with the charge {charge}, \
                     and no balanced reaction has it"
                );
                let title = format!("write `{suggestion}`");
                let finding =
                    RULE.at(defect.at, message).with_help(format!("{suggestion} was surely meant"));
                let finding = Finding { severity: Severity::Warning, ..finding };
                found.push(finding.with_fix(title, false, defect.at, suggestion.as_str()));
            }
            _ => {}
        }
    }
}
