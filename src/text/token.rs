//! The tokens of a statement.

#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Token {
    Space,
}
