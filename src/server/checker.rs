//! The seam's other side: the rooms before this one, as an [`Analyser`].

use std::any::Any;
use std::ops::Range;
use std::path::{Path, PathBuf};
use std::sync::Arc;

use super::analysis::{Analyser, Offer, Picture, PictureWish, Request, View};
use crate::problem::files::{Disk, Files, ReadProblem};
use crate::problem::import::Imports;
use crate::report::editor;
use crate::report::inline::{Hint, Hover, Symbol};
use crate::rules::catalogue;
use crate::rules::check::{Checked, Surroundings, check};
use crate::rules::finding::LocatedFinding;
use crate::text::tree::Document;

/// Checks documents, keeping what they import between edits.
#[derive(Default)]
pub struct Checker {
    imports: Imports,
}

impl Analyser for Checker {
    fn analyse(&self, request: Request<'_>) -> Option<Arc<dyn View>> {
        let previous = request.previous.and_then(|view| {
            let view: &dyn Any = &**view;
            view.downcast_ref::<Seen>()
        });
        let document = match previous {
            Some(Seen(seen)) => Document::parse_with(request.text.clone(), &seen.document),
            None => Document::parse(request.text.clone()),
        };
        let around = Surroundings {
            path: request.path,
            roots: request.roots,
            files: &OpenFirst { open: request.open },
            imports: &self.imports,
            cancel: request.cancel,
        };
        let checked = check(document, &around, previous.map(|Seen(seen)| seen))?;
        Some(Arc::new(Seen(checked)))
    }

    fn explain(&self, rule: &str) -> Option<String> {
        catalogue::find(rule).map(|rule| rule.page())
    }
}

/// The editor's open documents before the disk.
struct OpenFirst<'a> {
    open: &'a (dyn Fn(&Path) -> Option<Arc<str>> + Sync),
}

impl Files for OpenFirst<'_> {
    fn read(&self, path: &Path) -> Result<Arc<str>, ReadProblem> {
        (self.open)(path).map_or_else(|| Disk.read(path), Ok)
    }
}

/// A checked document as a view.
struct Seen(Checked);

impl View for Seen {
    fn text(&self) -> &Arc<str> {
        &self.0.document.text
    }

    fn findings(&self) -> &[LocatedFinding] {
        &self.0.findings
    }

    fn hints(&self, range: Range<usize>) -> Vec<Hint> {
        editor::hints(&self.0, &range)
    }

    fn hover(&self, offset: usize) -> Option<Hover> {
        editor::hover(&self.0, offset)
    }

    fn symbols(&self) -> Vec<Symbol> {
        editor::outline(&self.0)
    }

    fn pictures(&self, range: Range<usize>) -> Vec<Offer> {
        editor::offers(&self.0, &range)
    }

    fn picture(&self, file: &str, wish: &PictureWish) -> Result<Picture, String> {
        editor::picture(&self.0, file, wish)
    }

    fn imports(&self) -> &[PathBuf] {
        &self.0.files
    }
}
