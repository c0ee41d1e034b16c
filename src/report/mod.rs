//! How it is told: terminal text, JSON, SARIF, JUnit, pictures, and an editor's inline words.

pub mod answer;
pub mod balance;
pub mod cautions;
pub mod check_json;
pub mod constant;
pub mod curve;
pub mod derivation;
pub mod dose;
pub mod editor;
pub mod inline;
pub mod junit;
pub mod library;
pub mod library_json;
pub mod page;
pub mod picture;
pub mod sarif;
pub mod sheet;
pub mod sheet_json;
pub mod solids;
pub mod solution;
pub mod source;
pub mod style;
pub mod summary;
pub mod table;
pub mod terminal;
pub mod uncertainty;
mod waters;
pub mod wrap;

pub use crate::rules::{expectation, figures};
