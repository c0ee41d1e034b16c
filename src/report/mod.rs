//! How it is told: terminal text, JSON, SARIF, JUnit, and an editor's inline words.

pub mod editor;
pub mod inline;
pub mod terminal;

pub use crate::rules::{expectation, figures};
