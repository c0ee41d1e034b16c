//! One client's session: what all parts of the server share, and the workers that
//! analyse documents. One worker per document at a time; it takes the newest text each
//! time it looks, so a burst of edits is analysed once or twice, not once per edit.

use std::panic::{AssertUnwindSafe, catch_unwind};
use std::path::PathBuf;
use std::sync::atomic::{AtomicBool, AtomicU64, Ordering};
use std::sync::{Arc, Mutex, OnceLock, PoisonError};

use tempfile::TempDir;
use tokio::runtime::Handle;
use tokio::sync::Notify;
use tower_lsp::Client;
use tower_lsp::lsp_types::notification::{Notification, PublishDiagnostics};
use tower_lsp::lsp_types::{Diagnostic, PublishDiagnosticsParams, Url};

use super::analysis::{Analyser, Request};
use super::diagnostics::{Report, diagnostics, failure};
use super::documents::{Changed, Documents, Job, Work};
use super::generation::Checked;
use super::outbox::Outbox;
use super::settings::Settings;

pub struct Session {
    pub analyser: Arc<dyn Analyser>,
    pub client: Client,
    pub documents: Documents,
    pub outbox: Outbox,
    runtime: Handle,
    settings: OnceLock<Settings>,
    roots: Mutex<Arc<[PathBuf]>>,
    refresh: Notify,
    /// The folder of pictures that were shown; it goes with the session.
    pub pictures: Mutex<Option<TempDir>>,
    reports: AtomicU64,
    pub shut_down: AtomicBool,
}

impl Session {
    /// A session inside the running runtime.
    pub fn new(analyser: Arc<dyn Analyser>, client: Client, outbox: Outbox) -> Arc<Self> {
        Arc::new(Self {
            analyser,
            client,
            outbox,
            runtime: Handle::current(),
            documents: Documents::default(),
            settings: OnceLock::new(),
            roots: Mutex::new(Arc::new([])),
            refresh: Notify::new(),
            pictures: Mutex::default(),
            reports: AtomicU64::new(1),
            shut_down: AtomicBool::new(false),
        })
    }

    /// Takes in what `initialize` said; a second one changes nothing.
    pub fn start(&self, settings: Settings, roots: Vec<PathBuf>) {
        if self.settings.set(settings).is_ok() {
            self.set_roots(|_| roots);
        }
    }

    /// Whether documents are to be looked after: after `initialize`, before `shutdown`.
    pub fn is_open(&self) -> bool {
        self.settings.get().is_some() && !self.shut_down.load(Ordering::Relaxed)
    }

    /// What the client can do; nothing, before it has said.
    pub fn settings(&self) -> &Settings {
        static NOTHING: OnceLock<Settings> = OnceLock::new();
        self.settings.get().unwrap_or_else(|| NOTHING.get_or_init(Settings::default))
    }

    pub fn set_roots(&self, change: impl FnOnce(&[PathBuf]) -> Vec<PathBuf>) {
        let mut roots = self.roots.lock().unwrap_or_else(PoisonError::into_inner);
        *roots = change(&roots).into();
    }

    fn roots(&self) -> Arc<[PathBuf]> {
        self.roots.lock().unwrap_or_else(PoisonError::into_inner).clone()
    }

    /// Starts a worker for each document that needs one.
    pub fn work_on(self: &Arc<Self>, changed: Changed) {
        if changed.others {
            self.refresh.notify_one();
        }
        for uri in changed.workers {
            let session = self.clone();
            self.runtime.spawn_blocking(move || session.work(&uri));
        }
    }

    fn work(&self, uri: &Url) {
        loop {
            match self.documents.next_job(uri) {
                Job::Analyse(work) => self.analyse(uri, work),
                Job::Clear => {
                    self.publish(uri, Vec::new(), None);
                    self.documents.forget(uri);
                }
                Job::Rest => return,
            }
        }
    }

    fn analyse(&self, uri: &Url, work: Work) {
        let generation = work.generation.clone();
        let version = work.version;
        let done = catch_unwind(AssertUnwindSafe(|| self.check(uri, work)));
        let (current, diagnostics) = match done {
            Ok(Some((checked, diagnostics))) => {
                (self.documents.finish(uri, &generation, checked), diagnostics)
            }
            Ok(None) if generation.cancel().load(Ordering::Relaxed) => return,
            Ok(None) | Err(_) => (self.documents.fail(uri, &generation), vec![failure()]),
        };
        if current {
            self.publish(uri, diagnostics, Some(version));
        }
    }

    /// The analysis, with the diagnostics to push where they are pushed.
    fn check(&self, uri: &Url, work: Work) -> Option<(Checked, Vec<Diagnostic>)> {
        let roots = self.roots();
        let view = self.analyser.analyse(Request {
            path: work.path.as_deref(),
            text: work.text,
            roots: &roots,
            open: &|path| self.documents.text_at(&work.generation, path),
            previous: work.previous.as_ref(),
            cancel: work.generation.cancel(),
        })?;
        let settings = self.settings();
        let mut checked = Checked {
            uri: uri.clone(),
            version: work.version,
            view,
            lines: work.lines,
            encoding: settings.encoding,
            report: None,
        };
        let found = diagnostics(checked.view.findings(), uri, &checked.positions(), settings);
        if settings.pull {
            checked.report = Report::following(work.report, &found, self.count_report()).ok();
            return Some((checked, Vec::new()));
        }
        Some((checked, found))
    }

    fn count_report(&self) -> u64 {
        self.reports.fetch_add(1, Ordering::Relaxed)
    }

    /// Pushes diagnostics, unless the client asks for them itself.
    fn publish(&self, uri: &Url, diagnostics: Vec<Diagnostic>, version: Option<i32>) {
        if !self.settings().pull {
            let params = PublishDiagnosticsParams::new(uri.clone(), diagnostics, version);
            self.outbox.notify(PublishDiagnostics::METHOD, params);
        }
    }

    /// Tells the client, one time after another, that answers about texts which it did
    /// not touch are out of date.
    pub async fn keep_refreshing(self: Arc<Self>) {
        loop {
            self.refresh.notified().await;
            // An answer that says no changes nothing: the client was only invited.
            if self.settings().pull && self.settings().diagnostic_refresh {
                let _ = self.client.workspace_diagnostic_refresh().await;
            }
            if self.settings().hint_refresh {
                let _ = self.client.inlay_hint_refresh().await;
            }
        }
    }
}
