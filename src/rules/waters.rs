//! The waters of other files that a file blends: each is checked as its own file is, and
//! kept while nothing that it rests on has changed.

use std::collections::HashMap;
use std::path::PathBuf;
use std::sync::atomic::{AtomicU64, Ordering};
use std::sync::{Arc, Mutex};

use super::check::Surroundings;
use super::finding::Severity;
use super::outcome::{Outcome, State};
use super::plan::Plan;
use crate::equilibrium::quantities::Solved;
use crate::problem::blend::{BlendedWater, Matter, WaterOf, WaterResult, Waters};
use crate::problem::defect::DefectKind;
use crate::problem::effective::Written;
use crate::problem::files::root_of;
use crate::problem::import::{locate, read_text};
use crate::problem::model::Problem;
use crate::problem::scope::PROTON;
use crate::text::tree::{BlendPart, Document, Statement};

/// One walk through the files that a file blends.
#[derive(Default)]
pub struct Walk<'a> {
    /// The files that are being checked, the outermost first.
    chain: Vec<PathBuf>,
    shared: Option<&'a Shared>,
}

/// What the whole walk has found: a water that several files blend is looked at once.
#[derive(Default)]
pub struct Shared {
    done: Mutex<HashMap<WaterOf, WaterResult>>,
}

/// Blends nest no deeper than this, so that no stack depends on the files.
const DEEPEST: usize = 16;

static NUMBER: AtomicU64 = AtomicU64::new(1);

impl<'a> Walk<'a> {
    pub fn from(shared: &'a Shared) -> Self {
        Walk { chain: Vec::new(), shared: Some(shared) }
    }
}

/// The water of each part of the blend in force, with the part's place. None when cancelled.
pub fn blended(statements: &[Written], around: &Surroundings, walk: &Walk) -> Option<Waters> {
    let mut waters = Waters::new();
    for written in statements {
        let Statement::Blend { parts } = written.statement() else { continue };
        for part in parts {
            waters.push((written.place(part.span), water(part, around, walk)?));
        }
    }
    Some(waters)
}

/// None when cancelled.
fn water(part: &BlendPart, around: &Surroundings, walk: &Walk) -> Option<WaterResult> {
    let shown = PathBuf::from(&part.file.value);
    let Some(own) = around.path else {
        let why = "this text has no file yet, so a path beside it has no meaning".into();
        return Some(Err(DefectKind::FileMissing { path: shown, why }));
    };
    let root = root_of(own, around.roots);
    let own = own.canonicalize().unwrap_or_else(|_| own.to_path_buf());
    let path = match locate(&own, &part.file.value, &root) {
        Ok(path) => path,
        Err(kind) => return Some(Err(kind)),
    };
    let mut chain = walk.chain.clone();
    chain.push(own);
    if let Some(at) = chain.iter().position(|open| *open == path) {
        let mut chain = chain.split_off(at);
        chain.push(path);
        return Some(Err(DefectKind::ImportCycle { chain }));
    }
    if chain.len() > DEEPEST {
        let why = format!("blends nest deeper than {DEEPEST}");
        return Some(Err(DefectKind::FileMissing { path: shown, why }));
    }
    let case = part.case.as_ref().map(|case| case.value.clone());
    let key = (path, case);
    let done = walk.shared.map(|shared| &shared.done);
    let lock = |done: &'_ Mutex<HashMap<_, WaterResult>>| -> Option<WaterResult> {
        done.lock().unwrap_or_else(|e| e.into_inner()).get(&key).cloned()
    };
    if let Some(found) = done.and_then(lock) {
        return Some(found);
    }
    let around = Surroundings { path: Some(&key.0), roots: &[root], ..*around };
    let walk = Walk { chain, shared: walk.shared };
    let found = of_file(shown, &key, &around, &walk)?;
    // What leads back to a file that is open here may be no circle from elsewhere.
    if let Some(done) = done.filter(|_| !matches!(found, Err(DefectKind::ImportCycle { .. }))) {
        done.lock().unwrap_or_else(|e| e.into_inner()).insert(key, found.clone());
    }
    Some(found)
}

