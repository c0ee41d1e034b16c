//! What a command answers: its text, its exit code, and how both leave the program.

use std::io::{ErrorKind, Write};
use std::process::ExitCode;

/// The exit code of a command that could not be run.
const NOT_RUN: u8 = 2;

pub struct Reply {
    /// For standard output.
    pub text: String,
    /// For standard error.
    pub remark: String,
    pub code: u8,
}

/// Why a command could not be run: for standard error, after `lyate: `.
pub struct Complaint(pub String);

impl Reply {
    pub fn new(text: String, code: u8) -> Reply {
        Reply { text, remark: String::new(), code }
    }
}

/// Writes it out. A reader that has gone away (`lyate check | head`) is no fault.
pub fn give(answer: Result<Reply, Complaint>) -> ExitCode {
    let reply = match answer {
        Ok(reply) => reply,
        Err(Complaint(words)) => {
            complain(&format!("lyate: {words}\n"));
            return ExitCode::from(NOT_RUN);
        }
    };
    complain(&reply.remark);
    let mut out = std::io::stdout().lock();
    match out.write_all(reply.text.as_bytes()).and_then(|()| out.flush()) {
        Err(error) if error.kind() != ErrorKind::BrokenPipe => {
            complain(&format!("lyate: the answer could not be written: {error}\n"));
            ExitCode::from(NOT_RUN)
        }
        _ => ExitCode::from(reply.code),
    }
}

fn complain(words: &str) {
    // Where nobody can be told, nobody can be told.
    let _ = std::io::stderr().lock().write_all(words.as_bytes());
}
