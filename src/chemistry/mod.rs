//! What matter is: elements, formulas, quantities, units and stocks, water, activity.

pub mod activity;
pub mod constant;
pub mod element;
pub mod formula;
pub mod interaction;
pub mod ion_size;
pub mod quantity;
pub mod stock;
pub mod unit;
pub mod water;
