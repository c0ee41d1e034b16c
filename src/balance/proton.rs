//! The proton condition: a combination of the charge balance and the mass balances,
//! taken relative to the forms that were put in.
//!
//! With λ from `Σ_k λ_k m_rk = z_r` for every reference form r (m its row over the
//! components other than the proton, z its charge), the condition is
//! `D (charge balance − Σ_k λ_k mass balance_k)`, D the least whole number that clears
//! all fractions. Reference forms get coefficient zero; every other species gets the
//! protons it holds above or below them. Strong acids and bases stand as constants.

use num_integer::Integer;
use num_rational::{BigRational, Rational64};
use num_traits::ToPrimitive;

use super::recipe::{Recipe, Row};
use super::{Balance, BalanceKind, Part};
use crate::problem::elimination::{SparseRow, TooLarge, express, independent_rows};
use crate::problem::exact::{Exact, escalate};
use crate::problem::stoichiometry::Stoichiometry;

mod level;

/// The condition with its derivation.
#[derive(Clone, Debug, PartialEq)]
pub struct ProtonCondition {
    /// Whole coefficients; species above the reference level have positive ones.
    pub balance: Balance,
    /// D: how often the charge balance is taken.
    pub charge_factor: i64,
    /// D λ_k for each component, none of them zero: how often its mass balance is
    /// taken away.
    pub mass_factors: Vec<(usize, Rational64)>,
    /// One for each component but the proton.
    pub references: Vec<Reference>,
    /// Forms that were added too, and lie at another level than the references.
    pub alternatives: Vec<Alternative>,
}

#[derive(Clone, Debug, PartialEq)]
pub struct Reference {
    pub form: ReferenceForm,
    pub reason: Reason,
}

#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum ReferenceForm {
    Species(usize),
    /// A held phase or species, by its index in the recipe.
    Held(usize),
}

/// Why a form is a reference.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Reason {
    Held,
    /// Asked for.
    Chosen,
    /// Put in, so many mol per litre or kilogram.
    Added(f64),
    /// Nothing says in which form its component was put in; with this one the constant
    /// is smallest.
    SmallestConstant,
}

/// A form of the recipe that is no reference. Taking it instead, by naming it to
/// [`proton_condition`], gives an equivalent condition.
#[derive(Clone, Debug, PartialEq)]
pub struct Alternative {
    pub species: usize,
    /// mol per litre or kilogram.
    pub amount: f64,
    /// The reference whose place it would take, by its index in `references`.
    pub instead_of: usize,
    /// Protons that it holds above the reference level; its coefficient over D.
    pub protons: Rational64,
}

/// The proton condition of a recipe. `chosen` species come before those that the recipe
/// adds; the largest amount comes first otherwise.
pub fn proton_condition(
    stoichiometry: &Stoichiometry,
    recipe: &Recipe,
    chosen: &[usize],
) -> Result<ProtonCondition, TooLarge> {
    let moieties = stoichiometry.components.len().saturating_sub(1);
    let species_row = |index: usize| moiety_row(&stoichiometry.species[index].row);
    let added = added_forms(stoichiometry, recipe);

    let mut candidates: Vec<(Row, i32, Reference)> = Vec::new();
    for (index, held) in recipe.held.iter().enumerate() {
        let reference = Reference { form: ReferenceForm::Held(index), reason: Reason::Held };
        candidates.push((moiety_row(&held.brings), held.charge, reference));
    }
    let chosen = chosen.iter().filter(|index| **index < stoichiometry.species.len());
    let wanted = chosen.map(|index| (*index, Reason::Chosen));
    for (index, reason) in wanted.chain(added.iter().map(|(i, n)| (*i, Reason::Added(*n)))) {
        let reference = Reference { form: ReferenceForm::Species(index), reason };
        candidates.push((species_row(index), stoichiometry.species[index].charge, reference));
    }
    let rows: Vec<SparseRow> = candidates.iter().map(|(row, ..)| row.as_slice()).collect();
    let mut forms: Vec<_> =
        independent_rows(&rows).into_iter().map(|index| candidates[index].clone()).collect();
    if forms.len() < moieties {
        level::complete(&mut forms, stoichiometry, recipe)?;
    }

    let rows: Vec<SparseRow> = forms.iter().map(|(row, ..)| row.as_slice()).collect();
    let charges: Vec<Rational64> =
        forms.iter().map(|(_, z, _)| Rational64::from(*z as i64)).collect();
    // A component that stands in no species and no form leaves its λ free: zero then.
    let lambdas = level::solve_lambdas(&rows, &charges, moieties)?;
    let condition = escalate(
        || combine::<Rational64>(stoichiometry, recipe, &lambdas),
        || combine::<BigRational>(stoichiometry, recipe, &lambdas),
    )?;
    let (balance, charge_factor, mass_factors) = condition;

    let mut alternatives = Vec::new();
    for (index, amount) in added {
        let at = balance.terms.iter().find(|(species, _)| *species == index);
        let Some((_, coefficient)) = at else { continue };
        let replaced = express(&species_row(index), &rows)?
            .unique()
            .and_then(|factors| factors.iter().position(|factor| *factor != Rational64::default()));
        if let Some(instead_of) = replaced {
            let protons = *coefficient / charge_factor;
            alternatives.push(Alternative { species: index, amount, instead_of, protons });
        }
    }
    let references = forms.into_iter().map(|(_, _, reference)| reference).collect();
    Ok(ProtonCondition { balance, charge_factor, mass_factors, references, alternatives })
}

