//! Two statements speak of one solid.
//!
//! `precipitate X` says that X forms if the water is supersaturated, `saturate with X` that
//! there is more of X than can dissolve. Of two in one section the first counts. A case may
//! say the other thing: its statement takes the place of the base's.
//!
//! The two answers differ wherever the water is undersaturated: with the first it stays so,
//! with the second the solid dissolves into it.
//!
//! Before:
//!
//! ```lyate
//! component Ca^2+, SO4^2-, Na+
//! reaction CaSO4·2H2O(s) <=> Ca^2+ + SO4^2- + 2 H2O, pKsp = 4.58, source "site table, row 6"
//! add Na2SO4 10 mmol/L
//! precipitate   CaSO4·2H2O(s)
//! saturate with CaSO4·2H2O(s)
//! ```
//!
//! After:
//!
//! ```lyate
//! component Ca^2+, SO4^2-, Na+
//! reaction CaSO4·2H2O(s) <=> Ca^2+ + SO4^2- + 2 H2O, pKsp = 4.58, source "site table, row 6"
//! add Na2SO4 10 mmol/L
//! saturate with CaSO4·2H2O(s)
//! ```

use crate::problem::defect::DefectKind;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::text::span::Place;

rule!("solid-stated-twice", Error, "solid_stated_twice.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for defect in context.defects() {
        let DefectKind::SolidTwice { name, other } = &defect.kind else { continue };
        let first = context.text(*other);
        let finding = RULE
            .at(defect.at, format!("`{name}` is spoken of above already: `{first}`"))
            .with_help("keep one of the two, or move the other into a case")
            .with_related(*other, "the first one");
        found.push(finding);
    }
}
