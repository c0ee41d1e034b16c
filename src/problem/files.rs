//! Reading the files that a problem uses, and the folder that they may not leave.

use std::io;
use std::path::{Path, PathBuf};
use std::sync::Arc;

/// Where texts come from: the disk, or an editor's open documents before it.
pub trait Files: Sync {
    fn read(&self, path: &Path) -> Result<Arc<str>, ReadProblem>;
}

#[derive(Clone, Debug, PartialEq)]
pub enum ReadProblem {
    /// Not there, a folder, not readable; in words.
    Missing(String),
    /// Not UTF-8 from this byte on.
    NotText { at_byte: usize },
}

/// Past this size a file is no problem file.
pub const LARGEST_FILE: u64 = 64 << 20;

/// The files on disk.
pub struct Disk;

impl Files for Disk {
    fn read(&self, path: &Path) -> Result<Arc<str>, ReadProblem> {
        let about = std::fs::metadata(path).map_err(|error| missing(&error))?;
        if about.is_dir() {
            return Err(ReadProblem::Missing("it is a folder".into()));
        }
        if !about.is_file() {
            return Err(ReadProblem::Missing("it is no regular file".into()));
        }
        if about.len() > LARGEST_FILE {
            return Err(ReadProblem::Missing("it is larger than 64 MiB".into()));
        }
        let bytes = std::fs::read(path).map_err(|error| missing(&error))?;
        match String::from_utf8(bytes) {
            Ok(text) => Ok(text.into()),
            Err(error) => Err(ReadProblem::NotText { at_byte: error.utf8_error().valid_up_to() }),
        }
    }
}

fn missing(error: &io::Error) -> ReadProblem {
    ReadProblem::Missing(match error.kind() {
        io::ErrorKind::NotFound => "there is no such file".into(),
        io::ErrorKind::PermissionDenied => "it may not be read".into(),
        _ => format!("the system says: {}", system_words(error)),
    })
}

/// "Too many levels of symbolic links (os error 40)" without its number.
pub fn system_words(error: &io::Error) -> String {
    error.to_string().split(" (os error").next().unwrap_or_default().to_lowercase()
}

/// The folder that imports may not leave: the first of `given` that holds the file, else the
/// nearest folder above it with `.git` or `lyate.toml`, else its own folder.
pub fn root_of(file: &Path, given: &[PathBuf]) -> PathBuf {
    let file = file.canonicalize().unwrap_or_else(|_| file.to_path_buf());
    for root in given {
        let root = root.canonicalize().unwrap_or_else(|_| root.clone());
        if file.starts_with(&root) {
            return root;
        }
    }
    let own = file.parent().unwrap_or(Path::new("/"));
    own.ancestors()
        .find(|folder| folder.join(".git").exists() || folder.join("lyate.toml").is_file())
        .unwrap_or(own)
        .to_path_buf()
}
