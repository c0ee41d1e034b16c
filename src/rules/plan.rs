//! What each section of a file rests on, before anything is solved: its definitions, the
//! waters that it blends, and a key that changes when any of them does.

use std::hash::{DefaultHasher, Hash, Hasher};
use std::path::PathBuf;
use std::sync::{Arc, OnceLock};

use super::check::Surroundings;
use super::outcome::Outcome;
use super::waters::{self, Walk};
use crate::equilibrium::quantities::Solved;
use crate::problem::blend::Waters;
use crate::problem::defect::DefectKind;
use crate::problem::effective::{InForce, Written, in_force};
use crate::problem::import::{Definitions, Reader};
use crate::problem::scope::Scope;
use crate::text::span::{Part, Place};
use crate::text::tree::{Document, Section, Statement, Use};

pub struct Plan<'a> {
    document: &'a Document,
    around: &'a Surroundings<'a>,
    base: InForce<'a>,
    uses: UseResults,
    pub scope_key: u64,
    scope: OnceLock<Arc<Scope>>,
    /// Of each section.
    pub keys: Vec<u64>,
    /// Of each section; none at all where the file blends nothing.
    waters: Vec<Waters>,
}

type UseResults = Vec<(Place, Result<Arc<Definitions>, DefectKind>)>;

impl<'a> Plan<'a> {
    /// None when cancelled.
    pub fn new(
        document: &'a Document,
        around: &'a Surroundings<'a>,
        walk: &Walk,
    ) -> Option<Plan<'a>> {
        let base = in_force(&document.sections[0], None);
        let uses = read_uses(&base.statements, around);
        let scope_key = scope_key(&base.statements, &uses);
        let blends = document
            .sections
            .iter()
            .flat_map(|section| &section.statements)
            .any(|placed| matches!(placed.parsed.statement, Statement::Blend { .. }));
        let mut waters = Vec::new();
        if blends {
            for index in 0..document.sections.len() {
                let varied = (index > 0)
                    .then(|| in_force(&document.sections[0], document.sections.get(index)));
                let statements = varied.as_ref().map_or(&base.statements, |case| &case.statements);
                waters.push(waters::blended(statements, around, walk)?);
            }
        }
        let keys = (0..document.sections.len())
            .map(|index| {
                let mut hasher = DefaultHasher::new();
                scope_key.hash(&mut hasher);
                hash_section(&document.sections[0], &mut hasher);
                if index > 0 {
                    hash_section(&document.sections[index], &mut hasher);
                }
                for (_, water) in waters.get(index).into_iter().flatten() {
                    match water {
                        Ok(water) => water.number.hash(&mut hasher),
                        Err(kind) => format!("{kind:?}").hash(&mut hasher),
                    }
                }
                hasher.finish()
            })
            .collect();
        Some(Plan { document, around, base, uses, scope_key, scope: OnceLock::new(), keys, waters })
    }

    /// Takes over the scope of an earlier check, where it is of the same definitions.
    pub fn keep_scope(&self, earlier: &(u64, Arc<Scope>)) {
        if earlier.0 == self.scope_key {
            // It is set but once.
            let _ = self.scope.set(earlier.1.clone());
        }
    }

    pub fn scope(&self) -> &Arc<Scope> {
        self.scope.get_or_init(|| Arc::new(Scope::new(&self.base.statements, self.uses.clone())))
    }

    /// The circle that a blend of it leads into, if one does.
    pub fn circle(&self) -> Option<DefectKind> {
        let mut found = self.waters.iter().flatten().filter_map(|(_, water)| water.as_ref().err());
        found.find(|kind| matches!(kind, DefectKind::ImportCycle { .. })).cloned()
    }

    /// Files that the waters it blends rest on.
    pub fn blended_files(&self) -> impl Iterator<Item = &PathBuf> {
        let found = self.waters.iter().flatten().filter_map(|(_, water)| water.as_ref().ok());
        found.flat_map(|water| &water.files)
    }

    /// Takes a section through the rooms, from an answer that is near it where there is one.
    /// None when cancelled.
    pub fn outcome(&self, index: usize, near: Option<&Solved>) -> Option<Outcome> {
        let nothing = Waters::new();
        let waters = self.waters.get(index).unwrap_or(&nothing);
        let cancel = self.around.cancel;
        if index == 0 {
            return Outcome::new(&self.base, self.scope().clone(), waters, false, near, cancel);
        }
        let section = &self.document.sections[index];
        let in_force = in_force(&self.document.sections[0], Some(section));
        let statements = &in_force.statements;
        let own_scope = statements.iter().any(|w| w.part == Part::Case && defines(w))
            || section
                .statements
                .iter()
                .any(|p| matches!(p.parsed.statement, Statement::Without(_)));
        let scope = if own_scope {
            Arc::new(Scope::new(statements, read_uses(statements, self.around)))
        } else {
            self.scope().clone()
        };
        Outcome::new(&in_force, scope, waters, !own_scope, near, cancel)
    }
}

fn read_uses(statements: &[Written], around: &Surroundings) -> UseResults {
    let reader = Reader {
        imports: around.imports,
        files: around.files,
        path: around.path,
        roots: around.roots,
    };
    statements
        .iter()
        .filter_map(|written| match written.statement() {
            Statement::Use(what) => {
                let (Use::Set { name, .. } | Use::File { path: name }) = what;
                Some((written.place(name.span), reader.read(what)))
            }
            _ => None,
        })
        .collect()
}

/// Whether a statement brings reactions, groups or components.
fn defines(written: &Written) -> bool {
    matches!(
        written.statement(),
        Statement::Use(_)
            | Statement::Group { .. }
            | Statement::Component { .. }
            | Statement::Reaction(_)
    )
}

fn scope_key(statements: &[Written], uses: &UseResults) -> u64 {
    let mut hasher = DefaultHasher::new();
    for written in statements.iter().filter(|written| defines(written)) {
        (written.index, written.parsed.hash).hash(&mut hasher);
    }
    for (_, result) in uses {
        match result {
            Ok(definitions) => definitions.number.hash(&mut hasher),
            Err(kind) => format!("{kind:?}").hash(&mut hasher),
        }
    }
    hasher.finish()
}

fn hash_section(section: &Section, hasher: &mut DefaultHasher) {
    for placed in &section.statements {
        // A stray indent is a problem of the same text in another place.
        (placed.parsed.hash, placed.parsed.problems.len()).hash(hasher);
    }
}
