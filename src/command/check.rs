//! `lyate check`: checks problem files and solves what can be solved.

use std::collections::HashMap;
use std::path::PathBuf;

use super::library::{Checker, find};
use super::reply::{Complaint, Reply};
use super::terminal::style;
use crate::report::source::{FileReport, Reading};
use crate::report::summary::Summary;
use crate::report::wrap::wrapped;
use crate::report::{check_json, junit, sarif, terminal};
use crate::rules::finding::{Failing, LocatedFinding, Severity};

/// Check problem files, and solve what can be solved
///
/// Looks for .lyate files at and below the paths, leaving out what .gitignore and .ignore
/// files name. Each file is read, its balances are compared with those that its reactions
/// imply, its base and each case are solved, and the answers are held to what the file
/// expects of them.
#[derive(clap::Args)]
#[command(
    verbatim_doc_comment,
    after_help = "\
Exit code:
  0  nothing was found at or above --fail-on
  1  something was, or a problem could not be solved
  2  not run: wrong usage, or a path or file that cannot be read

`lyate explain RULE` says more about a finding."
)]
pub struct Arguments {
    /// Files and folders; the current folder where none is given
    #[arg(value_name = "PATH")]
    paths: Vec<PathBuf>,
    /// The folder that imports may not leave; else the nearest above
    /// each file that holds .git or lyate.toml, or the file's own
    #[arg(long, value_name = "FOLDER", verbatim_doc_comment)]
    root: Option<PathBuf>,
    /// The mildest fault that makes the exit code 1; cautions do only
    /// where `caution` is named, alone or as in `warning,caution`
    #[arg(
        long,
        value_name = "SEVERITY",
        value_enum,
        value_delimiter = ',',
        default_value = "error",
        verbatim_doc_comment
    )]
    fail_on: Vec<FailOn>,
    /// How to tell what was found
    #[arg(long, value_name = "FORM", value_enum, default_value_t = Form::Text)]
    output: Form,
}

#[derive(Clone, Copy, clap::ValueEnum)]
enum FailOn {
    Error,
    Warning,
    Note,
    Caution,
}

#[derive(Clone, Copy, PartialEq, Eq, clap::ValueEnum)]
enum Form {
    /// For people
    Text,
    /// For programs
    Json,
    /// For code review, as SARIF 2.1.0
    Sarif,
    /// For build servers, as JUnit XML
    Junit,
}

const WIDTH: usize = 100;

pub fn run(arguments: &Arguments) -> Result<Reply, Complaint> {
    let mut paths = arguments.paths.clone();
    if paths.is_empty() {
        paths.push(PathBuf::from("."));
    }
    let found = find(&paths).map_err(Complaint)?;
    let files = Checker::new(arguments.root.as_ref())?.check_all(&found);
    let summary = Summary::of(&files);
    let fail_on = failing(&arguments.fail_on);
    let unread = files.iter().any(|file| matches!(file.reading, Reading::Missing));
    let code = if unread {
        2
    } else {
        u8::from(summary.failing(fail_on) > 0 || summary.solved < summary.problems)
    };
    let written = |text: Result<String, String>| match text {
        Ok(text) => Ok(text.trim_end().to_owned() + "\n"),
        Err(problem) => Err(Complaint(format!("the report could not be written: {problem}"))),
    };
    let text = match arguments.output {
        Form::Text if files.is_empty() => String::new(),
        Form::Text => text(&files, &summary),
        Form::Json => written(check_json::report(&files).map_err(|e| e.to_string()))?,
        Form::Sarif => written(sarif::report(&files).map_err(|e| e.to_string()))?,
        Form::Junit => written(junit::report(&files, fail_on).map_err(|e| e.to_string()))?,
    };
    let mut reply = Reply::new(text, code);
    if files.is_empty() {
        let places: Vec<String> = paths.iter().map(|path| path.display().to_string()).collect();
        reply.remark = format!("lyate: there are no .lyate files in {}\n", places.join(", "));
    }
    Ok(reply)
}

fn failing(named: &[FailOn]) -> Failing {
    let fault = |named: &FailOn| match named {
        FailOn::Error | FailOn::Caution => Severity::Error,
        FailOn::Warning => Severity::Warning,
        FailOn::Note => Severity::Note,
    };
    Failing {
        at_least: named.iter().map(fault).min().unwrap_or(Severity::Error),
        cautions: named.iter().any(|named| matches!(named, FailOn::Caution)),
    }
}

/// Errors and warnings in their text, notes and cautions on a line each, and a line that
/// sums up.
fn text(files: &[FileReport], summary: &Summary) -> String {
    let style = style();
    let mut text = String::new();
    let mut before_are_notes = true;
    for file in files {
        let (notes, others): (Vec<&LocatedFinding>, Vec<&LocatedFinding>) =
            file.findings.iter().partition(|finding| finding.severity <= Severity::Note);
        for (finding, cases) in by_place(&others) {
            text += if before_are_notes && !text.is_empty() { "\n" } else { "" };
            text += &terminal::likewise(finding, &cases, &file.source, style);
            text += "\n\n";
            before_are_notes = false;
        }
        if !notes.is_empty() {
            text += &terminal::notes(&notes, &file.source, style);
            before_are_notes = true;
        }
    }
    text += if before_are_notes && !text.is_empty() { "\n" } else { "" };
    text += &summary.words(style);
    if summary.cautions > 0 {
        let words = "Cautions find no fault with a file; where they speak, safety data sheets, \
                     local codes and licensed practice go first.";
        text += &format!("\n{}", wrapped(words, 0, 0, WIDTH));
    }
    text + "\n"
}

/// Findings of one rule at one place in several cases, told together.
fn by_place<'a>(
    findings: &[&'a LocatedFinding],
) -> Vec<(&'a LocatedFinding, Vec<&'a LocatedFinding>)> {
    let mut groups: Vec<(&LocatedFinding, Vec<&LocatedFinding>)> = Vec::new();
    let mut known: HashMap<(&str, usize, usize), usize> = HashMap::new();
    for finding in findings {
        let key = (finding.rule, finding.at.start, finding.at.end);
        match known.get(&key) {
            // Only other cases: one section may have two faults of a kind at one place.
            Some(&index) if finding.case.is_some() && finding.case != groups[index].0.case => {
                groups[index].1.push(finding);
            }
            _ => {
                known.insert(key, groups.len());
                groups.push((finding, Vec::new()));
            }
        }
    }
    groups
}
