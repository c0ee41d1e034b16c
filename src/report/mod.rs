//! How it is told: terminal text, JSON, SARIF, JUnit, and an editor's inline words.

pub mod editor;
pub mod expectation;
pub mod figures;
pub mod inline;
pub mod terminal;
