//! Splitting a reagent by elements and charge: over the components, and into the species
//! in scope that it falls into, the fewest first.

use std::collections::BTreeSet;

use num_rational::Rational64;
use num_traits::{CheckedDiv, CheckedMul, CheckedSub, One, Signed, Zero};

use super::scope::{PROTON, Scope, WATER};
use super::sparse::coefficient;
use crate::chemistry::element::Element;
use crate::chemistry::formula::{Atom, Formula, Phase};

/// What a reagent is made of, as species of the scope with exact counts.
pub enum Split {
    Into(Vec<(usize, Rational64)>),
    /// More than one set of species makes it.
    NotUnique,
    /// It holds something that no component holds.
    Foreign(String),
}

/// Splits one unit of a neutral formula.
pub fn split(formula: &Formula, scope: &Scope) -> Split {
    if let Some(s) = scope.find(&formula.name).filter(|&s| scope.belongs(s)) {
        return Split::Into(vec![(s, Rational64::one())]);
    }
    // A solid or gas that is put in dissolves: its phase does not matter here.
    let blocks: Vec<usize> = scope.components.iter().map(|component| component.species).collect();
    if let Some(foreign) = foreign(formula, scope, &blocks) {
        return Split::Foreign(foreign);
    }
    let fitting: Vec<usize> = blocks
        .iter()
        .copied()
        .filter(|&s| s == blocks[PROTON] || holds_only(formula, &scope.species[s]))
        .chain([WATER])
        .collect();
    match solve(formula, scope, &fitting) {
        Solution::One(counts) => Split::Into(forms(scope, &fitting, &counts)),
        Solution::None => match solve(formula, scope, &all(&blocks)) {
            Solution::One(counts) => Split::Into(forms(scope, &all(&blocks), &counts)),
            Solution::None => Split::Foreign("charge".into()),
            Solution::Many => Split::NotUnique,
        },
        Solution::Many => fewest(formula, scope).map_or(Split::NotUnique, Split::Into),
    }
}

fn all(blocks: &[usize]) -> Vec<usize> {
    blocks.iter().copied().chain([WATER]).collect()
}

fn is_water_atom(atom: &Atom) -> bool {
    *atom == Atom::Element(Element::HYDROGEN) || *atom == Atom::Element(Element::OXYGEN)
}

/// An atom of the reagent that no component holds.
fn foreign(formula: &Formula, scope: &Scope, blocks: &[usize]) -> Option<String> {
    let held: BTreeSet<&Atom> =
        blocks.iter().flat_map(|&s| scope.species[s].atoms.keys()).collect();
    formula
        .atoms
        .keys()
        .find(|atom| !is_water_atom(atom) && !held.contains(atom))
        .map(Atom::to_string)
}

/// Whether a species has no atom that the reagent lacks, hydrogen and oxygen aside.
fn holds_only(formula: &Formula, species: &Formula) -> bool {
    species.atoms.keys().all(|atom| is_water_atom(atom) || formula.atoms.contains_key(atom))
}

enum Solution {
    One(Vec<Rational64>),
    None,
    Many,
}

/// Counts of these species that make the formula in every atom and in charge.
fn solve(formula: &Formula, scope: &Scope, species: &[usize]) -> Solution {
    let atoms: BTreeSet<&Atom> = formula
        .atoms
        .keys()
        .chain(species.iter().flat_map(|&s| scope.species[s].atoms.keys()))
        .collect();
    let count = |formula: &Formula, atom: &Atom| formula.atoms.get(atom).copied().unwrap_or_default();
    let charge = |formula: &Formula| Rational64::from_integer(i64::from(formula.charge));
    let mut rows: Vec<Vec<Rational64>> = atoms
        .iter()
        .map(|atom| {
            let mut row: Vec<_> =
                species.iter().map(|&s| count(&scope.species[s], atom)).collect();
            row.push(count(formula, atom));
            row
        })
        .collect();
    let mut charges: Vec<_> = species.iter().map(|&s| charge(&scope.species[s])).collect();
    charges.push(charge(formula));
    rows.push(charges);
    reduce(rows, species.len()).unwrap_or(Solution::Many)
}

/// Gauss–Jordan; none where the numbers outgrow 64 bits.
fn reduce(mut rows: Vec<Vec<Rational64>>, unknowns: usize) -> Option<Solution> {
    let mut rank = 0;
    let mut pivots = Vec::new();
    for column in 0..unknowns {
        let Some(found) = (rank..rows.len()).find(|&r| !rows[r][column].is_zero()) else {
            continue;
        };
        rows.swap(rank, found);
        let pivot = rows[rank][column];
        for value in &mut rows[rank] {
            *value = value.checked_div(&pivot)?;
        }
        let pivot_row = rows[rank].clone();
        for (r, row) in rows.iter_mut().enumerate() {
            let factor = row[column];
            if r == rank || factor.is_zero() {
                continue;
            }
            for (value, by) in row.iter_mut().zip(&pivot_row) {
                *value = value.checked_sub(&factor.checked_mul(by)?)?;
            }
        }
        pivots.push(column);
        rank += 1;
    }
    if rows[rank..].iter().any(|row| !row[unknowns].is_zero()) {
        return Some(Solution::None);
    }
    if rank < unknowns {
        return Some(Solution::Many);
    }
    let mut counts = vec![Rational64::zero(); unknowns];
    for (row, &column) in rows.iter().zip(&pivots) {
        counts[column] = row[unknowns];
    }
    Some(Solution::One(counts))
}

