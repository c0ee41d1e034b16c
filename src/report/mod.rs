//! How it is told: terminal text, JSON, SARIF, JUnit, and an editor's inline words.

pub mod answer;
pub mod balance;
pub mod cautions;
pub mod check_json;
pub mod curve;
pub mod derivation;
pub mod editor;
pub mod inline;
pub mod junit;
pub mod page;
pub mod sarif;
pub mod sheet;
pub mod sheet_json;
pub mod solution;
pub mod source;
pub mod style;
pub mod summary;
pub mod table;
pub mod terminal;
mod waters;
pub mod wrap;

pub use crate::rules::{expectation, figures};
