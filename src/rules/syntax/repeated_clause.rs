//! A clause that may stand once stands twice.
//!
//! A reaction has one enthalpy, one heat capacity, one temperature that its constant is
//! for, one valid range and one source. Where a clause stands twice nobody can tell
//! which of the two is in force, and the next reader may take the other one.
//!
//! Before:
//!
//! ```lyate
//! reaction NH4+ <=> NH3 + H+, pKa = 9.25, enthalpy = 52.1 kJ/mol, enthalpy = 51.9 kJ/mol,
//!     source "site table, row 2"
//! ```
//!
//! After:
//!
//! ```lyate
//! reaction NH4+ <=> NH3 + H+, pKa = 9.25, enthalpy = 52.1 kJ/mol, source "site table, row 2"
//! ```

use crate::problem::effective::Written;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::text::problem::SyntaxProblemKind;
use crate::text::span::{Place, Span};
use crate::text::token::Token;
use crate::text::tree::Statement;

rule!("repeated-clause", Error, "repeated_clause.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for (written, problem) in context.syntax() {
        if let SyntaxProblemKind::RepeatedClause { clause } = problem.kind {
            let at = written.place(problem.span);
            let mut finding = RULE
                .at(at, format!("the clause `{clause}` stands here a second time"))
                .with_help("keep one of the two");
            if let Some(first) = value_of_first(&written, clause) {
                finding = finding.with_related(written.place(first), "the first one");
            }
            let whole = written.place(with_comma(&written, problem.span));
            found.push(finding.with_fix("take the second one out", false, whole, ""));
        }
    }
}

/// The value of the clause that counts.
fn value_of_first(written: &Written, clause: &str) -> Option<Span> {
    let (reaction, source) = match written.statement() {
        Statement::Reaction(reaction) => (Some(reaction), reaction.source.as_ref()),
        Statement::Expect { confidence: Some(value), .. } if clause == "confidence" => {
            return Some(value.span);
        }
        Statement::Expect { source, .. } => (None, source.as_ref()),
        _ => (None, None),
    };
    if clause == "source" {
        return source.map(|source| source.span);
    }
    let reaction = reaction?;
    match clause {
        "enthalpy" => reaction.enthalpy.as_ref().map(|value| value.span),
        "heat capacity" => reaction.heat_capacity.as_ref().map(|value| value.span),
        "at" => reaction.at.as_ref().map(|value| value.span),
        "valid" => reaction.valid.as_ref().map(|(low, high)| low.span.to(high.span)),
        _ => None,
    }
}

/// The clause and the comma before it.
fn with_comma(written: &Written, clause: Span) -> Span {
    let comma = written
        .parsed
        .tokens
        .iter()
        .rev()
        .find(|(token, span)| *token == Token::Comma && span.end <= clause.start);
    comma.map_or(clause, |(_, comma)| comma.to(clause))
}