/// The forms of each component that leave the fewest kinds of particles, then the fewest
/// hydroxo complexes, then the fewest particles.
fn forms(scope: &Scope, blocks: &[usize], counts: &[Rational64]) -> Vec<(usize, Rational64)> {
    let mut protons = Rational64::zero();
    let mut choices: Vec<(Rational64, Vec<Form>)> = Vec::new();
    for (&s, &count) in blocks.iter().zip(counts) {
        if s == WATER || count.is_zero() {
            continue;
        }
        if s == scope.components[PROTON].species {
            protons += count;
            continue;
        }
        choices.push((count, forms_of(scope, s, count.is_negative())));
    }
    let mut best: Option<(Rank, Vec<(usize, Rational64)>)> = None;
    let mut picked = vec![0usize; choices.len()];
    // At most four forms of each of the few components in one substance are tried.
    for _ in 0..20_000 {
        let mut left = protons;
        let mut pieces = Vec::with_capacity(choices.len() + 1);
        let mut rank = Rank::default();
        for ((count, forms), &at) in choices.iter().zip(&picked) {
            let form = &forms[at];
            left -= form.protons * count;
            pieces.push((form.species, *count));
            rank.kinds += 1;
            rank.hydroxo += usize::from(form.protons.is_negative());
            rank.water = rank.water.max(usize::from(form.needs_water));
            rank.particles += count.abs();
        }
        if !left.is_zero() {
            rank.kinds += 1;
            rank.particles += left.abs();
            let hydroxide = scope.find("OH-").filter(|&s| left.is_negative() && scope.belongs(s));
            pieces.push((hydroxide.unwrap_or(PROTON), hydroxide.map_or(left, |_| -left)));
        }
        if best.as_ref().is_none_or(|(known, _)| rank < *known) {
            best = Some((rank, pieces));
        }
        // Count up through the choices.
        let Some(next) = (0..picked.len()).find(|&i| picked[i] + 1 < choices[i].1.len()) else {
            break;
        };
        picked[next] += 1;
        picked[..next].fill(0);
    }
    best.map(|(_, pieces)| pieces).unwrap_or_default()
}

#[derive(Clone, Debug, Default, PartialEq, PartialOrd)]
struct Rank {
    kinds: usize,
    hydroxo: usize,
    water: usize,
    particles: Rational64,
}

struct Form {
    species: usize,
    protons: Rational64,
    /// Whether it differs from its component by water too, as CO2 from CO3^2-.
    needs_water: bool,
}

/// The dissolved forms of one component that hold just one of it.
fn forms_of(scope: &Scope, component: usize, only_itself: bool) -> Vec<Form> {
    let own = Form { species: component, protons: Rational64::zero(), needs_water: false };
    let mut forms = vec![own];
    let Some(j) = scope.components.iter().position(|c| c.species == component) else {
        return forms;
    };
    if only_itself {
        return forms;
    }
    for &s in &scope.dissolved {
        let Some(made) = &scope.belonging.made[s] else { continue };
        let alone = made.row.iter().all(|&(k, _)| k == j || k == PROTON);
        if s == component || !alone || coefficient(&made.row, j) != Rational64::one() {
            continue;
        }
        let oxygen = |s: usize| {
            scope.species[s].atoms.get(&Atom::Element(Element::OXYGEN)).copied().unwrap_or_default()
        };
        forms.push(Form {
            species: s,
            protons: coefficient(&made.row, PROTON),
            needs_water: oxygen(s) != oxygen(component),
        });
    }
    forms
}

/// Where the components alone do not tell: the fewest dissolved species, three at most, of
/// positive counts that make the formula. None where two such sets are as small.
fn fewest(formula: &Formula, scope: &Scope) -> Option<Vec<(usize, Rational64)>> {
    let candidates: Vec<usize> = scope
        .dissolved
        .iter()
        .copied()
        .filter(|&s| {
            let species = &scope.species[s];
            species.phase == Phase::Aqueous
                && !species.is_proton()
                && !species.is_hydroxide()
                && holds_only(formula, species)
        })
        .take(40)
        .collect();
    for size in 1..=3 {
        let mut found: Option<Vec<(usize, Rational64)>> = None;
        let mut several = false;
        subsets(&candidates, size, &mut |species| {
            if let Solution::One(counts) = solve(formula, scope, species)
                && counts.iter().all(|count| count.is_positive())
            {
                several |= found.is_some();
                found = Some(species.iter().copied().zip(counts).collect());
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
