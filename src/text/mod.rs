//! What was written: layout, tokens, the tree with its comments, byte ranges.

mod layout;
pub mod lines;
pub mod names;
pub mod number;
pub mod parse;
pub mod print;
pub mod problem;
mod run;
pub mod span;
pub mod token;
pub mod tree;
