//! The combination of implied balances that a written one is nearest to.
//!
//! Given how often the charge balance is in it, a species with one component besides
//! the proton says how often the mass balance of that component must be: where a term
//! was forgotten or slipped, its species is outvoted by the others.

use num_rational::Rational64;

use super::view::{Fit, View};
use super::{Difference, Made, Verdict, WrittenTerm};
use crate::balance::BalanceKind;
use crate::balance::proton::ProtonCondition;
use crate::balance::recipe::Recipe;
use crate::problem::exact::Exact;
use crate::problem::stoichiometry::Stoichiometry;

/// Multiples of the charge balance that are tried.
const CHARGES: usize = 4;
/// Multiples of one mass balance that are tried.
const FACTORS: usize = 3;
/// Combinations tried one by one; where there are more, components take turns.
const COMBINATIONS: usize = 256;

pub(super) fn verdict<E: Exact>(
    kind: BalanceKind,
    written: &[WrittenTerm],
    stoichiometry: &Stoichiometry,
    recipe: &Recipe,
    condition: Option<&ProtonCondition>,
) -> Option<Verdict> {
    let view = View::<E>::new(written, stoichiometry, recipe)?;
    let components = stoichiometry.components.len();
    let mut search = Search { view: &view, best: None };
    match kind {
        BalanceKind::Charge => {
            let mut votes = Votes::default();
            for (sum, charge) in view.sums.iter().zip(&view.charges) {
                votes.add_ratio(sum, charge)?;
            }
            for charge in votes.ranked(view.sums.len(), &E::of(1.into())?) {
                search.offer(Fit { charge, masses: vec![E::zero(); components] }, 0)?;
            }
        }
        BalanceKind::Component(component) => {
            let mut votes = Votes::default();
            for (sum, row) in view.sums.iter().zip(&view.rows) {
                if let Some((_, count)) = row.iter().find(|(column, _)| *column == component) {
                    votes.add_ratio(sum, count)?;
                }
            }
            let total = view.constants.factor_of_total(component)?;
            votes.add_ratio(&E::zero().minus(&total)?, &E::of(1.into())?)?;
            for factor in votes.ranked(view.sums.len() + 1, &E::of(1.into())?) {
                let mut masses = vec![E::zero(); components];
                *masses.get_mut(component)? = factor;
                search.offer(Fit { charge: E::zero(), masses }, 0)?;
            }
        }
        BalanceKind::Protons => search.protons(components, condition)?,
    }
    let Best { fit, differences, level_off } = search.best?;
    let mut masses = Vec::new();
    for (component, factor) in fit.masses.iter().enumerate() {
        if !factor.is_zero() {
            masses.push((component, factor.ratio()?));
        }
    }
    let made = Made { charge: fit.charge.ratio()?, masses };
    Some(match (differences.is_empty(), level_off) {
        (true, 0) => Verdict::Right(made),
        (true, _) => Verdict::OtherLevel(made),
        (false, _) => Verdict::Wrong { nearest: made, differences },
    })
}

struct Best<E> {
    fit: Fit<E>,
    differences: Vec<Difference>,
    /// Components that are at another level than the condition's.
    level_off: usize,
}

struct Search<'a, E> {
    view: &'a View<'a, E>,
    best: Option<Best<E>>,
}

