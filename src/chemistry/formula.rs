//! Chemical formulas: what a species is made of, its charge and its phase.

use std::collections::BTreeMap;
use std::fmt;
use std::sync::Arc;

use num_rational::Rational64;
use num_traits::ToPrimitive;

use super::element::Element;

mod charge;
mod group;
mod parse;
mod problem;
mod spelling;
mod tail;

pub use group::{GroupProblem, Groups};
pub use spelling::canonical;
pub use problem::{FormulaProblem, FormulaProblemKind};

/// What reactions conserve: an element, or a declared group, which counts as itself.
#[derive(Clone, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Atom {
    Element(Element),
    Group(Arc<str>),
}

impl fmt::Display for Atom {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Atom::Element(element) => f.write_str(element.symbol()),
            Atom::Group(symbol) => f.write_str(symbol),
        }
    }
}

/// The phase of a species, with the name of its solid form where one was given.
#[derive(Clone, Debug, Default, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Phase {
    #[default]
    Aqueous,
    Solid(Option<Arc<str>>),
    Gas,
    Liquid,
}

/// A formula that has been read. Equal formulas have equal names.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub struct Formula {
    /// The canonical spelling: plain digits, `^2-` for a charge above one, `·` for the
    /// dot of a hydrate, the phase unless it is `(aq)`.
    pub name: String,
    /// Counts of what is conserved; none is zero. Fractions come from hydrates.
    pub atoms: BTreeMap<Atom, Rational64>,
    /// In elementary charges.
    pub charge: i32,
    pub phase: Phase,
    /// Written with a trailing `*`: the sum of species that are not told apart.
    pub composite: bool,
    /// The elements, groups taken apart; none where a group's composition is unknown.
    pub(crate) elements: Option<BTreeMap<Element, Rational64>>,
}

impl Formula {
    /// Parentheses may nest this deep.
    pub const NESTING_LIMIT: usize = 64;

    /// Reads a formula, with white space round it allowed. Declared groups are tried
    /// before elements, longest first. Ranges of problems are bytes of `text`.
    pub fn parse(text: &str, groups: &Groups) -> Result<Formula, FormulaProblem> {
        parse::parse(text, groups)
    }

    /// `e-`
    pub fn electron() -> Formula {
        Formula {
            name: "e-".to_owned(),
            atoms: BTreeMap::new(),
            charge: -1,
            phase: Phase::Aqueous,
            composite: false,
            elements: Some(BTreeMap::new()),
        }
    }

    /// Whether the text is another charge when its last digits are taken for it:
    /// `Ca2+` for `Ca^2+`. None where the charge already has a caret, or the digits
    /// are not such that they could be one. Whether to offer it is the caller's to
    /// judge, by what the file knows and by [`Formula::is_common_monatomic_ion`].
    pub fn caret_reading(text: &str, groups: &Groups) -> Option<Formula> {
        Formula::parse(&charge::with_caret(text)?, groups).ok()
    }

    /// Molar mass, g/mol. None where a group's composition is unknown, where an element
    /// has no standard atomic weight, and for the electron. The mass of electrons
    /// gained or lost is left out, as is usual.
    pub fn molar_mass(&self) -> Option<f64> {
        let elements = self.elements.as_ref().filter(|elements| !elements.is_empty())?;
        let mut mass = 0.0;
        for (element, count) in elements {
            mass += element.atomic_weight()? * count.to_f64()?;
        }
        Some(mass)
    }

    /// Charge equivalents per mole, `|z|`. None for a neutral species.
    pub fn equivalents(&self) -> Option<u32> {
        Some(self.charge.unsigned_abs()).filter(|&z| z > 0)
    }

    /// What a reaction must conserve besides the charge, with its count.
    pub fn conserved(&self) -> impl Iterator<Item = (&Atom, Rational64)> {
        self.atoms.iter().map(|(atom, count)| (atom, *count))
    }

    /// The count of an element, those inside groups of known composition included.
    /// None where a group of unknown composition is in it.
    pub fn element_count(&self, element: Element) -> Option<Rational64> {
        Some(self.elements.as_ref()?.get(&element).copied().unwrap_or_default())
    }

    /// The elements, with groups of known composition taken apart.
    pub fn elements(&self) -> Option<&BTreeMap<Element, Rational64>> {
        self.elements.as_ref()
    }

    /// Whether both have the same composition, charge and phase, whatever their names.
    /// Groups of known composition are taken apart for this.
    pub fn same_matter(&self, other: &Formula) -> bool {
        self.charge == other.charge
            && self.phase == other.phase
            && match (&self.elements, &other.elements) {
                (Some(one), Some(two)) => one == two,
                _ => self.atoms == other.atoms,
            }
    }

    /// `H2O`, dissolved or liquid.
    pub fn is_water(&self) -> bool {
        matches!(self.phase, Phase::Aqueous | Phase::Liquid)
            && self.charge == 0
            && self.is_made_of(&[(Element::HYDROGEN, 2), (Element::OXYGEN, 1)])
    }

    /// `H+`
    pub fn is_proton(&self) -> bool {
        self.phase == Phase::Aqueous
            && self.charge == 1
            && self.is_made_of(&[(Element::HYDROGEN, 1)])
    }

    /// `OH-`
    pub fn is_hydroxide(&self) -> bool {
        self.phase == Phase::Aqueous
            && self.charge == -1
            && self.is_made_of(&[(Element::HYDROGEN, 1), (Element::OXYGEN, 1)])
    }

    pub fn is_electron(&self) -> bool {
        self.atoms.is_empty() && self.charge == -1
    }

    /// One atom of an element with any charge but zero.
    pub fn is_monatomic_ion(&self) -> bool {
        self.charge != 0 && self.monatomic().is_some()
    }

    /// A monatomic ion that is met in water: a metal's cation of charge one to four,
    /// `H+`, a halide, and the sulfide, selenide and telluride. So `Ca^2+` is one, and
    /// `I^3-`, the caret reading of triiodide, is none.
    pub fn is_common_monatomic_ion(&self) -> bool {
        self.monatomic().is_some_and(|element| match element.symbol() {
            "H" => self.charge == 1,
            "F" | "Cl" | "Br" | "I" => self.charge == -1,
            "S" | "Se" | "Te" => self.charge == -2,
            _ => element.is_metal() && (1..=4).contains(&self.charge),
        })
    }

    fn monatomic(&self) -> Option<Element> {
        let mut atoms = self.atoms.iter();
        match (atoms.next(), atoms.next()) {
            (Some((Atom::Element(element), count)), None) if *count == Rational64::from(1) => {
                Some(*element)
            }
            _ => None,
        }
    }

    fn is_made_of(&self, composition: &[(Element, i64)]) -> bool {
        self.elements.as_ref().is_some_and(|elements| {
            elements.len() == composition.len()
                && composition.iter().all(|(element, count)| {
                    elements.get(element).is_some_and(|c| *c == Rational64::from(*count))
                })
        })
    }
}

impl fmt::Display for Formula {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(&self.name)
    }
}
