//! How it is told: terminal text, JSON, SARIF, JUnit, and an editor's inline words.

pub mod inline;
