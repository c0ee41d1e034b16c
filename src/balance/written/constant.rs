//! The constants of a written balance: totals, added reagents and plain amounts.

use num_traits::{ToPrimitive, Zero};

use super::view::{Fit, correction, placed, signed};
use super::{Difference, Side, TermOf, WrittenTerm, WrittenWhat};
use crate::balance::Part;
use crate::balance::recipe::Recipe;
use crate::problem::exact::Exact;

/// A sum of what the recipe gives, by rising part, no zeros.
type Sum<E> = Vec<(Part, E)>;

pub(super) struct Constants<'a, E> {
    recipe: &'a Recipe,
    written: &'a [WrittenTerm],
    /// `total` and `added` terms: index, what counts, and one of it written out.
    terms: Vec<(usize, E, Sum<E>)>,
    /// Plain amounts: index, signed factor, value, half a digit; none of them zero.
    amounts: Vec<(usize, f64, f64, f64)>,
    /// One total of each component written out.
    totals: Vec<Sum<E>>,
    /// The same less what formed of the solids that hold it.
    implied: Vec<Sum<E>>,
}

impl<'a, E: Exact> Constants<'a, E> {
    pub fn new(written: &'a [WrittenTerm], components: usize, recipe: &'a Recipe) -> Option<Self> {
        let one = E::of(1.into())?;
        let mut terms = Vec::new();
        let mut amounts = Vec::new();
        for (index, term) in written.iter().enumerate() {
            match term.what {
                WrittenWhat::Constant(part) => {
                    let out = recipe.written_out(&[(part, one.clone())])?;
                    terms.push((index, signed(term)?, out));
                }
                WrittenWhat::Amount { value, half_digit }
                    if value != 0.0 && !term.coefficient.is_zero() =>
                {
                    let factor = term.coefficient.to_f64()?;
                    let factor = if term.side == Side::Left { factor } else { -factor };
                    amounts.push((index, factor, value, half_digit));
                }
                _ => {}
            }
        }
        // What did not form, or may not have, may be left out.
        let is_written =
            |part: Part| terms.iter().any(|(_, _, out)| out.iter().any(|o| o.0 == part));
        let mut totals = Vec::new();
        let mut implied = Vec::new();
        for component in 0..components {
            let total = recipe.written_out(&[(Part::Total(component), one.clone())])?;
            let mut less = total.clone();
            for (part, n) in recipe.precipitated_in(component) {
                if recipe.value(part).is_some_and(|n| n != 0.0) || is_written(part) {
                    subtract(&mut less, &vec![(part, E::of(n)?)], &one)?;
                }
            }
            totals.push(total);
            implied.push(less);
        }
        Some(Constants { recipe, written, terms, amounts, totals, implied })
    }

    /// How often the total of a component is written, or all that it comes from.
    pub fn factor_of_total(&self, component: usize) -> Option<E> {
        let (first, own) = self.totals.get(component)?.first()?;
        let mut factor = E::zero();
        for (_, count, out) in &self.terms {
            if let Some((_, coefficient)) = out.iter().find(|(part, _)| part == first) {
                factor = factor.plus(&count.times(coefficient)?.over(own)?)?;
            }
        }
        Some(factor)
    }

    pub fn differences(&self, fit: &Fit<E>, found: &mut Vec<Difference>) -> Option<()> {
        // What should stand in left side less right side, and is not written yet.
        let mut missing: Sum<E> = Vec::new();
        for (component, factor) in fit.masses.iter().enumerate() {
            if !factor.is_zero() {
                subtract(&mut missing, self.implied.get(component)?, factor)?;
            }
        }
        for (_, count, out) in &self.terms {
            subtract(&mut missing, out, count)?;
        }
        if self.amounts.is_empty() {
            self.in_symbols(missing, fit, found)
        } else {
            self.in_numbers(&missing, found)
        }
    }

    /// The fewest changes of `total` and `added` terms that make up for what is missing.
    fn in_symbols(
        &self,
        mut missing: Sum<E>,
        fit: &Fit<E>,
        found: &mut Vec<Difference>,
    ) -> Option<()> {
        if missing.is_empty() || self.all_zero(&missing) {
            return Some(());
        }
        // One written term with another coefficient.
        for (index, count, out) in &self.terms {
            if let Some(more) = multiple(&missing, out)? {
                found.push(correction(&self.written[*index], *index, &count.plus(&more)?)?);
                return Some(());
            }
        }
        if let Some((part, coefficient)) = self.as_one_part(&missing, fit)? {
            found.push(missing_term(part, &coefficient)?);
            return Some(());
        }
        // One written term in the place of another constant.
        for (index, count, out) in &self.terms {
            let mut without = missing.clone();
            subtract(&mut without, out, &E::zero().minus(count)?)?;
            if let Some((should_be, coefficient)) = self.as_one_part(&without, fit)? {
                let coefficient = match self.written[*index].side {
                    Side::Left => coefficient,
                    Side::Right => E::zero().minus(&coefficient)?,
                };
                let coefficient = coefficient.ratio()?;
                found.push(Difference::WrongConstant { index: *index, should_be, coefficient });
                return Some(());
            }
        }
        // Part by part; a term whose removal leaves less to explain does not belong.
        for (index, count, out) in &self.terms {
            let mut without = missing.clone();
            subtract(&mut without, out, &E::zero().minus(count)?)?;
            if without.len() < missing.len() {
                found.push(Difference::ForeignTerm { index: *index });
                missing = without;
            }
        }
        for (part, coefficient) in &missing {
            if self.recipe.value(*part) != Some(0.0) {
                found.push(missing_term(*part, coefficient)?);
            }
        }
        Some(())
    }

