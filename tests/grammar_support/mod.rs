//! The EBNF of `grammar/lyate.ebnf` at work: read, made into sentences, and used to
//! recognise text.

pub mod made;
pub mod read;
pub mod recognised;

use std::collections::BTreeMap;

/// The rules by name.
pub struct Grammar {
    pub rules: BTreeMap<String, Expression>,
}

#[derive(Debug)]
pub enum Expression {
    Literal(String),
    /// One character in these ranges, or in none of them.
    Class {
        negated: bool,
        ranges: Vec<(char, char)>,
    },
    Rule(String),
    Sequence(Vec<Expression>),
    Choice(Vec<Expression>),
    /// At least so often, and at most so often where there is a limit.
    Repeat(Box<Expression>, usize, Option<usize>),
}

impl Grammar {
    pub fn rule(&self, name: &str) -> &Expression {
        self.rules.get(name).unwrap_or_else(|| panic!("the grammar has no rule {name}"))
    }
}

/// A rule in capitals: nothing may stand between its parts.
pub fn is_lexical(name: &str) -> bool {
    name.starts_with(|c: char| c.is_ascii_uppercase())
}