/// A row without the proton, with columns moved down by one.
fn moiety_row(row: &Row) -> Row {
    row.iter().filter(|(column, _)| *column > 0).map(|(column, n)| (column - 1, *n)).collect()
}

/// The species that the reagents split into, the largest amount first.
fn added_forms(stoichiometry: &Stoichiometry, recipe: &Recipe) -> Vec<(usize, f64)> {
    let mut amounts: Vec<(usize, f64)> = Vec::new();
    for reagent in &recipe.reagents {
        for (species, count) in &reagent.forms {
            let amount = reagent.amount.unwrap_or(0.0) * count.to_f64().unwrap_or(0.0);
            match amounts.iter_mut().find(|(index, _)| index == species) {
                Some((_, sum)) => *sum += amount,
                None if *species < stoichiometry.species.len() => amounts.push((*species, amount)),
                None => {}
            }
        }
    }
    amounts.sort_by(|one, two| two.1.total_cmp(&one.1).then(one.0.cmp(&two.0)));
    amounts
}

type Combined = (Balance, i64, Vec<(usize, Rational64)>);

/// `D (charge − Σ λ_k mass_k)`, exactly.
fn combine<E: Exact>(
    stoichiometry: &Stoichiometry,
    recipe: &Recipe,
    lambdas: &[Rational64],
) -> Option<Combined> {
    let exact: Vec<E> = lambdas.iter().map(|lambda| E::of(*lambda)).collect::<Option<_>>()?;
    let mut terms = Vec::new();
    for (index, species) in stoichiometry.species.iter().enumerate() {
        let mut coefficient = E::of(Rational64::from(i64::from(species.charge)))?;
        for (column, count) in species.row.iter().filter(|(column, _)| *column > 0) {
            let share = exact.get(column - 1)?.times(&E::of(*count)?)?;
            coefficient = coefficient.minus(&share)?;
        }
        if !coefficient.is_zero() {
            terms.push((index, coefficient.ratio()?));
        }
    }
    let mut totals = Vec::new();
    for (index, lambda) in exact.iter().enumerate() {
        totals.push((Part::Total(index + 1), E::zero().minus(lambda)?));
        for (part, n) in recipe.precipitated_in(index + 1) {
            totals.push((part, lambda.times(&E::of(n)?)?));
        }
    }
    let parts = recipe.written_out(&totals)?;
    let mut parts: Vec<(Part, Rational64)> =
        parts.into_iter().map(|(part, n)| Some((part, n.ratio()?))).collect::<Option<_>>()?;

    let mut factor = 1_i64;
    for (_, coefficient) in &terms {
        factor = checked_lcm(factor, *coefficient.denom())?;
    }
    for (_, coefficient) in &parts {
        factor = checked_lcm(factor, *coefficient.denom())?;
    }
    let scale = Rational64::from(factor);
    for (_, coefficient) in &mut terms {
        *coefficient = coefficient.times(&scale)?;
    }
    for (_, coefficient) in &mut parts {
        *coefficient = coefficient.times(&scale)?;
    }
    let mut mass_factors = Vec::new();
    for (index, lambda) in lambdas.iter().enumerate() {
        let taken = lambda.times(&scale)?;
        if taken != Rational64::default() {
            mass_factors.push((index + 1, taken));
        }
    }
    let balance = Balance { kind: BalanceKind::Protons, terms, parts };
    Some((balance, factor, mass_factors))
}

fn checked_lcm(one: i64, two: i64) -> Option<i64> {
    (one / one.gcd(&two)).checked_mul(two)
}
