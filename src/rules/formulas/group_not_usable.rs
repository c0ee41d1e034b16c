//! A declared group cannot be taken as it stands.
//!
//! A group's symbol is an upper-case letter and then letters, such as `Cit` or `EDTA`.
//! It is declared once, and its composition does not hold the group itself. Without a
//! sound declaration, no formula with the group in it has a composition.
//!
//! Before:
//!
//! ```lyate
//! group Cit = C6H5O7
//! group Cit = C6H6O7
//! ```
//!
//! After:
//!
//! ```lyate
//! group Cit = C6H5O7
//! ```

use crate::problem::defect::DefectKind;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::text::span::Place;

rule!("group-not-usable", Error, "group_not_usable.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for defect in context.defects() {
        let finding = match &defect.kind {
            DefectKind::GroupRepeated { symbol, other } => RULE
                .at(defect.at, format!("the group `{symbol}` is declared a second time"))
                .with_help("keep one declaration")
                .with_related(*other, "the first one"),
            DefectKind::GroupSymbol { symbol } => RULE
                .at(defect.at, format!("`{symbol}` cannot be the symbol of a group"))
                .with_help("a symbol is an upper-case letter and then letters, such as Cit"),
            DefectKind::GroupCircular { symbol } => RULE
                .at(defect.at, format!("the composition of `{symbol}` holds `{symbol}` itself"))
                .with_help("write its composition in elements"),
            _ => continue,
        };
        found.push(finding);
    }
}
