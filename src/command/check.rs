//! `lyate check`: checks problem files and solves what can be solved.

use std::path::PathBuf;
use std::process::ExitCode;

use super::library::{Checker, find};
use super::terminal::style;
use crate::report::terminal;

/// Checks every .lyate file below the paths, and solves what can be solved
#[derive(clap::Args)]
pub struct Arguments {
    /// Files and folders; the current folder where none is given
    paths: Vec<PathBuf>,
    /// The folder that imports may not leave
    #[arg(long, value_name = "FOLDER")]
    root: Option<PathBuf>,
}

pub fn run(arguments: &Arguments) -> ExitCode {
    let mut paths = arguments.paths.clone();
    if paths.is_empty() {
        paths.push(PathBuf::from("."));
    }
    let files = match find(&paths) {
        Ok(files) => files,
        Err(problem) => {
            eprintln!("lyate: {problem}");
            return ExitCode::from(2);
        }
    };
    let checker = Checker::new(arguments.root.as_ref());
    for path in &files {
        match checker.check(path) {
            Ok((text, checked)) => {
                for finding in &checked.findings {
                    let shown = path.display().to_string();
                    println!("{}\n", terminal::finding(finding, &text, &shown, style()));
                }
                for outcome in &checked.outcomes {
                    match outcome.solved() {
                        Some(s) => println!(
                            "{} pH {:.3} I {:.4}",
                            path.display(),
                            s.ph(),
                            s.answer.ionic_strength
                        ),
                        None => println!(
                            "{} {:?} {:?}",
                            path.display(),
                            outcome.state,
                            outcome.problem.defects
                        ),
                    }
                }
            }
            Err(problem) => println!("{}: {problem:?}", path.display()),
        }
    }
    ExitCode::SUCCESS
}
