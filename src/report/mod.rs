//! How it is told: terminal text, JSON, SARIF, JUnit.
