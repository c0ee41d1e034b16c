//! What was meant: names, imports and units resolved, stoichiometry as an exact
//! matrix, and where each thing was written.

pub mod stoichiometry;
