//! What is wrong with a problem: a catalogue, and one file per rule.

pub mod catalogue;
pub mod check;
pub mod compared;
pub mod context;
pub mod expectation;
pub mod figures;
pub mod finding;
pub mod ion_balance;
pub mod outcome;
pub mod plan;
pub mod waters;
pub mod words;

mod answers;
mod balances;
mod blends;
mod cautions;
mod closure;
mod components;
mod curves;
mod files;
mod formulas;
mod quantities;
mod reactions;
mod reagents;
mod statements;
mod syntax;
mod targets;

/// The families of rules, in the order of `lyate explain`.
pub static FAMILIES: &[catalogue::Family] = &[
    syntax::FAMILY,
    quantities::FAMILY,
    formulas::FAMILY,
    reactions::FAMILY,
    components::FAMILY,
    reagents::FAMILY,
    blends::FAMILY,
    closure::FAMILY,
    targets::FAMILY,
    balances::FAMILY,
    answers::FAMILY,
    curves::FAMILY,
    cautions::FAMILY,
    files::FAMILY,
    statements::FAMILY,
];
