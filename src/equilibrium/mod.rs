//! What nature does: the equilibrium that the constants and totals imply, and which
//! terms of the balances it rests on. Numbers in, numbers out.

pub mod build;
pub mod quantities;
pub mod system;
