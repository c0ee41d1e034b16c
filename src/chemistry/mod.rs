//! What matter is: elements, formulas, quantities and units, water, activity.

pub mod activity;
pub mod constant;
pub mod element;
pub mod formula;
pub mod interaction;
pub mod ion_size;
pub mod quantity;
pub mod unit;
pub mod water;
