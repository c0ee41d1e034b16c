//! What was written: layout, tokens, the tree with its comments, byte ranges.

pub mod problem;
pub mod span;
pub mod token;
pub mod tree;
