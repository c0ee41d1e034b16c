//! Where a document lies on disk, so that two ways of naming a file are one file.

use std::path::{Component, Path, PathBuf};

/// Where a document lies: as it is spelled, and with symbolic links resolved.
#[derive(Clone, Default)]
pub struct Place {
    pub spelled: Option<PathBuf>,
    real: Option<PathBuf>,
}

impl Place {
    pub fn of(path: Option<PathBuf>) -> Self {
        let real = path.as_deref().and_then(|path| path.canonicalize().ok());
        Self { spelled: path.map(|path| normal(&path)), real }
    }

    /// Whether both are the same file.
    pub fn meets(&self, other: &Place) -> bool {
        self.paths().any(|path| other.paths().any(|other| other == path))
    }

    pub fn paths(&self) -> impl Iterator<Item = &PathBuf> {
        [&self.spelled, &self.real].into_iter().flatten()
    }
}

/// A path without `.` and, as far as the spelling tells, without `..`.
pub fn normal(path: &Path) -> PathBuf {
    let mut normal = PathBuf::new();
    for part in path.components() {
        match part {
            Component::CurDir => {}
            Component::ParentDir if normal.file_name().is_some() => {
                normal.pop();
            }
            part => normal.push(part),
        }
    }
    normal
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_place_is_met_however_it_is_spelled() {
        let place = |path: &str| Place::of(Some(path.into()));
        assert!(place("/plant/a/../b.lyate").meets(&place("/plant/./b.lyate")));
        assert!(!place("/plant/a.lyate").meets(&place("/plant/b.lyate")));
        assert!(!Place::default().meets(&Place::default()), "an unsaved document lies nowhere");
        assert_eq!(normal(Path::new("/../a/b/../../c")), Path::new("/../c"));
    }
}
