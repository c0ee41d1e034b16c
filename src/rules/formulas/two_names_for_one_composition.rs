//! Two names are in use for one composition and charge.
//!
//! `NH3` and `H3N`, or `HAc` beside `CH3COOH`, are to the program two species, and each
//! gets a share of the matter. Where one substance is meant, its concentration comes out
//! split in two and its acid counts twice. Use one name throughout; where two isomers,
//! or a sum of species, are meant, a declared group or a trailing `*` tells them apart.
//!
//! Before:
//!
//! ```lyate
//! component NH3
//! reaction NH4+ <=> H3N + H+, pKa = 9.25, source "site table, row 2"
//! reaction NH4OH <=> NH3 + H2O, log K = -0.5, source "site table, row 3"
//! reaction NH5O <=> H3N + H2O, log K = -0.5, source "site table, row 4"
//! ```
//!
//! After:
//!
//! ```lyate
//! component NH3
//! reaction NH4+ <=> NH3 + H+, pKa = 9.25, source "site table, row 2"
//! ```

use crate::problem::defect::DefectKind;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::text::span::Place;

rule!("two-names-for-one-composition", Warning, "two_names_for_one_composition.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for defect in context.defects() {
        let DefectKind::TwoNames { name, other, other_at } = &defect.kind else { continue };
        let message = format!("`{name}` and `{other}` have the same composition and charge");
        let mut finding = RULE.at(defect.at, message).with_help(format!(
            "if they are one substance, write `{other}` everywhere; they count as two"
        ));
        if let Some(other_at) = other_at {
            finding = finding.with_related(*other_at, "the other name");
        }
        found.push(finding.with_fix(
            format!("write `{other}` here"),
            false,
            defect.at,
            other.as_str(),
        ));
    }
}