/// The water of a file that has been found. None when cancelled.
fn of_file(
    shown: PathBuf,
    key: &WaterOf,
    around: &Surroundings,
    walk: &Walk,
) -> Option<WaterResult> {
    let (path, case) = key;
    let text = match read_text(around.files, path, &shown) {
        Ok(text) => text,
        Err(kind) => return Some(Err(kind)),
    };
    let document = Document::parse(text);
    let titles: Vec<Option<&String>> = document.sections.iter().map(title).collect();
    let index = match case {
        None => 0,
        Some(wanted) => match titles.iter().position(|title| *title == Some(wanted)) {
            Some(index) => index,
            None => {
                let cases = titles.iter().flatten().map(|title| (*title).clone()).collect();
                let case = wanted.clone();
                return Some(Err(DefectKind::BlendedCaseMissing { path: shown, case, cases }));
            }
        },
    };
    let plan = Plan::new(&document, around, walk)?;
    if let Some(circle) = plan.circle() {
        return Some(Err(circle));
    }
    let state = plan.keys[index];
    let kept = around.imports.waters();
    if let Some(known) = kept.get(key, state) {
        return Some(known);
    }
    let outcome = plan.outcome(index, None)?;
    let found = match outcome.solved() {
        Some(solved) => {
            let mut files = vec![path.clone()];
            files.extend(outcome.problem.scope.files.iter().cloned());
            files.extend(plan.blended_files().cloned());
            Ok(Arc::new(of_outcome(&outcome.problem, solved, files)))
        }
        None => {
            let (path, case, why) = (shown, case.clone(), hindrance(&outcome));
            Err(DefectKind::BlendedWaterNotSolved { path, case, why })
        }
    };
    kept.keep(key.clone(), state, found.clone());
    Some(found)
}

fn title(section: &crate::text::tree::Section) -> Option<&String> {
    section.statements.first().and_then(|placed| match &placed.parsed.statement {
        Statement::Case { title } => Some(&title.value),
        _ => None,
    })
}

/// What keeps a water from being solved, in the words of its own first error.
fn hindrance(outcome: &Outcome) -> Option<String> {
    if matches!(outcome.state, State::NothingStated) {
        return Some("it states no amounts".into());
    }
    let errors = outcome.findings.iter().filter(|finding| finding.severity == Severity::Error);
    errors.min_by_key(|finding| finding.at).map(|finding| finding.message.clone())
}

fn of_outcome(problem: &Problem, solved: &Solved, files: Vec<PathBuf>) -> BlendedWater {
    let (cations, anions) = solved.charges();
    // Left of sums that cancel; a pH that was found leaves no charge open.
    let rounding = 1e-9 * (cations + anions);
    let charge = cations - anions;
    BlendedWater {
        scale: problem.scale,
        kelvin: problem.kelvin,
        matter: matter(problem, solved),
        charge: if charge.abs() > rounding { charge } else { 0.0 },
        ph: solved.ph(),
        alkalinity: solved.alkalinity(problem),
        number: NUMBER.fetch_add(1, Ordering::Relaxed),
        files,
    }
}

/// The dissolved total of each component; where electrons are one of them, of each species,
/// since the file that blends it may not list them.
fn matter(problem: &Problem, solved: &Solved) -> Vec<Matter> {
    let scope = &problem.scope;
    let rows = &scope.stoichiometry.species;
    if scope.component("e-").is_some() {
        let species = rows.iter().zip(&solved.answer.concentrations);
        let of_water = |row: &[(usize, _)]| row.iter().all(|&(j, _): &(usize, _)| j == PROTON);
        return species
            .filter(|(species, _)| !of_water(&species.row))
            .map(|(species, &amount)| Matter { names: vec![species.name.clone()], amount })
            .collect();
    }
    (1..scope.components.len())
        .map(|j| {
            let mut names = vec![scope.components[j].formula.name.clone()];
            for species in rows {
                let differs_in_protons = species
                    .row
                    .iter()
                    .all(|&(k, n)| k == PROTON || k == j && n == num_rational::Rational64::from(1));
                let holds = species.row.iter().any(|&(k, _)| k == j);
                if holds && differs_in_protons && !names.contains(&species.name) {
                    names.push(species.name.clone());
                }
            }
            Matter { names, amount: solved.dissolved(j) }
        })
        .collect()
}
