//! What `use` brings: reactions and groups of a built-in set or of another file, and
//! those that it uses in turn. Never anybody's amounts.

use std::collections::{HashMap, HashSet};
use std::hash::{DefaultHasher, Hash, Hasher};
use std::path::{Path, PathBuf};
use std::sync::atomic::{AtomicU64, Ordering};
use std::sync::{Arc, Mutex};

use super::blend::Kept;
use super::builtin;
use super::defect::{Conserved, Defect, DefectKind};
use super::effective::{InForce, in_force};
use super::files::{Files, ReadProblem, root_of};
use super::reaction::{Origin, Reaction};
use super::resolve::Resolver;
use crate::chemistry::formula::Groups;
use crate::text::problem::SyntaxProblemKind;
use crate::text::tree::{Document, Statement, Use};

/// What one file or set brings into scope.
#[derive(Debug, Default)]
pub struct Definitions {
    pub groups: Groups,
    pub reactions: Vec<Arc<Reaction>>,
    /// Files read on the way, for watching.
    pub files: Vec<PathBuf>,
    /// Errors found inside.
    pub errors: usize,
    /// Of this state of it; another after each change.
    pub number: u64,
}

/// Files already read and resolved, kept between edits. A file is resolved again when its
/// text, or that of one it uses, has changed.
#[derive(Default)]
pub struct Imports {
    kept: Mutex<HashMap<(PathBuf, u64), Arc<Definitions>>>,
    waters: Kept,
}

impl Imports {
    /// The waters that blends have had solved.
    pub fn waters(&self) -> &Kept {
        &self.waters
    }
}

/// One walk through the files that a file uses.
struct Walk {
    root: PathBuf,
    /// The files that are being read, the outermost first.
    chain: Vec<PathBuf>,
    done: HashMap<PathBuf, Result<Arc<Definitions>, DefectKind>>,
}

static NUMBER: AtomicU64 = AtomicU64::new(1);

/// Imports nest no deeper than this, so that no stack depends on the files.
const DEEPEST: usize = 64;

/// The file that is being resolved, and what it may read.
pub struct Reader<'a> {
    pub imports: &'a Imports,
    pub files: &'a dyn Files,
    /// The file itself; none for a text that has no file.
    pub path: Option<&'a Path>,
    /// Folders that imports may not leave, given by an editor or `--root`.
    pub roots: &'a [PathBuf],
}

