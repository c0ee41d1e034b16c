//! A plus that joins two species touches one of them.
//!
//! A sign that touches a formula is its charge, so `NH3+H+` could be read as one odd
//! formula. The plus of a sum stands between spaces: then `NH3 + H+` can only be two
//! species, and no charge is lost or gained unseen.
//!
//! Before:
//!
//! ```lyate
//! reaction NH4+ <=> NH3+H+, pKa = 9.25, source "site table, row 2"
//! ```
//!
//! After:
//!
//! ```lyate
//! reaction NH4+ <=> NH3 + H+, pKa = 9.25, source "site table, row 2"
//! ```

use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::text::problem::SyntaxProblemKind;
use crate::text::span::Place;

rule!("no-space-round-plus", Error, "no_space_round_plus.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for (written, problem) in context.syntax() {
        if let SyntaxProblemKind::NoSpaceRoundPlus { fixed } = &problem.kind {
            let at = written.place(problem.span);
            let message = "the plus of a sum stands between spaces; one that touches is a charge";
            let title = format!("write `{fixed}`");
            found.push(RULE.at(at, message).with_fix(title, true, at, fixed.as_str()));
        }
    }
}
