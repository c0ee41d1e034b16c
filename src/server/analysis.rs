//! What the server asks of the rooms before it: a view of a text, with its findings,
//! hints, hovers and outline. Byte offsets only; the protocol's positions stay outside.

use std::any::Any;
use std::ops::Range;
use std::path::{Path, PathBuf};
use std::sync::Arc;
use std::sync::atomic::AtomicBool;

use crate::report::inline::{Hint, Hover};
pub use crate::report::inline::{Offer, Picture, PictureWish, Symbol, SymbolKind};
use crate::rules::finding::LocatedFinding;

/// Makes views of texts. Called from several threads at once, one call per document.
pub trait Analyser: Send + Sync + 'static {
    /// A view of the text, or none where [`Request::cancel`] was set before it was done.
    /// May panic: the request is then answered with an error, and the next analysis of
    /// that document starts without a previous view.
    fn analyse(&self, request: Request<'_>) -> Option<Arc<dyn View>>;

    /// The page of a rule, as Markdown. Cheap to call.
    fn explain(&self, rule: &str) -> Option<String>;
}

/// One text to look at.
pub struct Request<'a> {
    /// Where the document lies on disk; none for one that was never saved.
    pub path: Option<&'a Path>,
    pub text: Arc<str>,
    /// The editor's workspace folders.
    pub roots: &'a [PathBuf],
    /// The text of another open document, which goes before what the disk holds. Every
    /// path asked for is remembered as something this document depends on, so asking
    /// before reading also catches files that do not exist yet.
    pub open: &'a (dyn Fn(&Path) -> Option<Arc<str>> + Sync),
    /// The last finished view of this document, so that work can be kept.
    pub previous: Option<&'a Arc<dyn View>>,
    /// Set when the answer is no longer wanted; to be polled at least every few
    /// milliseconds, since the next analysis of the same document waits for this one.
    pub cancel: &'a AtomicBool,
}

/// What is known of one text. Immutable, and shared between threads.
pub trait View: Send + Sync + Any {
    fn text(&self) -> &Arc<str>;

    fn findings(&self) -> &[LocatedFinding];

    /// The hints whose offset lies in the range, both ends included, in the text's order.
    fn hints(&self, range: Range<usize>) -> Vec<Hint>;

    /// What is known of the thing at an offset, or just before it.
    fn hover(&self, offset: usize) -> Option<Hover>;

    /// The document's outline, in the text's order.
    fn symbols(&self) -> Vec<Symbol>;

    /// The pictures that are offered in a range.
    fn pictures(&self, range: Range<usize>) -> Vec<Offer>;

    /// A picture; `file` names a problem without a title. May take a while.
    ///
    /// # Errors
    /// In words for the user: why it cannot be drawn.
    fn picture(&self, file: &str, wish: &PictureWish) -> Result<Picture, String>;

    /// The files that were read, or looked for and not found, directly or through others.
    fn imports(&self) -> &[PathBuf];
}
