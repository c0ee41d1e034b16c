//! `lyate serve`: the language server on standard input and output.

use std::process::ExitCode;
use std::sync::Arc;

use crate::server::{self, checker::Checker};

/// Serve an editor by the Language Server Protocol, on standard input and output
#[derive(clap::Args)]
pub struct Arguments {
    /// Accepted for editors that pass it; changes nothing
    #[arg(long)]
    stdio: bool,
}

pub fn run(_: &Arguments) -> ExitCode {
    server::run(Arc::new(Checker::default()))
}
