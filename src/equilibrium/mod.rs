//! What nature does: the equilibrium that the constants and totals imply, and which
//! terms of the balances it rests on. Numbers in, numbers out.

mod basis;
pub mod build;
pub mod capacities;
pub mod charge;
mod coordinates;
pub mod curve;
mod direction;
pub mod dominance;
mod exact;
mod feasible;
mod fixed;
mod frame;
mod ionic;
mod line;
mod newton;
pub mod path;
mod plane;
mod point;
pub mod quantities;
mod root;
mod scan;
mod search;
pub mod sensitivity;
pub mod several;
mod skew;
pub mod solve;
mod start;
mod sum;
pub mod system;
pub mod uncertainty;
pub mod weighed;
