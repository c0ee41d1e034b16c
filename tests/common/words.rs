//! An analyser for tests that knows no chemistry: it finds words. `bad` and `ugly` are
//! findings with a safe and an unsafe fix, `slow` takes long and looks at the cancel
//! flag, `panic` panics, and `use "FILE"` finds how many bad words that file holds.

#![allow(dead_code, reason = "each test file uses a part of it")]

use std::ops::Range;
use std::path::{Path, PathBuf};
use std::sync::atomic::{AtomicBool, AtomicUsize, Ordering};
use std::sync::{Arc, Mutex};
use std::time::{Duration, Instant};

use lyate::report::inline::{Hint, Hover};
use lyate::rules::finding::{Finding, LocatedFinding, Severity};
use lyate::server::analysis::{
    Analyser, Offer, Picture, PictureWish, Request, Symbol, SymbolKind, View,
};

/// How long `slow` takes where nobody cancels it.
pub const SLOW: Duration = Duration::from_secs(20);

#[derive(Default)]
pub struct Words {
    pub started: AtomicUsize,
    pub finished: AtomicUsize,
    pub cancelled: AtomicUsize,
    /// The text that was analysed last.
    pub last: Mutex<Option<Arc<str>>>,
    pub with_previous: AtomicUsize,
}

pub struct WordsView {
    text: Arc<str>,
    findings: Vec<LocatedFinding>,
    imports: Vec<PathBuf>,
}

impl Words {
    pub fn new() -> Arc<Self> {
        Arc::default()
    }

    pub fn started(&self) -> usize {
        self.started.load(Ordering::SeqCst)
    }

    pub fn cancelled(&self) -> usize {
        self.cancelled.load(Ordering::SeqCst)
    }

    /// Waits until so many analyses have started.
    pub async fn wait_started(&self, count: usize) {
        let begun = Instant::now();
        while self.started() < count {
            assert!(begun.elapsed() < Duration::from_secs(30), "analysis {count} has not started");
            tokio::time::sleep(Duration::from_millis(1)).await;
        }
    }
}

/// The words of a text and where they stand.
pub fn words(text: &str) -> impl Iterator<Item = (Range<usize>, &str)> {
    let mut at = 0;
    std::iter::from_fn(move || {
        let start = at + text[at..].find(char::is_alphanumeric)?;
        let rest = &text[start..];
        let end = start + rest.find(|c: char| !c.is_alphanumeric()).unwrap_or(rest.len());
        at = end;
        Some((start..end, &text[start..end]))
    })
}

impl Analyser for Words {
    fn analyse(&self, request: Request<'_>) -> Option<Arc<dyn View>> {
        self.started.fetch_add(1, Ordering::SeqCst);
        if let Some(previous) = request.previous {
            assert!((previous.as_ref() as &dyn std::any::Any).is::<WordsView>());
            self.with_previous.fetch_add(1, Ordering::SeqCst);
        }
        let mut findings = Vec::new();
        let mut imports = Vec::new();
        for (at, word) in words(&request.text) {
            match word {
                "bad" => findings.push(
                    Finding::new("bad-word", Severity::Error, at.clone(), "this word is bad")
                        .with_related(0..0, "the text starts here")
                        .with_fix("Write `good`", true, at.clone(), "good"),
                ),
                "ugly" => findings.push(
                    Finding::new("ugly-word", Severity::Warning, at.clone(), "this word is ugly")
                        .with_fix("Write `pretty`", false, at.clone(), "pretty"),
                ),
                "panic" => panic!("the text says so"),
                "slow" if !sleep(request.cancel) => {
                    self.cancelled.fetch_add(1, Ordering::SeqCst);
                    return None;
                }
                _ => {}
            }
        }
        for (at, name) in uses(&request.text) {
            let path = request.path.and_then(Path::parent).unwrap_or(Path::new("/")).join(name);
            let text = (request.open)(&path)
                .map(|text| text.to_string())
                .or_else(|| std::fs::read_to_string(&path).ok());
            let words = match text {
                Some(text) => {
                    format!("{} bad words", words(&text).filter(|(_, w)| *w == "bad").count())
                }
                None => "no such file".into(),
            };
            findings.push(Finding::new("import", Severity::Note, at, words));
            imports.push(path);
        }
        self.finished.fetch_add(1, Ordering::SeqCst);
        *self.last.lock().unwrap() = Some(request.text.clone());
        Some(Arc::new(WordsView { text: request.text, findings, imports }))
    }

    fn explain(&self, rule: &str) -> Option<String> {
        (rule == "bad-word").then(|| "# bad-word\n\nA word that is bad.".into())
    }
}

/// False where it was cancelled.
fn sleep(cancel: &AtomicBool) -> bool {
    let begun = Instant::now();
    while begun.elapsed() < SLOW {
        if cancel.load(Ordering::Relaxed) {
            return false;
        }
        std::thread::sleep(Duration::from_millis(1));
    }
    true
}

fn uses(text: &str) -> impl Iterator<Item = (Range<usize>, &str)> {
    text.match_indices("use \"").filter_map(|(at, start)| {
        let name = text[at + start.len()..].split_once('"')?.0;
        Some((at..at + start.len() + name.len() + 1, name))
    })
}

impl View for WordsView {
    fn text(&self) -> &Arc<str> {
        &self.text
    }

    fn findings(&self) -> &[LocatedFinding] {
        &self.findings
    }

    fn hints(&self, range: Range<usize>) -> Vec<Hint> {
        let mut at = 0;
        let mut hints = Vec::new();
        for line in self.text.split('\n') {
            let offset = at + line.trim_end_matches('\r').len();
            at += line.len() + 1;
            if range.contains(&offset) || offset == range.end {
                let count = words(line).count();
                hints.push(Hint { offset, text: format!("{count} words"), tooltip: None });
            }
        }
        hints
    }

    fn hover(&self, offset: usize) -> Option<Hover> {
        let (range, word) = words(&self.text).find(|(at, _)| at.contains(&offset))?;
        assert_ne!(word, "crash", "hovering over this word panics");
        (word != "bad").then(|| Hover { range, markdown: format!("the word *{word}*") })
    }

    fn symbols(&self) -> Vec<Symbol> {
        words(&self.text)
            .map(|(at, word)| Symbol {
                name: word.into(),
                detail: None,
                kind: SymbolKind::Component,
                range: at.clone(),
                selection: at,
                children: Vec::new(),
            })
            .collect()
    }

    fn pictures(&self, range: Range<usize>) -> Vec<Offer> {
        let drawn = |(at, word): &(Range<usize>, &str)| *word == "draw" && at.end >= range.start;
        let offer = |_| Offer {
            title: "Draw the words".into(),
            wish: PictureWish { case: Some("all".into()), ..PictureWish::default() },
        };
        words(&self.text).filter(drawn).map(offer).collect()
    }

    fn picture(&self, file: &str, wish: &PictureWish) -> Result<Picture, String> {
        match words(&self.text).count() {
            0 => Err("there are no words to draw".into()),
            count => Ok(Picture {
                title: format!("{file}, {}", wish.case.as_deref().unwrap_or("none")),
                svg: format!("<svg><text>{count}</text></svg>"),
            }),
        }
    }

    fn imports(&self) -> &[PathBuf] {
        &self.imports
    }
}
