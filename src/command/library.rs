//! Finding the problem files below some paths, and checking one.

use std::path::{Path, PathBuf};
use std::sync::Arc;
use std::sync::atomic::AtomicBool;

use ignore::WalkBuilder;

use crate::problem::files::{Disk, Files, ReadProblem};
use crate::problem::import::Imports;
use crate::rules::check::{Checked, Surroundings, check};
use crate::text::tree::Document;

/// The `.lyate` files at and below the paths, sorted, ignored ones left out. A path that is
/// named itself is taken whatever it is called.
///
/// # Errors
/// A path that is not there or cannot be listed, in words.
pub fn find(paths: &[PathBuf]) -> Result<Vec<PathBuf>, String> {
    let mut found = Vec::new();
    for path in paths {
        let about = std::fs::metadata(path)
            .map_err(|error| format!("{}: {}", path.display(), reason(&error)))?;
        if !about.is_dir() {
            found.push(path.clone());
            continue;
        }
        for entry in WalkBuilder::new(path).sort_by_file_path(Path::cmp).build() {
            let entry = entry.map_err(|error| error.to_string())?;
            let is_problem = entry.path().extension().is_some_and(|e| e == "lyate");
            if is_problem && !entry.path().is_dir() {
                found.push(entry.into_path());
            }
        }
    }
    let mut seen = std::collections::HashSet::new();
    found.retain(|path| seen.insert(path.clone()));
    Ok(found)
}

pub fn reason(error: &std::io::Error) -> String {
    match error.kind() {
        std::io::ErrorKind::NotFound => "there is no such file or folder".into(),
        std::io::ErrorKind::PermissionDenied => "it may not be read".into(),
        _ => error.to_string().split(" (os error").next().unwrap_or_default().to_lowercase(),
    }
}

/// Reads and checks files one after another, keeping what they share.
pub struct Checker {
    pub roots: Vec<PathBuf>,
    imports: Imports,
}

impl Checker {
    pub fn new(root: Option<&PathBuf>) -> Checker {
        Checker { roots: root.cloned().into_iter().collect(), imports: Imports::default() }
    }

    /// # Errors
    /// Where the file cannot be read as text.
    pub fn check(&self, path: &Path) -> Result<(Arc<str>, Checked), ReadProblem> {
        let text = Disk.read(path)?;
        let around = Surroundings {
            path: Some(path),
            roots: &self.roots,
            files: &Disk,
            imports: &self.imports,
            cancel: &AtomicBool::new(false),
        };
        match check(Document::parse(text.clone()), &around, None) {
            Some(checked) => Ok((text, checked)),
            // Nothing sets the flag.
            None => Err(ReadProblem::Missing("the check was cancelled".into())),
        }
    }
}
