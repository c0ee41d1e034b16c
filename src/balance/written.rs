//! A balance as written by hand, checked term by term against what the species imply.

use num_rational::{BigRational, Rational64};

use super::proton::ProtonCondition;
use super::recipe::Recipe;
use super::{BalanceKind, Part};
pub use crate::problem::exact::TooLarge;
use crate::problem::exact::escalate;
use crate::problem::stoichiometry::Stoichiometry;

mod constant;
mod fit;
mod view;

#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Side {
    Left,
    Right,
}

/// A term as it stands in the file.
#[derive(Clone, Debug, PartialEq)]
pub struct WrittenTerm {
    pub side: Side,
    /// One where none is written; negative behind a minus sign.
    pub coefficient: Rational64,
    pub what: WrittenWhat,
}

#[derive(Clone, Debug, PartialEq)]
pub enum WrittenWhat {
    /// The concentration of a species of the problem.
    Species(usize),
    /// `total X` or `added X`.
    Constant(Part),
    /// A plain amount and half a unit of its last written digit, mol per litre or
    /// kilogram. A value of zero is exact.
    Amount { value: f64, half_digit: f64 },
    /// Something that is no part of the problem.
    Foreign,
}

/// A term that is named in a difference.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum TermOf {
    Species(usize),
    Constant(Part),
}

/// What a written balance is made of: `charge · charge balance + Σ factor · mass
/// balance of a component`.
#[derive(Clone, Debug, PartialEq)]
pub struct Made {
    pub charge: Rational64,
    pub masses: Vec<(usize, Rational64)>,
}

#[derive(Clone, Debug, PartialEq)]
pub enum Verdict {
    /// It is the implied one, up to a factor.
    Right(Made),
    /// A proton balance at another reference level: right, and this combination.
    OtherLevel(Made),
    /// It differs from the nearest right one, that combination, in these places.
    Wrong { nearest: Made, differences: Vec<Difference> },
}

/// One place where a written balance is wrong. `index` is of the written terms.
#[derive(Clone, Debug, PartialEq)]
pub enum Difference {
    /// A term that should stand on this side, with this positive coefficient.
    MissingTerm { term: TermOf, coefficient: Rational64, side: Side },
    /// A term that does not belong.
    ForeignTerm { index: usize },
    /// A term that stands twice, here for the second time.
    RepeatedTerm { index: usize },
    /// The term should have this coefficient; negative: on the other side.
    WrongCoefficient { index: usize, should_be: Rational64 },
    /// The term belongs on the other side, as it stands.
    WrongSide { index: usize },
    /// The constant should be another one, with this coefficient where it stands.
    WrongConstant { index: usize, should_be: Part, coefficient: Rational64 },
    /// A plain amount that should be this, mol per litre or kilogram.
    WrongAmount { index: usize, should_be: f64 },
}

/// Compares a written balance with the implied ones: of charge and of a component up to
/// a factor, of protons up to a combination with a non-zero multiple of the charge
/// balance. Where it is wrong, the nearest is the one with the fewest differences, and
/// of equally near ones that at the reference level of `condition`.
///
/// Species that are absent, since a component's total is zero, may be left out. A plain
/// amount is not judged where an amount that it must equal is not known.
pub fn compare(
    kind: BalanceKind,
    written: &[WrittenTerm],
    stoichiometry: &Stoichiometry,
    recipe: &Recipe,
    condition: Option<&ProtonCondition>,
) -> Result<Verdict, TooLarge> {
    escalate(
        || fit::verdict::<Rational64>(kind, written, stoichiometry, recipe, condition),
        || fit::verdict::<BigRational>(kind, written, stoichiometry, recipe, condition),
    )
}
