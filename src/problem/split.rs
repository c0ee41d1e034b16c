//! A reagent over the components of a problem, and where the elements alone do not tell,
//! over the fewest species that make it.

use std::collections::HashMap;
use std::sync::{Arc, Mutex, PoisonError};

use num_rational::Rational64;
use num_traits::{One, Signed, Zero};

use super::reagent::{SplitProblem, split_over_components};
use super::scope::{PROTON, Scope, WATER};
use super::sparse::Row;
use crate::chemistry::element::Element;
use crate::chemistry::formula::{Atom, Formula};

/// Reagents that were split over a scope already, by their names as written: cases of one
/// problem put in the same ones.
#[derive(Debug, Default)]
pub struct Reagents {
    known: Mutex<HashMap<String, (Arc<Formula>, Row)>>,
}

/// So many are kept; a file with more has each one split again.
const KEPT: usize = 4096;

impl Reagents {
    pub fn get(&self, written: &str) -> Option<(Arc<Formula>, Row)> {
        self.known.lock().unwrap_or_else(PoisonError::into_inner).get(written).cloned()
    }

    pub fn keep(&self, written: &str, formula: &Arc<Formula>, row: &Row) {
        let mut known = self.known.lock().unwrap_or_else(PoisonError::into_inner);
        if known.len() < KEPT {
            known.insert(written.to_owned(), (formula.clone(), row.clone()));
        }
    }
}

/// What a reagent is made of, as species of the scope with exact counts.
pub enum Split {
    Into(Vec<(usize, Rational64)>),
    /// More than one set of species makes it.
    NotUnique,
    /// It holds something that no component holds.
    Foreign(String),
    /// Each of its elements is held, and no sum of the components makes it.
    Impossible,
}

/// Splits one unit of a neutral formula. A solid or a gas that is put in dissolves: its
/// phase does not matter here.
pub fn split(formula: &Formula, scope: &Scope) -> Split {
    if let Some(s) = scope.find(&formula.name).filter(|&s| scope.belongs(s)) {
        return Split::Into(vec![(s, Rational64::one())]);
    }
    let components: Vec<usize> = scope.components.iter().map(|c| c.species).collect();
    let all: Vec<usize> = components.iter().copied().chain([WATER]).collect();
    // First those that hold nothing else than the reagent does: NaCl is sodium and chloride
    // whatever else there is in the water.
    let fitting: Vec<usize> = all
        .iter()
        .copied()
        .filter(|&s| s == components[PROTON] || holds_only(formula, &scope.species[s]))
        .collect();
    match over(formula, scope, &fitting) {
        Ok(pieces) => Split::Into(pieces),
        Err(SplitProblem::NotUnique { .. } | SplitProblem::TooLarge) => {
            fewest(formula, scope).map_or(Split::NotUnique, Split::Into)
        }
        Err(_) => match over(formula, scope, &all) {
            Ok(pieces) => Split::Into(pieces),
            Err(SplitProblem::Unheld { atom }) => Split::Foreign(atom.to_string()),
            Err(SplitProblem::NotUnique { .. } | SplitProblem::TooLarge) => Split::NotUnique,
            Err(_) => Split::Impossible,
        },
    }
}

/// The counts of these species that make the formula.
fn over(
    formula: &Formula,
    scope: &Scope,
    species: &[usize],
) -> Result<Vec<(usize, Rational64)>, SplitProblem> {
    let formulas: Vec<&Formula> = species.iter().map(|&s| &*scope.species[s]).collect();
    let counts = split_over_components(formula, &formulas)?;
    Ok(species.iter().copied().zip(counts).filter(|(_, count)| !count.is_zero()).collect())
}

fn is_water_atom(atom: &Atom) -> bool {
    *atom == Atom::Element(Element::HYDROGEN) || *atom == Atom::Element(Element::OXYGEN)
}

/// Whether a species has no atom that the reagent lacks, hydrogen and oxygen aside.
fn holds_only(formula: &Formula, species: &Formula) -> bool {
    species.atoms.keys().all(|atom| is_water_atom(atom) || formula.atoms.contains_key(atom))
}

/// So many species are looked at where the components do not tell.
const CANDIDATES: usize = 40;

/// The fewest dissolved species, three at most, of positive counts that make the formula.
/// None where two such sets are as small.
fn fewest(formula: &Formula, scope: &Scope) -> Option<Vec<(usize, Rational64)>> {
    let candidates: Vec<usize> = scope
        .dissolved
        .iter()
        .copied()
        .filter(|&s| {
            let species = &scope.species[s];
            !species.is_proton() && !species.is_hydroxide() && holds_only(formula, species)
        })
        .take(CANDIDATES)
        .collect();
    for size in 1..=3 {
        let mut found: Option<Vec<(usize, Rational64)>> = None;
        let mut several = false;
        subsets(&candidates, size, &mut |species| {
            if let Ok(pieces) = over(formula, scope, species)
                && pieces.len() == species.len()
                && pieces.iter().all(|(_, count)| count.is_positive())
            {
                several |= found.is_some();
                found = Some(pieces);
            }
        });
        if several {
            return None;
        }
        if found.is_some() {
            return found;
        }
    }
    None
}

/// Calls back with each subset of a size up to three.
fn subsets(of: &[usize], size: usize, call: &mut dyn FnMut(&[usize])) {
    for i in 0..of.len() {
        if size == 1 {
            call(&[of[i]]);
            continue;
        }
        for j in i + 1..of.len() {
            if size == 2 {
                call(&[of[i], of[j]]);
                continue;
            }
            for &k in &of[j + 1..] {
                call(&[of[i], of[j], k]);
            }
        }
    }
}
