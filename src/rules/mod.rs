//! What is wrong with a problem: a catalogue, and one file per rule.

pub mod finding;