    /// Whether all that is missing is known to be nothing.
    fn all_zero(&self, missing: &Sum<E>) -> bool {
        missing.iter().all(|(part, _)| self.recipe.value(*part) == Some(0.0))
    }

    /// A sum as a multiple of one constant: the total of the component whose balance
    /// alone is compared, or else a part of the recipe, or else any other total.
    fn as_one_part(&self, sum: &Sum<E>, fit: &Fit<E>) -> Option<Option<(Part, E)>> {
        let total = |component: usize| -> Option<Option<(Part, E)>> {
            let factor = multiple(sum, self.totals.get(component)?)?;
            Some(factor.map(|factor| (Part::Total(component), factor)))
        };
        if fit.charge.is_zero()
            && let Some(own) = fit.masses.iter().position(|factor| !factor.is_zero())
            && let Some(found) = total(own)?
        {
            return Some(Some(found));
        }
        if let [(part, coefficient)] = sum.as_slice() {
            return Some(Some((*part, coefficient.clone())));
        }
        for component in 1..self.totals.len() {
            if let Some(found) = total(component)? {
                return Some(Some(found));
            }
        }
        Some(None)
    }

    /// Plain amounts against the number that is missing.
    fn in_numbers(&self, missing: &Sum<E>, found: &mut Vec<Difference>) -> Option<()> {
        let mut parts = Vec::new();
        for (part, coefficient) in missing {
            let Some(value) = self.recipe.value(*part) else { return Some(()) };
            parts.push((*part, coefficient.ratio()?, coefficient.ratio()?.to_f64()? * value));
        }
        let needed: f64 = parts.iter().map(|(.., value)| value).sum();
        let written: f64 = self.amounts.iter().map(|(_, factor, value, _)| factor * value).sum();
        let digits: f64 = self.amounts.iter().map(|(_, factor, _, half)| factor.abs() * half).sum();
        // A hair of room for a decimal fraction that lies just on the border.
        let size: f64 = parts.iter().map(|(.., value)| value.abs()).sum::<f64>()
            + self.amounts.iter().map(|(_, factor, value, _)| (factor * value).abs()).sum::<f64>();
        let room = digits + 1e-9 * digits + 1e-13 * size;
        let gap = needed - written;
        // Not a number is no amount that agrees.
        if gap.abs() <= room {
            return Some(());
        }
        let many = self.amounts.len() > 1 || parts.is_empty();
        if many
            && let Some((index, ..)) = self
                .amounts
                .iter()
                .find(|(_, factor, value, _)| (gap + factor * value).abs() <= room)
        {
            found.push(Difference::ForeignTerm { index: *index });
            return Some(());
        }
        if parts.len() > 1
            && let Some((part, coefficient, _)) =
                parts.iter().find(|(.., value)| (gap - value).abs() <= room)
        {
            let (coefficient, side) = placed(*coefficient);
            let term = TermOf::Constant(*part);
            found.push(Difference::MissingTerm { term, coefficient, side });
            return Some(());
        }
        // The amount that has least to change.
        let change = |&(_, factor, value, _): &(usize, f64, f64, f64)| (gap / factor / value).abs();
        let least = self.amounts.iter().min_by(|one, two| change(one).total_cmp(&change(two)));
        if let Some((index, factor, value, _)) = least {
            let should_be = value + gap / factor;
            found.push(Difference::WrongAmount { index: *index, should_be });
        }
        Some(())
    }
}

fn missing_term<E: Exact>(part: Part, coefficient: &E) -> Option<Difference> {
    let (coefficient, side) = placed(coefficient.ratio()?);
    Some(Difference::MissingTerm { term: TermOf::Constant(part), coefficient, side })
}

/// `sum −= factor · other`
fn subtract<E: Exact>(sum: &mut Sum<E>, other: &Sum<E>, factor: &E) -> Option<()> {
    for (part, coefficient) in other {
        let less = coefficient.times(factor)?;
        match sum.binary_search_by_key(part, |(part, _)| *part) {
            Ok(at) => sum[at].1 = sum[at].1.minus(&less)?,
            Err(at) => sum.insert(at, (*part, E::zero().minus(&less)?)),
        }
    }
    sum.retain(|(_, coefficient)| !coefficient.is_zero());
    Some(())
}

/// The factor that makes one sum of the other, where there is one. The outer none: a
/// number did not fit.
fn multiple<E: Exact>(sum: &Sum<E>, of: &Sum<E>) -> Option<Option<E>> {
    let (Some((first, own)), Some((also, other))) = (sum.first(), of.first()) else {
        return Some(None);
    };
    if first != also || sum.len() != of.len() {
        return Some(None);
    }
    let factor = own.over(other)?;
    for ((part, coefficient), (of_part, of_coefficient)) in sum.iter().zip(of) {
        if part != of_part || *coefficient != of_coefficient.times(&factor)? {
            return Some(None);
        }
    }
    Some(Some(factor))
}
