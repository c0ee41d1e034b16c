//! The open documents. Edits are applied here at once, in the order received; each
//! makes a new generation, which requests wait for and which is analysed once.

use std::collections::{HashMap, HashSet};
use std::path::{Path, PathBuf};
use std::sync::atomic::{AtomicU64, Ordering};
use std::sync::{Arc, Mutex, MutexGuard, PoisonError};

use tower_lsp::lsp_types::{TextDocumentContentChangeEvent, Url};

use super::analysis::View;
use super::convert::{Encoding, Lines};
use super::diagnostics::Report;
use super::generation::{Checked, Generation, Progress};
use super::place::{Place, normal};

/// All open documents. The lock is held for a copy of a text at most, never for work.
#[derive(Default)]
pub struct Documents {
    open: Mutex<HashMap<Url, Document>>,
    /// Counts the texts of all documents, so that no two share a number.
    edits: AtomicU64,
}

struct Document {
    /// The editor's number for the text.
    version: i32,
    /// Our own number for it, which also tells a reopened document from the one before.
    edit: u64,
    text: String,
    /// The same text to be shared, once someone has asked for it.
    shared: Option<Arc<str>>,
    lines: Arc<Lines>,
    place: Place,
    generation: Arc<Generation>,
    /// The last view that was finished, of this text or an earlier one.
    finished: Option<Arc<dyn View>>,
    /// The last report to a client that asks for them.
    report: Option<Arc<Report>>,
    /// What the last finished view depends on.
    imports: HashSet<PathBuf>,
    /// A worker is at it, and will look again before it leaves.
    worked_on: bool,
    closed: bool,
}

/// What a message has set going.
#[derive(Default)]
pub struct Changed {
    /// The documents that need a worker.
    pub workers: Vec<Url>,
    /// Whether documents other than the one named are analysed again.
    pub others: bool,
}

/// A document as it was when a request came in.
#[derive(Clone)]
pub struct Snapshot {
    uri: Url,
    generation: Arc<Generation>,
}

/// Why there is no answer for a snapshot.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Missing {
    /// The text has changed since.
    Superseded,
    /// The analysis panicked.
    Failed,
}

/// What a worker is to do next for a document.
pub enum Job {
    Analyse(Work),
    /// The document is closed: its findings are to be taken away.
    Clear,
    Rest,
}

/// Everything that an analysis needs, free of the lock.
pub struct Work {
    pub generation: Arc<Generation>,
    pub version: i32,
    pub path: Option<PathBuf>,
    pub text: Arc<str>,
    pub lines: Arc<Lines>,
    pub previous: Option<Arc<dyn View>>,
    pub report: Option<Arc<Report>>,
}

impl Document {
    fn restart(&mut self) {
        self.generation.supersede();
        self.generation = Generation::new(self.edit);
    }

    fn share(&mut self) -> Arc<str> {
        self.shared.get_or_insert_with(|| Arc::from(self.text.as_str())).clone()
    }

    fn is_open_at(&self, place: &Place) -> bool {
        !self.closed && self.place.meets(place)
    }

    fn depends_on(&self, place: &Place) -> bool {
        place.paths().any(|path| self.imports.contains(path)) || self.generation.has_asked(place)
    }
}

impl Documents {
    pub fn open(&self, uri: Url, version: i32, text: String) -> Changed {
        let place = Place::of(uri.to_file_path().ok());
        let lines = Arc::new(Lines::of(&text));
        let edit = self.count_edit();
        let mut open = self.lock();
        let mut document = Document {
            version,
            edit,
            text,
            shared: None,
            lines,
            place,
            generation: Generation::new(edit),
            finished: None,
            report: None,
            imports: HashSet::new(),
            worked_on: false,
            closed: false,
        };
        if let Some(old) = open.remove(&uri) {
            old.generation.supersede();
            document.worked_on = old.worked_on;
        }
        open.insert(uri.clone(), document);
        changed_text(&mut open, &uri)
    }

