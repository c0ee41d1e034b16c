//! What can be wrong with a formula: typed, the words are found elsewhere.

use std::ops::Range;

#[derive(Clone, Debug, PartialEq, Eq)]
pub struct FormulaProblem {
    /// Bytes of the text that was read.
    pub range: Range<usize>,
    pub kind: FormulaProblemKind,
}

#[derive(Clone, Debug, PartialEq, Eq)]
pub enum FormulaProblemKind {
    /// No element and no declared group has this symbol.
    UnknownElement {
        symbol: String,
        nearest: Option<String>,
    },
    /// A parenthesis without its partner.
    UnbalancedParenthesis,
    /// `()`
    EmptyParentheses,
    /// A charge that may be read in more ways than one; the suggestion is the whole
    /// formula in caret form.
    AmbiguousCharge {
        suggestion: String,
    },
    /// `SO4^2`: a charge whose sign is missing.
    MissingChargeSign,
    /// A phase other than `(aq)`, `(s)`, `(g)`, `(l)` or `(s, form)`. Where the word
    /// may well name a solid form, the suggestion is the formula so written.
    UnknownPhase {
        phase: String,
        suggestion: Option<String>,
    },
    /// A character that has no place here.
    UnexpectedCharacter {
        found: char,
    },
    /// `H0`
    ZeroCount,
    /// A count or a charge beyond all sense.
    NumberTooLarge,
    NestingTooDeep {
        limit: usize,
    },
    /// No atom at all.
    Empty,
}
