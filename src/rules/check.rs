//! Checking a file: each of its sections taken through the rooms, with everything that an
//! edit did not touch kept from the time before.

use std::collections::{HashMap, HashSet};
use std::path::{Path, PathBuf};
use std::sync::Arc;
use std::sync::Mutex;
use std::sync::atomic::{AtomicBool, Ordering};

use super::finding::{Finding, LocatedFinding, Severity};
use super::outcome::Outcome;
use super::plan::Plan;
use super::statements::case_repeated;
use super::waters::{self, Walk};
use crate::equilibrium::quantities::Solved;
use crate::problem::files::Files;
use crate::problem::import::Imports;
use crate::problem::scope::Scope;
use crate::text::span::{Part, Place};
use crate::text::tree::{Document, Statement};

/// What a check is given beside the text.
#[derive(Clone, Copy)]
pub struct Surroundings<'a> {
    /// The file's own path; none for a text without a file.
    pub path: Option<&'a Path>,
    /// Folders that imports may not leave, where an editor or `--root` names them.
    pub roots: &'a [PathBuf],
    pub files: &'a dyn Files,
    pub imports: &'a Imports,
    pub cancel: &'a AtomicBool,
}

/// A file that has been checked.
pub struct Checked {
    pub document: Document,
    /// One for each section: the base first.
    pub outcomes: Vec<Arc<Outcome>>,
    keys: Vec<u64>,
    scope: (u64, Arc<Scope>),
    pub findings: Vec<LocatedFinding>,
    /// Files that it uses, directly or not.
    pub files: Vec<PathBuf>,
}

/// More sections than this to work on are shared among threads.
const WORTH_THREADS: usize = 32;

/// Checks a document. What the previous check found is kept where nothing that it rests on
/// has changed. None when cancelled.
pub fn check(
    document: Document,
    around: &Surroundings,
    previous: Option<&Checked>,
) -> Option<Checked> {
    let shared = waters::Shared::default();
    let plan = Plan::new(&document, around, &Walk::from(&shared))?;
    if let Some(previous) = previous {
        plan.keep_scope(&previous.scope);
    }
    let keys = plan.keys.clone();
    let kept: HashMap<u64, &Arc<Outcome>> = previous.map_or_else(HashMap::new, |previous| {
        previous.keys.iter().copied().zip(&previous.outcomes).collect()
    });
    let mut outcomes: Vec<Option<Arc<Outcome>>> =
        keys.iter().map(|key| kept.get(key).map(|outcome| (*outcome).clone())).collect();
    let todo: Vec<usize> = (0..outcomes.len()).filter(|&i| outcomes[i].is_none()).collect();
    let near = |index: usize| -> Option<&Solved> {
        let previous = previous?;
        let outcome = previous.outcomes.get(index).or(previous.outcomes.first())?;
        outcome.solved()
    };
    let work = |index: usize| -> Option<Outcome> {
        if around.cancel.load(Ordering::Relaxed) {
            return None;
        }
        plan.outcome(index, near(index))
    };
    for (index, outcome) in run(&todo, &work) {
        outcomes[index] = Some(Arc::new(outcome?));
    }
    let outcomes: Vec<Arc<Outcome>> = outcomes.into_iter().collect::<Option<_>>()?;
    let mut files = outcomes[0].problem.scope.files.clone();
    for outcome in &outcomes[1..] {
        if !Arc::ptr_eq(&outcome.problem.scope, &outcomes[0].problem.scope) {
            files.extend(outcome.problem.scope.files.iter().cloned());
        }
    }
    files.extend(plan.blended_files().cloned());
    files.sort();
    files.dedup();
    let scope = (plan.scope_key, plan.scope().clone());
    let findings = gather(&document, &outcomes);
    Some(Checked { document, outcomes, keys, scope, findings, files })
}