    /// Applies edits; those of a document that is not open are left out.
    pub fn change(
        &self,
        uri: &Url,
        version: i32,
        changes: Vec<TextDocumentContentChangeEvent>,
        encoding: Encoding,
    ) -> Changed {
        let mut open = self.lock();
        let Some(document) = open.get_mut(uri).filter(|document| !document.closed) else {
            return Changed::default();
        };
        let lines = Arc::make_mut(&mut document.lines);
        for change in changes {
            match change.range {
                Some(range) => {
                    let range = lines.bytes(&document.text, range, encoding);
                    lines.replace(&mut document.text, range, &change.text);
                }
                None => {
                    *lines = Lines::of(&change.text);
                    document.text = change.text;
                }
            }
        }
        document.version = version;
        document.edit = self.count_edit();
        document.shared = None;
        document.restart();
        changed_text(&mut open, uri)
    }

    pub fn close(&self, uri: &Url) -> Changed {
        let mut open = self.lock();
        let Some(document) = open.get_mut(uri).filter(|document| !document.closed) else {
            return Changed::default();
        };
        document.closed = true;
        document.generation.supersede();
        changed_text(&mut open, uri)
    }

    /// Files changed on disk: those that depend on them are to be analysed again. Not on
    /// one that is open, since then its text counts.
    pub fn changed_on_disk(&self, paths: Vec<PathBuf>) -> Changed {
        let places: Vec<_> = paths.into_iter().map(|path| Place::of(Some(path))).collect();
        let mut changed = Changed::default();
        let mut open = self.lock();
        let is_open = |place: &&Place| open.values().any(|document| document.is_open_at(place));
        let (_, closed): (Vec<_>, Vec<_>) = places.iter().partition(is_open);
        recheck(
            &mut open,
            |_, document| closed.iter().any(|place| document.depends_on(place)),
            &mut changed,
        );
        changed
    }

    /// All are to be analysed again.
    pub fn recheck_all(&self) -> Changed {
        let mut changed = Changed::default();
        recheck(&mut self.lock(), |_, _| true, &mut changed);
        changed
    }

    /// Ends all running analyses, for good.
    pub fn end(&self) {
        for document in self.lock().values_mut() {
            document.closed = true;
            document.generation.supersede();
        }
    }

    /// The document as it is now; none where it is not open.
    pub fn snapshot(&self, uri: &Url) -> Option<Snapshot> {
        let open = self.lock();
        let document = open.get(uri).filter(|document| !document.closed)?;
        Some(Snapshot { uri: uri.clone(), generation: document.generation.clone() })
    }

    /// Whether the document still has the text of the snapshot.
    pub fn is_current(&self, snapshot: &Snapshot) -> bool {
        let now = self.snapshot(&snapshot.uri);
        now.is_some_and(|now| now.generation.edit == snapshot.generation.edit)
    }

    /// The text of an open document at a path.
    pub fn text_at(&self, asker: &Generation, path: &Path) -> Option<Arc<str>> {
        let place = Place::of(Some(path.to_owned()));
        // Noted before it is looked at, so that a change in between is not missed.
        asker.note_asked(&place);
        self.lock().values_mut().find(|document| document.is_open_at(&place)).map(Document::share)
    }

    /// Waits for the analysis of a snapshot's text.
    pub async fn checked(&self, mut snapshot: Snapshot) -> Result<Arc<Checked>, Missing> {
        loop {
            let progress = snapshot.generation.settled().await;
            let now = self.snapshot(&snapshot.uri).ok_or(Missing::Superseded)?;
            if !Arc::ptr_eq(&now.generation, &snapshot.generation) {
                // The same text again, since an import changed: that one counts.
                if now.generation.edit != snapshot.generation.edit {
                    return Err(Missing::Superseded);
                }
                snapshot = now;
                continue;
            }
            return match progress {
                Progress::Done(checked) => Ok(checked),
                Progress::Failed => Err(Missing::Failed),
                Progress::Waiting | Progress::Superseded => Err(Missing::Superseded),
            };
        }
    }