impl Reader<'_> {
    /// Resolves one `use`.
    pub fn read(&self, what: &Use) -> Result<Arc<Definitions>, DefectKind> {
        match what {
            Use::Set { name, edition } => {
                builtin::find(&name.value, edition.as_ref().map(|e| e.value))
            }
            Use::File { path } => {
                let Some(own) = self.path else {
                    let path = PathBuf::from(&path.value);
                    let why = "this text has no file yet, so a path beside it has no meaning";
                    return Err(DefectKind::FileMissing { path, why: why.into() });
                };
                let root = root_of(own, self.roots);
                let own = own.canonicalize().unwrap_or_else(|_| own.to_path_buf());
                let mut walk = Walk { root, chain: vec![own.clone()], done: HashMap::new() };
                self.file(&own, &path.value, &mut walk)
            }
        }
    }

    fn file(
        &self,
        from: &Path,
        written: &str,
        walk: &mut Walk,
    ) -> Result<Arc<Definitions>, DefectKind> {
        let shown = PathBuf::from(written);
        let path = locate(from, written, &walk.root)?;
        if let Some(at) = walk.chain.iter().position(|open| *open == path) {
            let mut chain = walk.chain[at..].to_vec();
            chain.push(path);
            return Err(DefectKind::ImportCycle { chain });
        }
        if walk.chain.len() > DEEPEST {
            let why = format!("imports nest deeper than {DEEPEST}");
            return Err(DefectKind::FileMissing { path: shown, why });
        }
        // A file that several others use is read once.
        if let Some(done) = walk.done.get(&path) {
            return done.clone();
        }
        let found = self.read_file(&path, shown, walk);
        walk.done.insert(path, found.clone());
        found
    }

    fn read_file(
        &self,
        path: &Path,
        shown: PathBuf,
        walk: &mut Walk,
    ) -> Result<Arc<Definitions>, DefectKind> {
        let text = read_text(self.files, path, &shown)?;
        let document = Document::parse(text.clone());
        let mut hasher = DefaultHasher::new();
        text.hash(&mut hasher);
        let uses = uses(&document);
        let mut used = HashMap::new();
        for what in &uses {
            let definitions = match what {
                Use::Set { name, edition } => {
                    builtin::find(&name.value, edition.as_ref().map(|e| e.value))
                }
                Use::File { path: next } => {
                    walk.chain.push(path.to_path_buf());
                    let definitions = self.file(path, &next.value, walk);
                    walk.chain.pop();
                    definitions
                }
            };
            definitions.as_ref().map_or(0, |definitions| definitions.number).hash(&mut hasher);
            if let Err(DefectKind::ImportCycle { chain }) = definitions {
                return Err(DefectKind::ImportCycle { chain });
            }
            used.insert(use_key(what), definitions);
        }
        let key = (path.to_path_buf(), hasher.finish());
        if let Some(kept) = self.kept(&key) {
            return Ok(kept);
        }
        let origin = Origin::File(path.to_path_buf());
        let mut found = resolve(&document, &origin, |what| {
            used.get(&use_key(what)).cloned().unwrap_or_else(|| {
                let why = "it was not read".into();
                Err(DefectKind::FileMissing { path: shown.clone(), why })
            })
        });
        found.files.insert(0, path.to_path_buf());
        Ok(self.keep(key, found))
    }

    fn kept(&self, key: &(PathBuf, u64)) -> Option<Arc<Definitions>> {
        self.imports.kept.lock().unwrap_or_else(|e| e.into_inner()).get(key).cloned()
    }

    fn keep(&self, key: (PathBuf, u64), definitions: Definitions) -> Arc<Definitions> {
        let mut kept = self.imports.kept.lock().unwrap_or_else(|e| e.into_inner());
        // One state of each file is enough.
        kept.retain(|(origin, _), _| *origin != key.0);
        let definitions = Arc::new(definitions);
        kept.insert(key, definitions.clone());
        definitions
    }
}

/// What the statements of one text define, with what `read` gives for each of its `use`.
pub(super) fn resolve(
    document: &Document,
    origin: &Origin,
    mut read: impl FnMut(&Use) -> Result<Arc<Definitions>, DefectKind>,
) -> Definitions {
    let InForce { statements, defects, .. } = in_force(&document.sections[0], None);
    let number = NUMBER.fetch_add(1, Ordering::Relaxed);
    let mut found = Definitions { number, ..Definitions::default() };
    let syntax = document
        .sections
        .iter()
        .flat_map(|section| &section.statements)
        .flat_map(|placed| &placed.parsed.problems)
        .filter(|problem| problem.kind != SyntaxProblemKind::StrayIndent)
        .count();
    found.errors = defects.len() + syntax;
    let mut used = Vec::new();
    for written in &statements {
        if let Statement::Use(what) = written.statement() {
            match read(what) {
                Ok(definitions) => used.push(definitions),
                Err(_) => found.errors += 1,
            }
        }
    }
    found.join(used.iter().map(Arc::as_ref));
    let mut resolver = Resolver::default();
    resolver.groups.extend(&found.groups);
    resolver.declare_groups(&statements);
    let own = resolver.reactions(&statements, origin);
    found.errors += errors(&resolver.defects);
    found.reactions.retain(|reaction| resolver.means_the_same(reaction));
    found.groups = resolver.groups;
    override_with(&mut found.reactions, own);
    found
}

impl Definitions {
    /// Takes up what several others bring, the first before the second.
    pub fn join<'a>(&mut self, others: impl Iterator<Item = &'a Definitions>) {
        let mut reactions = Vec::new();
        for used in others {
            self.groups.extend(&used.groups);
            self.errors += used.errors;
            self.files.extend(used.files.iter().cloned());
            reactions.extend(used.reactions.iter().cloned());
        }
        add_new(&mut self.reactions, &reactions);
    }
}

