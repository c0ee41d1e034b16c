//! An expression in T holds more operators than is read.
//!
//! `log K(T)` takes an expression of up to 256 operators. Published fits have about ten;
//! a longer one is a slip of a script that wrote the file.
//!
//! Before:
//!
//! ```lyate
//! reaction NH4+ <=> NH3 + H+, log K(T) = 0
//!     +1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1
//!     +1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1
//!     +1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1
//!     +1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1
//!     +1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1
//!     +1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1
//!     +1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1+1-1,
//!     source "site fit of March"
//! ```
//!
//! After:
//!
//! ```lyate
//! reaction NH4+ <=> NH3 + H+, log K(T) = -0.09018 - 2729.92/T, source "site fit of March"
//! ```

use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::text::problem::SyntaxProblemKind;
use crate::text::span::Place;

rule!("expression-too-long", Error, "expression_too_long.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for (written, problem) in context.syntax() {
        if let SyntaxProblemKind::ExpressionTooLong { limit } = problem.kind {
            let at = written.place(problem.span);
            let message = format!("the expression holds more than {limit} operators");
            found.push(RULE.at(at, message).with_help("simplify it, or give `log K =` with `at`"));
        }
    }
}
