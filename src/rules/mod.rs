//! What is wrong with a problem: a catalogue, and one file per rule.

pub mod catalogue;
pub mod check;
pub mod context;
pub mod finding;
pub mod outcome;
pub mod words;

mod reactions;

/// The families of rules, in the order of `lyate explain`.
pub static FAMILIES: &[catalogue::Family] = &[reactions::FAMILY];