/// Adds the reactions whose equilibrium is not there yet: the first `use` wins.
pub fn add_new(reactions: &mut Vec<Arc<Reaction>>, more: &[Arc<Reaction>]) {
    let fresh: Vec<_> = {
        let mut known: HashSet<_> = reactions.iter().map(|r| r.key.as_str()).collect();
        more.iter().filter(|reaction| known.insert(reaction.key.as_str())).cloned().collect()
    };
    reactions.extend(fresh);
}

/// Puts own reactions in the place of used ones for the same equilibrium.
fn override_with(reactions: &mut Vec<Arc<Reaction>>, own: Vec<Arc<Reaction>>) {
    let mut merged = own;
    add_new(&mut merged, reactions);
    *reactions = merged;
}

/// How many findings of an error these defects make: one for all elements of a reaction.
fn errors(defects: &[Defect]) -> usize {
    let matter = |defect: &Defect| match &defect.kind {
        DefectKind::NotConserved { what, .. } => *what != Conserved::Charge,
        _ => false,
    };
    let goes_on = |index: usize| {
        index > 0 && matter(&defects[index]) && {
            let before = &defects[index - 1];
            matter(before) && before.at == defects[index].at
        }
    };
    (0..defects.len()).filter(|&i| is_error(&defects[i].kind) && !goes_on(i)).count()
}

/// Whether an imported file with this defect is broken, as far as its user is concerned.
fn is_error(kind: &DefectKind) -> bool {
    !matches!(
        kind,
        DefectKind::NoSource
            | DefectKind::BaseReaction { .. }
            | DefectKind::UncertaintyOfZero
            | DefectKind::UncertaintyTooLarge { .. }
            | DefectKind::UncertaintyNotUsed
            | DefectKind::TwoNames { .. }
            | DefectKind::AmbiguousCharge { .. }
            | DefectKind::DiffersFromSet { .. }
    )
}

fn uses(document: &Document) -> Vec<&Use> {
    document.sections[0]
        .statements
        .iter()
        .filter_map(|placed| match &placed.parsed.statement {
            Statement::Use(what) => Some(what),
            _ => None,
        })
        .collect()
}

fn use_key(what: &Use) -> (String, Option<u32>) {
    match what {
        Use::Set { name, edition } => (name.value.clone(), edition.as_ref().map(|e| e.value)),
        Use::File { path } => (format!("\"{}", path.value), None),
    }
}

/// The file of a path written in another, which lies below the root.
///
/// # Errors
/// That it lies outside, before it is looked at: nothing tells what is there.
pub fn locate(from: &Path, written: &str, root: &Path) -> Result<PathBuf, DefectKind> {
    let joined = from.parent().unwrap_or(Path::new("")).join(written);
    let outside = || {
        let (path, root) = (PathBuf::from(written), root.to_path_buf());
        Err(DefectKind::ImportOutsideRoot { path, root })
    };
    if !lexically_normal(&joined).starts_with(root) {
        return outside();
    }
    let path = joined.canonicalize().unwrap_or_else(|_| lexically_normal(&joined));
    if !path.starts_with(root) {
        return outside();
    }
    Ok(path)
}

/// The text of a file that is used; `shown` is its path as written.
///
/// # Errors
/// That it cannot be read, or is no text.
pub fn read_text(files: &dyn Files, path: &Path, shown: &Path) -> Result<Arc<str>, DefectKind> {
    let shown = || shown.to_path_buf();
    files.read(path).map_err(|problem| match problem {
        ReadProblem::Missing(why) => DefectKind::FileMissing { path: shown(), why },
        ReadProblem::NotText { at_byte } => DefectKind::FileNotText { path: shown(), at_byte },
    })
}

/// The path without `.` and `..`, without asking the disk.
fn lexically_normal(path: &Path) -> PathBuf {
    let mut normal = PathBuf::new();
    for part in path.components() {
        match part {
            std::path::Component::CurDir => {}
            std::path::Component::ParentDir => {
                normal.pop();
            }
            part => normal.push(part),
        }
    }
    normal
}
