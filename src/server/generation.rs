//! One analysis of one text, and what waits for it.

use std::collections::HashSet;
use std::path::PathBuf;
use std::sync::atomic::{AtomicBool, Ordering};
use std::sync::{Arc, Mutex, PoisonError};

use tokio::sync::watch;
use tower_lsp::lsp_types::Url;

use super::analysis::View;
use super::convert::{Encoding, Lines, Positions};
use super::diagnostics::Report;
use super::place::Place;

/// A text to be analysed. The same text makes another where an import has changed.
pub struct Generation {
    /// The number of the text.
    pub edit: u64,
    cancel: AtomicBool,
    progress: watch::Sender<Progress>,
    /// Paths that the running analysis has asked for.
    asked: Mutex<HashSet<PathBuf>>,
}

#[derive(Clone)]
pub enum Progress {
    Waiting,
    Done(Arc<Checked>),
    Failed,
    /// There is a newer generation, or the document is closed.
    Superseded,
}

/// A finished analysis, with all that an answer needs.
pub struct Checked {
    pub uri: Url,
    pub version: i32,
    pub view: Arc<dyn View>,
    pub lines: Arc<Lines>,
    pub encoding: Encoding,
    /// Made where the client asks for reports.
    pub report: Option<Arc<Report>>,
}

impl Checked {
    pub fn positions(&self) -> Positions<'_> {
        Positions::new(self.view.text(), &self.lines, self.encoding)
    }
}

impl Generation {
    pub fn new(edit: u64) -> Arc<Self> {
        Arc::new(Self {
            edit,
            cancel: AtomicBool::new(false),
            progress: watch::Sender::new(Progress::Waiting),
            asked: Mutex::default(),
        })
    }

    /// Set once the analysis is no longer wanted.
    pub fn cancel(&self) -> &AtomicBool {
        &self.cancel
    }

    pub fn is_waiting(&self) -> bool {
        matches!(*self.progress.borrow(), Progress::Waiting)
    }

    /// Ends the waiting of all that wait.
    pub fn settle(&self, progress: Progress) {
        self.progress.send_replace(progress);
    }

    /// Ends the analysis and what waits for it; one that is done stays so.
    pub fn supersede(&self) {
        self.cancel.store(true, Ordering::Relaxed);
        if self.is_waiting() {
            self.settle(Progress::Superseded);
        }
    }

    /// Waits until it is no longer waiting.
    pub async fn settled(&self) -> Progress {
        let mut progress = self.progress.subscribe();
        let settled = progress.wait_for(|now| !matches!(now, Progress::Waiting)).await;
        settled.map_or(Progress::Superseded, |progress| progress.clone())
    }

    pub fn note_asked(&self, place: &Place) {
        let mut asked = self.asked.lock().unwrap_or_else(PoisonError::into_inner);
        asked.extend(place.paths().cloned());
    }

    pub fn asked(&self) -> HashSet<PathBuf> {
        self.asked.lock().unwrap_or_else(PoisonError::into_inner).clone()
    }

    pub fn has_asked(&self, place: &Place) -> bool {
        let asked = self.asked.lock().unwrap_or_else(PoisonError::into_inner);
        place.paths().any(|path| asked.contains(path))
    }
}
