//! What was meant: names, imports and units resolved, stoichiometry as an exact
//! matrix, and where each thing was written.

mod amounts;
pub mod belong;
pub mod blend;
pub mod builtin;
pub mod case;
mod charge_reading;
mod compare;
mod constant;
pub mod curve;
pub mod defect;
pub mod effective;
pub mod elimination;
pub mod exact;
mod expect;
pub mod files;
mod held;
pub mod import;
pub mod input;
mod missing;
pub mod model;
pub mod quantity;
pub mod reaction;
pub mod reagent;
pub mod resolve;
pub mod scope;
pub mod sets;
mod solids;
pub mod sort;
pub mod sparse;
mod split;
mod stock;
pub mod stoichiometry;
mod strength;
mod target;
pub mod uncertain;
mod written;