impl<E: Exact> Search<'_, E> {
    /// Keeps a combination where it is nearer than those before it.
    fn offer(&mut self, fit: Fit<E>, level_off: usize) -> Option<bool> {
        let differences = self.view.differences(&fit)?;
        let nearer = self.best.as_ref().is_none_or(|best| {
            (differences.len(), level_off) < (best.differences.len(), best.level_off)
        });
        if nearer {
            self.best = Some(Best { fit, differences, level_off });
        }
        Some(nearer)
    }

    fn is_exact(&self) -> bool {
        self.best.as_ref().is_some_and(|best| best.differences.is_empty())
    }

    fn protons(&mut self, components: usize, condition: Option<&ProtonCondition>) -> Option<()> {
        let one = E::of(1.into())?;
        // How often each mass balance is in the condition, for one charge balance.
        let mut level = vec![E::zero(); components];
        if let Some(condition) = condition {
            let scale = E::of(Rational64::from(condition.charge_factor))?;
            for (component, factor) in &condition.mass_factors {
                let share = E::of(*factor)?.over(&scale)?;
                *level.get_mut(*component)? = E::zero().minus(&share)?;
            }
        }
        for charge in self.charges(components, &one)? {
            let own: Vec<E> =
                level.iter().map(|factor| factor.times(&charge)).collect::<Option<_>>()?;
            let off = |masses: &[E]| masses.iter().zip(&own).filter(|(a, b)| a != b).count();
            let mut options: Vec<Vec<E>> = vec![vec![E::zero()]];
            for (component, own_factor) in own.iter().enumerate().skip(1) {
                let mut votes = Votes::default();
                for (species, row) in self.view.rows.iter().enumerate() {
                    if let [(column, count)] = row.as_slice()
                        && *column == component
                    {
                        let implied = charge.times(&self.view.charges[species])?;
                        let rest = self.view.sums[species].minus(&implied)?;
                        votes.add(rest.over(count)?);
                    }
                }
                // The condition's own level breaks ties, and stands in for no vote.
                votes.add_behind(own_factor.clone());
                options.push(votes.ranked(FACTORS, &E::zero()));
            }
            let first: Vec<E> = options.iter().map(|o| o[0].clone()).collect();
            self.offer(Fit { charge: charge.clone(), masses: own.clone() }, 0)?;
            self.offer(Fit { charge: charge.clone(), masses: first.clone() }, off(&first))?;
            if self.is_exact() {
                return Some(());
            }
            let count = options.iter().try_fold(1_usize, |n, o| n.checked_mul(o.len()));
            if count.is_some_and(|count| count <= COMBINATIONS) {
                let mut picked = vec![0; options.len()];
                while let Some(turn) =
                    (0..picked.len()).rev().find(|i| picked[*i] + 1 < options[*i].len())
                {
                    picked[turn] += 1;
                    picked[turn + 1..].fill(0);
                    let masses: Vec<E> =
                        options.iter().zip(&picked).map(|(o, at)| o[*at].clone()).collect();
                    let level_off = off(&masses);
                    self.offer(Fit { charge: charge.clone(), masses }, level_off)?;
                }
            }
            self.take_turns(&charge, &own)?;
        }
        Some(())
    }

    /// Betters the best combination with this charge, one component at a time, by what
    /// every species that holds the component says of it, the others as they are.
    fn take_turns(&mut self, charge: &E, own: &[E]) -> Option<()> {
        for _ in 0..own.len() {
            let Some(best) = self.best.as_ref().filter(|best| best.fit.charge == *charge) else {
                return Some(());
            };
            let mut masses = best.fit.masses.clone();
            let mut bettered = false;
            for component in 1..own.len() {
                let mut votes = Votes::default();
                for (species, row) in self.view.rows.iter().enumerate() {
                    if let Some((_, count)) = row.iter().find(|(column, _)| *column == component) {
                        let fit = Fit { charge: charge.clone(), masses: masses.clone() };
                        let implied = self.view.implied(&fit, species)?;
                        let more = self.view.sums[species].minus(&implied)?.over(count)?;
                        votes.add(masses[component].plus(&more)?);
                    }
                }
                votes.add_behind(own[component].clone());
                for factor in votes.ranked(FACTORS, &E::zero()) {
                    let mut other = masses.clone();
                    other[component] = factor;
                    let off = other.iter().zip(own).filter(|(a, b)| a != b).count();
                    let fit = Fit { charge: charge.clone(), masses: other.clone() };
                    if self.offer(fit, off)? {
                        masses = other;
                        bettered = true;
                    }
                }
            }
            if !bettered || self.is_exact() {
                break;
            }
        }
        Some(())
    }

    /// How often the charge balance may be in a proton balance: what H+ and OH- say,
    /// and what two forms of one component say together.
    fn charges(&self, components: usize, one: &E) -> Option<Vec<E>> {
        let view = self.view;
        let mut votes = Votes::default();
        let mut forms: Vec<Vec<(usize, &E)>> = vec![Vec::new(); components];
        for (species, row) in view.rows.iter().enumerate() {
            match row.as_slice() {
                [] => votes.add_ratio(&view.sums[species], &view.charges[species])?,
                [(component, count)] => forms.get_mut(*component)?.push((species, count)),
                _ => {}
            }
        }
        for forms in forms {
            for pair in forms.windows(2) {
                let [(one, one_count), (two, two_count)] = pair else { continue };
                if one_count == two_count {
                    let rise = view.charges[*one].minus(&view.charges[*two])?;
                    let more = view.sums[*one].minus(&view.sums[*two])?;
                    votes.add_ratio(&more, &rise)?;
                }
            }
        }
        Some(votes.ranked(CHARGES, one))
    }
}

/// Values with how many speak for each.
struct Votes<E>(Vec<(E, usize)>);

impl<E> Default for Votes<E> {
    fn default() -> Self {
        Votes(Vec::new())
    }
}

impl<E: Exact> Votes<E> {
    fn add(&mut self, value: E) {
        match self.0.iter_mut().find(|(known, _)| *known == value) {
            Some((_, votes)) => *votes += 1,
            None => self.0.push((value, 1)),
        }
    }

    /// A value that counts only where no other has more votes.
    fn add_behind(&mut self, value: E) {
        match self.0.iter().position(|(known, _)| *known == value) {
            Some(at) => {
                let known = self.0.remove(at);
                self.0.insert(0, known);
            }
            None => self.0.push((value, 0)),
        }
    }

    /// A quotient, where neither number is zero.
    fn add_ratio(&mut self, over: &E, under: &E) -> Option<()> {
        if !over.is_zero() && !under.is_zero() {
            self.add(over.over(under)?);
        }
        Some(())
    }

    /// The values by falling votes, `most` at most; a given one where there is none.
    fn ranked(mut self, most: usize, fallback: &E) -> Vec<E> {
        self.0.sort_by_key(|(_, votes)| std::cmp::Reverse(*votes));
        self.0.truncate(most.max(1));
        if self.0.is_empty() {
            self.0.push((fallback.clone(), 0));
        }
        self.0.into_iter().map(|(value, _)| value).collect()
    }
}