/// Works on each index, on all cores where there is enough to do.
fn run<T: Send>(todo: &[usize], work: &(impl Fn(usize) -> T + Sync)) -> Vec<(usize, T)> {
    let cores = std::thread::available_parallelism().map_or(1, |n| n.get());
    if todo.len() < WORTH_THREADS || cores < 2 {
        return todo.iter().map(|&index| (index, work(index))).collect();
    }
    // Small enough that no thread is left with much more than another.
    let share = (todo.len() / (8 * cores)).clamp(1, 16);
    let next = Mutex::new(todo.iter().copied());
    let done = Mutex::new(Vec::with_capacity(todo.len()));
    let help = || {
        loop {
            let taken: Vec<usize> = {
                let mut next = next.lock().unwrap_or_else(|e| e.into_inner());
                next.by_ref().take(share).collect()
            };
            if taken.is_empty() {
                return;
            }
            for index in taken {
                let result = work(index);
                done.lock().unwrap_or_else(|e| e.into_inner()).push((index, result));
            }
        }
    };
    // This thread works too, and has begun before another is there.
    std::thread::scope(|scope| {
        for _ in 1..cores.min(todo.len()) {
            scope.spawn(help);
        }
        help();
    });
    done.into_inner().unwrap_or_else(|e| e.into_inner())
}

/// All findings of the file, located, in the order of the text. What a case repeats of the
/// base is told once; that the base alone is not closed is told only where cases do not
/// close it.
fn gather(document: &Document, outcomes: &[Arc<Outcome>]) -> Vec<LocatedFinding> {
    let base = &outcomes[0].findings;
    let mut told: HashSet<(&str, Place, &str)> = HashSet::new();
    let mut findings = Vec::new();
    let cases = &outcomes[1..];
    for finding in base {
        let closed_by_cases = is_about_closure(finding)
            && !cases.is_empty()
            && cases.iter().all(|case| !case.findings.iter().any(|other| same(other, finding)));
        if !closed_by_cases {
            told.insert((finding.rule, finding.at, &finding.message));
            findings.push(locate(finding.clone(), document, 0));
        }
    }
    for (index, outcome) in outcomes.iter().enumerate().skip(1) {
        let title = document.sections[index].statements.first().and_then(|placed| {
            match &placed.parsed.statement {
                Statement::Case { title } => Some(title.value.clone()),
                _ => None,
            }
        });
        for finding in &outcome.findings {
            let inherited = finding.at.section == Part::Base
                && told.contains(&(finding.rule, finding.at, finding.message.as_str()));
            if !inherited {
                let mut finding = finding.clone();
                finding.case = title.clone();
                findings.push(locate(finding, document, index));
            }
        }
    }
    findings.extend(case_repeated::in_file(document));
    findings.sort_by_key(|finding| (finding.at.start, finding.at.end, finding.severity));
    findings
}

/// Findings that cases may put right by stating what the base leaves open.
fn is_about_closure(finding: &Finding<Place>) -> bool {
    matches!(finding.rule, "total-missing" | "component-unused" | "solid-cannot-form")
}

fn same(one: &Finding<Place>, other: &Finding<Place>) -> bool {
    one.rule == other.rule && one.at == other.at
}

/// The finding with byte ranges of the file in the place of places.
fn locate(finding: Finding<Place>, document: &Document, section: usize) -> LocatedFinding {
    finding.map(|place| locate_place(document, section, place))
}

/// The byte range of a place, seen from a section.
pub fn locate_place(document: &Document, section: usize, place: Place) -> std::ops::Range<usize> {
    let section = match place.section {
        Part::Base => 0,
        Part::Case => section,
    };
    let start = document.sections[section]
        .statements
        .get(place.statement as usize)
        .map_or(0, |placed| placed.start);
    start + place.span.start as usize..start + place.span.end as usize
}

impl Checked {
    /// How many findings there are of at least this severity.
    pub fn count(&self, at_least: Severity) -> usize {
        self.findings.iter().filter(|finding| finding.severity >= at_least).count()
    }
}
