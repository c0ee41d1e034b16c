//! The amount of a solid is asked for that the problem leaves out.
//!
//! A solid forms or dissolves only where a statement says so: `precipitate X` lets it form,
//! `saturate with X` puts it there in excess. Any other solid has a saturation index and no
//! amount: a supersaturated water may stay as it is for years.
//!
//! Before:
//!
//! ```lyate
//! component Ca^2+, F-, Na+, Cl-
//! reaction CaF2(s) <=> Ca^2+ + 2 F-, pKsp = 10.5, source "site table, row 7"
//! add CaCl2 5 mmol/L
//! add NaF   4 mmol/L
//! expect precipitated CaF2(s) > 100 mg/L
//! ```
//!
//! After:
//!
//! ```lyate
//! component Ca^2+, F-, Na+, Cl-
//! reaction CaF2(s) <=> Ca^2+ + 2 F-, pKsp = 10.5, source "site table, row 7"
//! add CaCl2 5 mmol/L
//! add NaF   4 mmol/L
//! precipitate CaF2(s)
//! expect precipitated CaF2(s) > 100 mg/L
//! ```

use crate::problem::defect::DefectKind;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::text::span::{Place, Span};

rule!("solid-not-stated", Error, "solid_not_stated.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for defect in context.defects() {
        let DefectKind::SolidNotStated { name } = &defect.kind else { continue };
        let message = format!("nothing lets `{name}` form or dissolve, so it has no amount");
        // At the margin or a case's indentation: the statement starts where this one does.
        let start = Place { span: Span::new(0, 0), ..defect.at };
        let indent = if defect.at.section == crate::text::span::Part::Case { "    " } else { "" };
        let line = format!("precipitate {name}\n{indent}");
        found.push(
            RULE.at(defect.at, message).with_fix(format!("let `{name}` form"), false, start, line),
        );
    }
}
