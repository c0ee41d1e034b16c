//! The `lyate` program.

use std::process::ExitCode;

fn main() -> ExitCode {
    lyate::command::run()
}
