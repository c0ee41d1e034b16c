//! Finding the problem files below some paths, and checking them.

use std::path::{Path, PathBuf};
use std::sync::Mutex;
use std::sync::atomic::{AtomicBool, AtomicUsize, Ordering};

use ignore::WalkBuilder;

use super::reply::Complaint;
use crate::problem::files::{Disk, Files, ReadProblem, system_words};
use crate::problem::import::Imports;
use crate::report::source::{FileReport, Reading, Source};
use crate::rules::check::{Surroundings, check};
use crate::rules::finding::{Finding, Severity};
use crate::text::tree::Document;

/// A path to check, or what keeps a folder from being listed.
pub struct Found {
    path: PathBuf,
    trouble: Option<String>,
}

/// The `.lyate` files at and below the paths, in order, ignored ones left out. A path that
/// is named itself is taken whatever it is called.
///
/// # Errors
/// The named paths that are not there, in words.
pub fn find(paths: &[PathBuf]) -> Result<Vec<Found>, String> {
    let mut found = Vec::new();
    let mut missing = Vec::new();
    for path in paths {
        match std::fs::metadata(path) {
            Err(error) => missing.push(format!("{}: {}", path.display(), reason(&error))),
            Ok(about) if about.is_dir() => found.extend(below(path)),
            Ok(_) => found.push(Found { path: path.clone(), trouble: None }),
        }
    }
    if !missing.is_empty() {
        return Err(missing.join("\nlyate: "));
    }
    let mut seen = std::collections::HashSet::new();
    found.retain(|found| seen.insert(found.path.clone()));
    Ok(found)
}

fn below(folder: &Path) -> impl Iterator<Item = Found> {
    // "./sump.lyate" is told as "sump.lyate".
    let shown = |path: &Path| path.strip_prefix("./").unwrap_or(path).to_path_buf();
    let walk = WalkBuilder::new(folder).sort_by_file_path(Path::cmp).build();
    let folder = folder.to_path_buf();
    walk.filter_map(move |entry| match entry {
        Ok(entry) => {
            let is_problem = entry.path().extension().is_some_and(|e| e == "lyate");
            (is_problem && !entry.path().is_dir())
                .then(|| Found { path: shown(entry.path()), trouble: None })
        }
        Err(error) => {
            let (path, words) = trouble(&error);
            Some(Found { path: path.unwrap_or_else(|| folder.clone()), trouble: Some(words) })
        }
    })
}

/// What went wrong while listing, and where.
fn trouble(error: &ignore::Error) -> (Option<PathBuf>, String) {
    let mut path = None;
    let mut inner = error;
    loop {
        inner = match inner {
            ignore::Error::WithPath { path: at, err } => {
                path = Some(at.clone());
                err
            }
            ignore::Error::WithDepth { err, .. } | ignore::Error::WithLineNumber { err, .. } => err,
            ignore::Error::Io(error) => return (path, reason(error)),
            other => return (path, other.to_string()),
        }
    }
}

fn reason(error: &std::io::Error) -> String {
    match error.kind() {
        std::io::ErrorKind::NotFound => "there is no such file or folder".into(),
        std::io::ErrorKind::PermissionDenied => "it may not be read".into(),
        _ => system_words(error),
    }
}

/// Reads and checks files, keeping what they share.
pub struct Checker {
    roots: Vec<PathBuf>,
    imports: Imports,
}

impl Checker {
    /// `root` is the folder that imports may not leave.
    ///
    /// # Errors
    /// Where there is no such folder.
    pub fn new(root: Option<&PathBuf>) -> Result<Checker, Complaint> {
        if let Some(root) = root.filter(|root| !root.is_dir()) {
            return Err(Complaint(format!("--root {}: there is no such folder", root.display())));
        }
        let roots = root.cloned().into_iter().collect();
        Ok(Checker { roots, imports: Imports::default() })
    }

    /// All of them, on all cores, in the order given.
    pub fn check_all(&self, files: &[Found]) -> Vec<FileReport> {
        let cores = std::thread::available_parallelism().map_or(1, usize::from);
        let next = AtomicUsize::new(0);
        let done: Mutex<Vec<(usize, FileReport)>> = Mutex::new(Vec::with_capacity(files.len()));
        let work = || {
            while let Some((index, file)) = {
                let index = next.fetch_add(1, Ordering::Relaxed);
                files.get(index).map(|file| (index, file))
            } {
                let report = match &file.trouble {
                    Some(why) => missing(file.path.display().to_string(), why),
                    None => self.check(&file.path),
                };
                done.lock().unwrap_or_else(|e| e.into_inner()).push((index, report));
            }
        };
        std::thread::scope(|scope| {
            for _ in 1..cores.min(files.len()) {
                scope.spawn(work);
            }
            work();
        });
        let mut done = done.into_inner().unwrap_or_else(|e| e.into_inner());
        done.sort_by_key(|(index, _)| *index);
        done.into_iter().map(|(_, report)| report).collect()
    }

    /// A file that cannot be read gives a report with one finding.
    pub fn check(&self, path: &Path) -> FileReport {
        let name = path.display().to_string();
        let text = match Disk.read(path) {
            Ok(text) => text,
            Err(ReadProblem::Missing(why)) => return missing(name, &why),
            Err(ReadProblem::NotText { at_byte }) => return not_text(name, path, at_byte),
        };
        let around = Surroundings {
            path: Some(path),
            roots: &self.roots,
            files: &Disk,
            imports: &self.imports,
            cancel: &AtomicBool::new(false),
        };
        match check(Document::parse(text.clone()), &around, None) {
            Some(checked) => FileReport {
                source: Source::new(name, text),
                findings: checked.findings.clone(),
                reading: Reading::Checked(Box::new(checked)),
            },
            // Nothing sets the flag.
            None => missing(name, "the check was cancelled"),
        }
    }
}

fn missing(name: String, why: &str) -> FileReport {
    let why = why.trim_start_matches("the system says: ");
    let message = format!("the file cannot be read: {why}");
    unread(name, Finding::new("file-missing", Severity::Error, 0..0, message), Reading::Missing)
}

fn not_text(name: String, path: &Path, at_byte: usize) -> FileReport {
    // Where that is, as an editor shows it; the bytes before are text.
    let bytes = std::fs::read(path).unwrap_or_default();
    let before = std::str::from_utf8(bytes.get(..at_byte).unwrap_or_default()).unwrap_or_default();
    let line = before.matches('\n').count() + 1;
    let column = before.rsplit('\n').next().unwrap_or_default().chars().count() + 1;
    let message = format!("the file is not UTF-8 text: it breaks at line {line}, column {column}");
    let finding = Finding::new("file-not-text", Severity::Error, 0..0, message)
        .with_help("save it again in the encoding UTF-8, if it is a problem file at all");
    unread(name, finding, Reading::NotText)
}

fn unread(name: String, finding: Finding<std::ops::Range<usize>>, reading: Reading) -> FileReport {
    FileReport { source: Source::new(name, "".into()), findings: vec![finding], reading }
}