    /// What a worker is to do next; [`Job::Rest`] lets it go.
    pub fn next_job(&self, uri: &Url) -> Job {
        let mut open = self.lock();
        let Some(document) = open.get_mut(uri) else { return Job::Rest };
        if document.closed {
            return Job::Clear;
        }
        if !document.generation.is_waiting() {
            document.worked_on = false;
            return Job::Rest;
        }
        Job::Analyse(Work {
            generation: document.generation.clone(),
            version: document.version,
            path: document.place.spelled.clone(),
            text: document.share(),
            lines: document.lines.clone(),
            previous: document.finished.clone(),
            report: document.report.clone(),
        })
    }

    /// Forgets a closed document whose findings were taken away.
    pub fn forget(&self, uri: &Url) {
        let mut open = self.lock();
        if open.get(uri).is_some_and(|document| document.closed) {
            open.remove(uri);
        }
    }

    /// Takes a finished analysis in. False where a newer generation has come meanwhile:
    /// then the view only serves as a start for the next.
    pub fn finish(&self, uri: &Url, generation: &Arc<Generation>, checked: Checked) -> bool {
        let mut imports = generation.asked();
        imports.extend(checked.view.imports().iter().map(|path| normal(path)));
        let mut open = self.lock();
        let Some(document) = open
            .get_mut(uri)
            .filter(|document| !document.closed && document.generation.edit >= generation.edit)
        else {
            return false;
        };
        document.imports = imports;
        document.finished = Some(checked.view.clone());
        if !Arc::ptr_eq(&document.generation, generation) {
            return false;
        }
        document.report = checked.report.clone();
        generation.settle(Progress::Done(Arc::new(checked)));
        true
    }

    /// Takes in that an analysis panicked. Its document starts afresh next time.
    pub fn fail(&self, uri: &Url, generation: &Arc<Generation>) -> bool {
        let mut open = self.lock();
        let Some(document) = open.get_mut(uri) else { return false };
        document.finished = None;
        document.report = None;
        let current = !document.closed && Arc::ptr_eq(&document.generation, generation);
        if current {
            generation.settle(Progress::Failed);
        }
        current
    }

    fn count_edit(&self) -> u64 {
        self.edits.fetch_add(1, Ordering::Relaxed)
    }

    fn lock(&self) -> MutexGuard<'_, HashMap<Url, Document>> {
        // A panic elsewhere leaves the documents whole, so a poisoned lock is still good.
        self.open.lock().unwrap_or_else(PoisonError::into_inner)
    }
}

/// Sets a document's worker going after its text has changed, and has those documents
/// analysed again that depend on it.
fn changed_text(open: &mut HashMap<Url, Document>, uri: &Url) -> Changed {
    let mut changed = Changed::default();
    if let Some(document) = open.get_mut(uri) {
        changed.start_worker(uri, document);
        let place = document.place.clone();
        let depends =
            |other: &Url, document: &Document| other != uri && document.depends_on(&place);
        recheck(open, depends, &mut changed);
    }
    changed
}

/// Starts a new generation of the same text for each document that is chosen.
fn recheck(
    open: &mut HashMap<Url, Document>,
    chosen: impl Fn(&Url, &Document) -> bool,
    changed: &mut Changed,
) {
    for (uri, document) in open.iter_mut() {
        if !document.closed && chosen(uri, document) {
            document.restart();
            changed.others = true;
            changed.start_worker(uri, document);
        }
    }
}

impl Changed {
    fn start_worker(&mut self, uri: &Url, document: &mut Document) {
        if !std::mem::replace(&mut document.worked_on, true) {
            self.workers.push(uri.clone());
        }
    }
}
