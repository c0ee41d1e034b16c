//! A statement is part of the language, and this edition cannot solve it yet.
//!
//! `precipitate`, `saturate with` and `hold … by` are read and checked for their writing; solving them comes with a later edition. An amount that such a
//! statement would decide makes the answer another one, so the problem is not solved
//! while it stands there.
//!
//! Before:
//!
//! ```lyate
//! component Ca^2+, CO3^2-
//! precipitate CaCO3(s)
//! ```
//!
//! After:
//!
//! ```lyate
//! component Ca^2+, CO3^2-
//! reaction CaCO3(s) <=> Ca^2+ + CO3^2-, pKsp = 8.48, source "site table, row 9"
//! expect saturation index CaCO3(s) < 0
//! ```

use crate::problem::defect::DefectKind;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::text::span::Place;

rule!("not-yet-supported", Error, "not_yet_supported.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for defect in context.defects() {
        if let DefectKind::NotYetSupported { what } = defect.kind {
            let message = format!("`{what}` comes with a later edition");
            found.push(RULE.at(defect.at, message).with_help(instead(what)));
        }
    }
}

/// What can be done meanwhile.
fn instead(what: &str) -> &'static str {
    match what {
        "precipitate" => {
            "`expect saturation index CaCO3(s) < 0` says whether the solid would form"
        }
        "saturate with" => {
            "hold the ion that the solid sets, as in `hold {Ca^2+} = 1e-4`, \
             and look at the saturation index"
        }
        _ => "try doses with `add`, one in each case, and state the target with `expect`",
    }
}
