//! The command line: one file per command.

use std::process::ExitCode;

use clap::{Parser, Subcommand};

mod check;
mod chosen;
mod derive;
mod draw;
mod explain;
mod files;
mod library;
mod reply;
mod serve;
mod solve;
mod terminal;

/// Checks, balances, solves and explains chemical-equilibrium problem files.
#[derive(Parser)]
#[command(
    name = "lyate",
    version,
    about,
    after_help = "\
`lyate check` reads every .lyate file below the current folder, and is where to start.
`lyate COMMAND --help` says more about a command, its forms of output and exit codes."
)]
struct Arguments {
    #[command(subcommand)]
    command: Command,
}

#[derive(Subcommand)]
enum Command {
    Check(check::Arguments),
    Solve(solve::Arguments),
    Derive(derive::Arguments),
    Draw(draw::Arguments),
    Explain(explain::Arguments),
    Library(library::Arguments),
    Serve(serve::Arguments),
}

/// Runs the command that the arguments name.
pub fn run() -> ExitCode {
    match Arguments::parse().command {
        Command::Check(arguments) => reply::give(check::run(&arguments)),
        Command::Solve(arguments) => reply::give(solve::run(&arguments)),
        Command::Derive(arguments) => reply::give(derive::run(&arguments)),
        Command::Draw(arguments) => reply::give(draw::run(&arguments)),
        Command::Explain(arguments) => reply::give(explain::run(&arguments)),
        Command::Library(arguments) => reply::give(library::run(&arguments)),
        Command::Serve(arguments) => serve::run(&arguments),
    }
}
