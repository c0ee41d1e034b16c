//! What can be wrong with the writing itself. Typed, with the range inside the
//! statement; the words are the rules' to find.

use super::span::Span;

/// Of broken tokens, and again of what else is wrong, no more than this many are told
/// for one statement: the next ones are most likely of the same kind.
pub const MOST_PROBLEMS: usize = 10;

#[derive(Clone, Debug, PartialEq)]
pub struct SyntaxProblem {
    pub span: Span,
    pub kind: SyntaxProblemKind,
}

#[derive(Clone, Debug, PartialEq)]
pub enum SyntaxProblemKind {
    /// The first word is no statement.
    UnknownStatement {
        word: String,
        nearest: Option<&'static str>,
    },
    /// Something else was expected here. `found` is empty at the end of a statement.
    Unexpected {
        found: String,
        expected: Vec<String>,
    },
    /// Text that starts like a number and is none, or is not finite.
    BrokenNumber {
        text: String,
    },
    UnclosedString,
    UnknownCharacter(char),
    /// `NH3+H+`: a sum needs spaces round its plus. `fixed` is the text to write.
    NoSpaceRoundPlus {
        fixed: String,
    },
    /// A clause that may stand once stands twice.
    RepeatedClause {
        clause: &'static str,
    },
    /// Indented where no statement or case is open, or to no statement's depth.
    StrayIndent,
    /// Parentheses nest deeper than `limit`.
    NestingTooDeep {
        limit: usize,
    },
    /// An expression holds more than `limit` operators.
    ExpressionTooLong {
        limit: usize,
    },
}
