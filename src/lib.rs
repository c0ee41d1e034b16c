//! Lyate: a language server and checker for chemical-equilibrium problem files.
//!
//! Text flows one way through these rooms; each knows only the ones before it.

pub mod chemistry;
pub mod text;

pub mod problem;

pub mod balance;

pub mod equilibrium;

pub mod rules;

pub mod report;

pub mod command;
pub mod server;
