//! Running the built program on small files, and showing them with its output.

#![allow(dead_code)]

use std::fmt::Write as _;
use std::io::Read;
use std::path::Path;
use std::process::{Command, Output, Stdio};
use std::time::{Duration, Instant};

use tempfile::TempDir;

/// A folder of its own with these files in it.
pub fn folder(files: &[(&str, &str)]) -> TempDir {
    let folder = tempfile::tempdir().unwrap();
    for (name, text) in files {
        let path = folder.path().join(name);
        std::fs::create_dir_all(path.parent().unwrap()).unwrap();
        std::fs::write(path, text).unwrap();
    }
    folder
}

pub fn command(folder: &Path, arguments: &[&str]) -> Command {
    let mut command = Command::new(env!("CARGO_BIN_EXE_lyate"));
    command.current_dir(folder).args(arguments).env_remove("NO_COLOR").stdin(Stdio::null());
    command
}

pub fn run(folder: &Path, arguments: &[&str]) -> Output {
    command(folder, arguments).output().unwrap()
}

/// Runs, and fails the test where it takes longer than `limit` seconds.
pub fn run_within(folder: &Path, arguments: &[&str], limit: u64) -> Output {
    let mut child =
        command(folder, arguments).stdout(Stdio::piped()).stderr(Stdio::piped()).spawn().unwrap();
    let (mut out, mut err) = (child.stdout.take().unwrap(), child.stderr.take().unwrap());
    let out = std::thread::spawn(move || {
        let mut bytes = Vec::new();
        out.read_to_end(&mut bytes).unwrap();
        bytes
    });
    let err = std::thread::spawn(move || {
        let mut bytes = Vec::new();
        err.read_to_end(&mut bytes).unwrap();
        bytes
    });
    let start = Instant::now();
    let status = loop {
        if let Some(status) = child.try_wait().unwrap() {
            break status;
        }
        if start.elapsed() > Duration::from_secs(limit) {
            child.kill().unwrap();
            panic!("lyate {arguments:?} took longer than {limit} s");
        }
        std::thread::sleep(Duration::from_millis(10));
    };
    Output { status, stdout: out.join().unwrap(), stderr: err.join().unwrap() }
}

pub fn stdout(output: &Output) -> String {
    String::from_utf8(output.stdout.clone()).unwrap()
}

pub fn stderr(output: &Output) -> String {
    String::from_utf8(output.stderr.clone()).unwrap()
}

pub fn code(output: &Output) -> i32 {
    output.status.code().expect("it ended by itself")
}

/// The files, the command, what it said and its exit code, for a snapshot.
pub fn session(files: &[(&str, &str)], arguments: &[&str]) -> String {
    let folder = folder(files);
    let output = run(folder.path(), arguments);
    let mut shown = String::new();
    for (name, text) in files {
        writeln!(shown, "──── {name}\n{}", text.trim_end()).unwrap();
    }
    writeln!(shown, "──── lyate {}", arguments.join(" ")).unwrap();
    shown += &rounded(&stdout(&output));
    if !output.stderr.is_empty() {
        write!(shown, "──── standard error\n{}", stderr(&output)).unwrap();
    }
    writeln!(shown, "──── exit code {}", code(&output)).unwrap();
    shown.replace(env!("CARGO_PKG_VERSION"), "VERSION")
}

/// JSON with its numbers to six digits and what is nothing beside them as zero, since the
/// last digits differ from machine to machine; other text as it is.
fn rounded(text: &str) -> String {
    match serde_json::from_str::<serde_json::Value>(text) {
        Ok(value) if value.is_object() => format!("{:#}\n", round(value)),
        _ => text.to_owned(),
    }
}

fn round(value: serde_json::Value) -> serde_json::Value {
    use serde_json::Value;
    match value {
        Value::Number(number) if number.is_f64() => {
            let float = number.as_f64().unwrap();
            let float = if float.abs() < 1e-15 { 0.0 } else { float };
            let short: f64 = format!("{float:.5e}").parse().unwrap();
            serde_json::json!(short)
        }
        Value::Array(items) => Value::Array(items.into_iter().map(round).collect()),
        Value::Object(fields) => {
            Value::Object(fields.into_iter().map(|(key, value)| (key, round(value))).collect())
        }
        other => other,
    }
}

/// A file that solves, with a case.
pub const RINSE: &str = "\
# Rinse water of a milk line, ammonia from the cleaner. Invented figures.
problem \"Milk line, last rinse\"

use aqueous

temperature 12 °C

component NH3 \"ammonia nitrogen\", Na+, Cl-

add NH4Cl 2.0 mmol/L
add NaOH  0.8 mmol/L

balance protons
    [H+] + added NaOH = [OH-] + [NH3]

expect pH between 9.0 and 10.0
expect [NH3] < 20 mg/L as N

case \"warm\"
    temperature 38 °C
    expect pH between 8.0 and 9.0
";

/// A file with a fault of each severity.
pub const FAULTY: &str = "\
# Condensate with carbon dioxide. Invented figures.
component CO3^2-, Na+

reaction HCO3- <=> CO3^2- + H+, pKa = 10.33, source \"plant constants\"
reaction CO2 + H2O <=> HCO3- + 2 H+, pKa = 6.35, source \"plant constants\"
reaction NaCO3- <=> Na+ + CO3^2-, pK = 1.27

add NaHCO3 2 mmol/L
";
