//! The written balance and the implied ones side by side, in exact numbers, and the
//! differences of the one from a given combination of the others.

use num_rational::Rational64;

use super::constant::Constants;
use super::{Difference, Side, TermOf, WrittenTerm, WrittenWhat};
use crate::balance::recipe::Recipe;
use crate::problem::exact::Exact;
use crate::problem::stoichiometry::Stoichiometry;

/// A combination of the charge balance and the mass balances of all components (the
/// proton's is in none, and stands at zero).
#[derive(Clone, PartialEq)]
pub(super) struct Fit<E> {
    pub charge: E,
    pub masses: Vec<E>,
}

pub(super) struct View<'a, E> {
    pub written: &'a [WrittenTerm],
    pub charges: Vec<E>,
    /// Of each species, without the proton.
    pub rows: Vec<Vec<(usize, E)>>,
    /// Coefficient of each species in left side less right side.
    pub sums: Vec<E>,
    /// Where each species is written.
    places: Vec<Vec<usize>>,
    /// Species that need a component whose total is zero.
    absent: Vec<bool>,
    pub constants: Constants<'a, E>,
    foreign: Vec<usize>,
}

/// A coefficient as it counts in left side less right side.
pub(super) fn signed<E: Exact>(term: &WrittenTerm) -> Option<E> {
    let coefficient = E::of(term.coefficient)?;
    match term.side {
        Side::Left => Some(coefficient),
        Side::Right => E::zero().minus(&coefficient),
    }
}

/// A positive coefficient and the side that it stands on.
pub(super) fn placed(coefficient: Rational64) -> (Rational64, Side) {
    if coefficient < Rational64::default() {
        (-coefficient, Side::Right)
    } else {
        (coefficient, Side::Left)
    }
}

impl<'a, E: Exact> View<'a, E> {
    pub fn new(
        written: &'a [WrittenTerm],
        stoichiometry: &Stoichiometry,
        recipe: &'a Recipe,
    ) -> Option<View<'a, E>> {
        let count = stoichiometry.species.len();
        let absent_component: Vec<bool> =
            (0..stoichiometry.components.len()).map(|c| c > 0 && recipe.is_absent(c)).collect();
        let mut charges = Vec::with_capacity(count);
        let mut rows = Vec::with_capacity(count);
        let mut absent = Vec::with_capacity(count);
        for species in &stoichiometry.species {
            charges.push(E::of(Rational64::from(i64::from(species.charge)))?);
            let mut row = Vec::new();
            for (column, coefficient) in species.row.iter().filter(|(column, _)| *column > 0) {
                row.push((*column, E::of(*coefficient)?));
            }
            absent.push(row.iter().any(|(c, _)| absent_component.get(*c) == Some(&true)));
            rows.push(row);
        }
        let mut sums = vec![E::zero(); count];
        let mut places = vec![Vec::new(); count];
        let mut foreign = Vec::new();
        for (index, term) in written.iter().enumerate() {
            match term.what {
                WrittenWhat::Species(species) if species < count => {
                    sums[species] = sums[species].plus(&signed(term)?)?;
                    places[species].push(index);
                }
                WrittenWhat::Species(_) | WrittenWhat::Foreign => foreign.push(index),
                WrittenWhat::Constant(_) | WrittenWhat::Amount { .. } => {}
            }
        }
        let constants = Constants::new(written, stoichiometry.components.len(), recipe)?;
        Some(View { written, charges, rows, sums, places, absent, constants, foreign })
    }

    /// What a species' coefficient should be in a combination.
    pub fn implied(&self, fit: &Fit<E>, species: usize) -> Option<E> {
        let mut coefficient = fit.charge.times(&self.charges[species])?;
        for (component, count) in &self.rows[species] {
            let factor = fit.masses.get(*component)?;
            if !factor.is_zero() {
                coefficient = coefficient.plus(&factor.times(count)?)?;
            }
        }
        Some(coefficient)
    }

    /// Every difference from a combination, in the order written where it has a place.
    pub fn differences(&self, fit: &Fit<E>) -> Option<Vec<Difference>> {
        let mut found: Vec<Difference> =
            self.foreign.iter().map(|index| Difference::ForeignTerm { index: *index }).collect();
        for species in 0..self.sums.len() {
            let implied = self.implied(fit, species)?;
            if implied != self.sums[species] {
                self.differ(species, &implied, &mut found)?;
            }
        }
        self.constants.differences(fit, &mut found)?;
        found.sort_by_key(|difference| match difference {
            Difference::MissingTerm { .. } => usize::MAX,
            Difference::ForeignTerm { index }
            | Difference::RepeatedTerm { index }
            | Difference::WrongCoefficient { index, .. }
            | Difference::WrongSide { index }
            | Difference::WrongConstant { index, .. }
            | Difference::WrongAmount { index, .. } => *index,
        });
        Some(found)
    }

    fn differ(&self, species: usize, implied: &E, found: &mut Vec<Difference>) -> Option<()> {
        let places = &self.places[species];
        let Some(last) = places.last().copied() else {
            if !self.absent[species] {
                let (coefficient, side) = placed(implied.ratio()?);
                let term = TermOf::Species(species);
                found.push(Difference::MissingTerm { term, coefficient, side });
            }
            return Some(());
        };
        if implied.is_zero() && places.len() == 1 {
            found.push(Difference::ForeignTerm { index: last });
            return Some(());
        }
        // What the last term would have to be, the others as they are.
        let own: E = signed(&self.written[last])?;
        let needed = implied.minus(&self.sums[species])?.plus(&own)?;
        found.push(if needed.is_zero() {
            Difference::RepeatedTerm { index: last }
        } else {
            correction(&self.written[last], last, &needed)?
        });
        Some(())
    }
}

/// What is wrong with a term that should count `needed` in left side less right side.
pub(super) fn correction<E: Exact>(
    term: &WrittenTerm,
    index: usize,
    needed: &E,
) -> Option<Difference> {
    let needed = match term.side {
        Side::Left => needed.clone(),
        Side::Right => E::zero().minus(needed)?,
    };
    let should_be = needed.ratio()?;
    Some(if needed.is_zero() {
        Difference::ForeignTerm { index }
    } else if needed.plus(&E::of(term.coefficient)?)?.is_zero() {
        Difference::WrongSide { index }
    } else {
        Difference::WrongCoefficient { index, should_be }
    })
}
