//! Declared groups of atoms, which have a symbol of their own inside formulas.

use std::collections::{BTreeMap, HashSet};
use std::sync::Arc;

use num_rational::Rational64;
use num_traits::{CheckedAdd, CheckedMul};

use super::{Atom, Formula, FormulaProblem};
use crate::chemistry::element::Element;

/// The groups that a file declares, whether in its own text or by import.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Groups {
    /// Longest symbol first.
    groups: Vec<Group>,
}

#[derive(Clone, Debug, PartialEq)]
struct Group {
    symbol: Arc<str>,
    /// The elements in one; none where the composition is unknown.
    elements: Option<BTreeMap<Element, Rational64>>,
}

/// Why a declared group could not be taken as it stands.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum GroupProblem {
    /// A symbol is an upper-case letter and then letters.
    InvalidSymbol,
    Repeated,
    /// The composition cannot be read.
    Formula(FormulaProblem),
    /// The composition holds the group itself, perhaps by way of others.
    Circular,
}

impl Groups {
    pub fn new() -> Groups {
        Groups::default()
    }

    /// All groups of a file at once, each with the text of its composition where it
    /// has one. Order does not matter: a composition may hold any of the groups. A
    /// problem is given with the index of its definition; a group with a broken
    /// composition is kept as one of unknown composition.
    pub fn from_definitions(
        definitions: &[(&str, Option<&str>)],
    ) -> (Groups, Vec<(usize, GroupProblem)>) {
        let mut problems = Vec::new();
        let mut groups = Groups::new();
        let mut taken = Vec::new();
        for (index, (symbol, _)) in definitions.iter().enumerate() {
            if !Groups::is_valid_symbol(symbol) {
                problems.push((index, GroupProblem::InvalidSymbol));
            } else if groups.contains(symbol) {
                problems.push((index, GroupProblem::Repeated));
            } else {
                groups.insert(symbol, None);
                taken.push(index);
            }
        }
        let mut open: Vec<(usize, Formula)> = Vec::new();
        for index in taken {
            let Some(text) = definitions[index].1 else { continue };
            match Formula::parse(text, &groups) {
                Ok(formula) => open.push((index, formula)),
                Err(problem) => problems.push((index, GroupProblem::Formula(problem))),
            }
        }
        // Each pass settles the groups whose own groups are settled.
        while !open.is_empty() {
            let symbols: HashSet<&str> =
                open.iter().map(|(index, _)| definitions[*index].0).collect();
            let (waiting, ready): (Vec<_>, Vec<_>) = open.into_iter().partition(|(_, formula)| {
                formula
                    .atoms
                    .keys()
                    .any(|atom| matches!(atom, Atom::Group(symbol) if symbols.contains(&**symbol)))
            });
            if ready.is_empty() {
                problems.extend(waiting.iter().map(|(index, _)| (*index, GroupProblem::Circular)));
                break;
            }
            for (index, formula) in ready {
                let elements = groups.take_apart(&formula.atoms);
                if let Some(group) =
                    groups.groups.iter_mut().find(|group| *group.symbol == *definitions[index].0)
                {
                    group.elements = elements;
                }
            }
            open = waiting;
        }
        problems.sort_by_key(|(index, _)| *index);
        (groups, problems)
    }

    /// Adds a group, or replaces the one of that symbol. `composition` is none for a
    /// group of unknown composition.
    pub fn insert(&mut self, symbol: &str, composition: Option<&Formula>) {
        self.groups.retain(|group| *group.symbol != *symbol);
        let elements = composition.and_then(|formula| formula.elements.clone());
        let at = self.groups.partition_point(|group| group.symbol.len() >= symbol.len());
        self.groups.insert(at, Group { symbol: symbol.into(), elements });
    }

    /// Adds the groups of another file; those of the same symbol are replaced.
    pub fn extend(&mut self, other: &Groups) {
        for group in &other.groups {
            self.groups.retain(|own| own.symbol != group.symbol);
            let at = self.groups.partition_point(|own| own.symbol.len() >= group.symbol.len());
            self.groups.insert(at, group.clone());
        }
    }

    pub fn contains(&self, symbol: &str) -> bool {
        self.groups.iter().any(|group| *group.symbol == *symbol)
    }

    pub fn is_empty(&self) -> bool {
        self.groups.is_empty()
    }

    pub fn symbols(&self) -> impl Iterator<Item = &str> {
        self.groups.iter().map(|group| &*group.symbol)
    }

    /// An upper-case letter and then letters, ASCII all, 32 at most.
    pub fn is_valid_symbol(symbol: &str) -> bool {
        symbol.len() <= 32
            && symbol.starts_with(|c: char| c.is_ascii_uppercase())
            && symbol.chars().all(|c| c.is_ascii_alphabetic())
    }

    /// The group that `text` starts with, longest first. A symbol must not run on
    /// into lower-case letters: with a group `C` declared, `Cl` is still chlorine.
    pub(super) fn at_start(&self, text: &[(char, usize)]) -> Option<&Arc<str>> {
        self.groups.iter().map(|group| &group.symbol).find(|symbol| {
            let count = symbol.len();
            text.len() >= count
                && symbol.chars().zip(text).all(|(one, (two, _))| one == *two)
                && !text.get(count).is_some_and(|(next, _)| next.is_ascii_lowercase())
        })
    }

    fn elements_of(&self, symbol: &str) -> Option<&BTreeMap<Element, Rational64>> {
        self.groups.iter().find(|group| *group.symbol == *symbol)?.elements.as_ref()
    }

    /// The elements of a composition; none where a group is unknown, or where counts
    /// multiply beyond all sense.
    pub(super) fn take_apart(
        &self,
        atoms: &BTreeMap<Atom, Rational64>,
    ) -> Option<BTreeMap<Element, Rational64>> {
        let mut elements = BTreeMap::<Element, Rational64>::new();
        let mut add = |element: Element, count: Rational64| {
            let sum = elements.entry(element).or_default();
            *sum = sum.checked_add(&count)?;
            Some(())
        };
        for (atom, count) in atoms {
            match atom {
                Atom::Element(element) => add(*element, *count)?,
                Atom::Group(symbol) => {
                    for (element, inside) in self.elements_of(symbol)? {
                        add(*element, inside.checked_mul(count)?)?;
                    }
                }
            }
        }
        Some(elements)
    }
}

/// The element or group that was most likely meant.
pub(super) fn nearest_symbol(symbol: &str, groups: &Groups) -> Option<String> {
    // Elements have two letters at most: a long run of text is near none of them.
    let letters = symbol.len();
    if letters < 2 {
        return None;
    }
    let candidates =
        || groups.symbols().chain(Element::all().map(|element| -> &str { element.symbol() }));
    candidates()
        .find(|candidate| candidate.eq_ignore_ascii_case(symbol))
        .or_else(|| {
            candidates()
                .filter(|candidate| candidate.len() > 1 && candidate.len().abs_diff(letters) < 2)
                .filter(|candidate| candidate.starts_with(&symbol[..1]))
                .find(|candidate| strsim::damerau_levenshtein(candidate, symbol) == 1)
        })
        .map(str::to_owned)
}
