//! Parentheses nest deeper than is read.
//!
//! A formula, or an expression in `T`, may nest parentheses 64 deep: far more than any
//! substance or fit needs, and little enough that no text can exhaust the program. What
//! nests deeper is a slip of a script that wrote the file.
//!
//! Before:
//!
//! ```lyate
//! reaction NH4+ <=> NH3 + H+, log K(T) =
//!     ((((((((((((((((((((((((((((((((((((((((((((((((((((((((((((((((((((((
//!     -9.25
//!     )))))))))))))))))))))))))))))))))))))))))))))))))))))))))))))))))))))),
//!     source "site fit of March"
//! ```
//!
//! After:
//!
//! ```lyate
//! reaction NH4+ <=> NH3 + H+, log K(T) = (-9.25), source "site fit of March"
//! ```

use crate::chemistry::formula::FormulaProblemKind;
use crate::problem::defect::DefectKind;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::text::problem::SyntaxProblemKind;
use crate::text::span::Place;

rule!("nesting-too-deep", Error, "nesting_too_deep.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    let mut report = |at, limit: usize| {
        let message = format!("parentheses nest deeper than {limit}");
        found.push(RULE.at(at, message).with_help("write it with fewer parentheses"));
    };
    for (written, problem) in context.syntax() {
        if let SyntaxProblemKind::NestingTooDeep { limit } = problem.kind {
            report(written.place(problem.span), limit);
        }
    }
    for defect in context.defects() {
        if let DefectKind::Formula {
            problem: FormulaProblemKind::NestingTooDeep { limit }, ..
        } = defect.kind
        {
            report(defect.at, limit);
        }
    }
}
