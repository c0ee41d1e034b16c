//! A formula holds a symbol that is no element and no declared group.
//!
//! Symbols are written as in the periodic table, an upper-case letter and perhaps a
//! lower-case one: `Cl`, not `CL`. `CO` and `Co`, `NO` and `No` show that the case of a
//! letter can make another substance. A symbol of your own, such as `Cit`, is declared
//! first: `group Cit = C6H5O7`.
//!
//! Before:
//!
//! ```lyate
//! component Na+, Cl-
//! add NaCL 5 mmol/L
//! ```
//!
//! After:
//!
//! ```lyate
//! component Na+, Cl-
//! add NaCl 5 mmol/L
//! ```

use crate::chemistry::formula::{FormulaProblemKind, Groups};
use crate::problem::defect::DefectKind;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::text::span::Place;

rule!("unknown-element", Error, "unknown_element.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for defect in context.defects() {
        let DefectKind::Formula {
            problem: FormulaProblemKind::UnknownElement { symbol, nearest }, ..
        } = &defect.kind
        else {
            continue;
        };
        let message = format!("`{symbol}` is no element and no declared group");
        let finding = RULE.at(defect.at, message);
        found.push(match nearest {
            Some(nearest) => {
                finding.with_fix(format!("write `{nearest}`"), false, defect.at, nearest.as_str())
            }
            None if Groups::is_valid_symbol(symbol) => {
                finding.with_help(format!("declare it if it is a group of atoms: group {symbol}"))
            }
            None => finding.with_help("an element starts with an upper-case letter, as Na does"),
        });
    }
}
