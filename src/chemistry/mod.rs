//! What matter is: elements, formulas, quantities and units, water, activity.

pub mod activity;
pub mod element;
pub mod formula;
