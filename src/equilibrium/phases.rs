//! Which of the solids that may form do form.
//!
//! A solid that is there holds `Σ row · x` at its solubility and brings an amount of itself,
//! as any held phase does; one that is not there must not be supersaturated. So a set of
//! solids is guessed, the system with those held is solved, and the guess mended: the solid
//! of which there would be less than nothing is dropped, else the most supersaturated one is
//! added. One whose row depends on phases that are there already can only take the place of
//! one of them: of the one that its forming uses up first.
//!
//! With ideal activities these are the optimality conditions of a convex problem, so that a
//! set that meets them is the only one, but for solids of exactly equal solubility.

use std::collections::HashSet;
use std::sync::atomic::AtomicBool;

use num_rational::Rational64;
use num_traits::{Signed, ToPrimitive};

use super::solve::{needs_activity, solve};
use super::system::{Answer, Candidate, Failure, Fixed, IonicStrength, System};
use crate::problem::elimination::{Solution, express};

mod strength;

/// A solid is supersaturated above this ln of ion product over solubility product: what
/// rounding leaves of an exponent of a few hundred stays below it.
const SUPERSATURATED: f64 = 1e-10;
/// An amount this far below nothing, as a share of the smallest total that it takes part
/// in, is nothing.
const NOTHING: f64 = 1e-13;
/// The same as a share of the largest, once the search has come back to where it was.
const NEARLY_NOTHING: f64 = 1e-12;
/// Sets of solids tried at most, for each candidate and beyond.
const MOST_SETS: usize = 20;

/// A solved state with the solids that formed.
#[derive(Clone, Debug, PartialEq)]
pub struct Assemblage {
    /// The system asked for, those of its candidates that formed put behind its held phases:
    /// the answer is one to this system.
    pub system: System,
    pub answer: Answer,
    /// Of each candidate, where it stands among the held phases; none where it did not form.
    pub formed: Vec<Option<usize>>,
}

/// A state that is thought to be near, and which candidates had formed in it.
#[derive(Clone, Copy, Debug)]
pub struct Near<'a> {
    pub answer: &'a Answer,
    pub formed: &'a [Option<usize>],
}

/// Finds the state in which every row closes, no candidate is supersaturated, and there is
/// more than nothing of those that formed.
///
/// # Errors
/// Those of [`solve`]; and [`Failure::Endless`] where what is held keeps a candidate
/// supersaturated however much of it forms.
pub fn equilibrate(
    system: System,
    near: Option<Near>,
    cancel: &AtomicBool,
) -> Result<Assemblage, Failure> {
    if system.candidates.is_empty() {
        let answer = solve(&system, near.map(|near| near.answer), cancel)?;
        return Ok(Assemblage { system, answer, formed: Vec::new() });
    }
    let mut search = Assembling::new(&system);
    if let Some(near) = near.filter(|near| near.formed.len() == system.candidates.len()) {
        search.there = present(near.formed);
        search.last = Some(near.answer.clone());
        match search.settle(cancel) {
            Ok(()) if !search.is_tied() => return search.finish(),
            Err(Failure::Cancelled) => return Err(Failure::Cancelled),
            // What forms must not hang on what was looked at before.
            _ => search = Assembling::new(&system),
        }
    }
    match search.settle(cancel) {
        Err(Failure::NotConverged { .. })
            if needs_activity(&system) && system.ionic_strength == IonicStrength::Computed => {}
        result => return result.and_then(|()| search.finish()),
    }
    let near = strength::near_own_strength(&system, cancel)?;
    let mut search = Assembling::new(&system);
    search.there = present(&near.formed);
    search.last = Some(near.answer);
    search.settle(cancel)?;
    search.finish()
}

/// The system with those of its candidates that formed behind its held phases.
pub fn assembled(mut system: System, formed: &[Option<usize>]) -> System {
    let mut there: Vec<(usize, usize)> =
        formed.iter().enumerate().filter_map(|(c, place)| Some(((*place)?, c))).collect();
    there.sort_unstable();
    let held = there.iter().filter_map(|&(_, c)| Some(system.candidates.get(c)?.held()));
    let held: Vec<Fixed> = held.collect();
    system.fixed.extend(held);
    system
}

/// The candidates that are there.
fn present(formed: &[Option<usize>]) -> Vec<usize> {
    (0..formed.len()).filter(|&c| formed[c].is_some()).collect()
}

/// Whether another answer to an assemblage's system is a state of what was asked for too:
/// nothing negative and nothing supersaturated.
pub fn is_settled(system: &System, formed: &[Option<usize>], answer: &Answer) -> bool {
    system.candidates.iter().zip(formed).all(|(candidate, at)| match at {
        Some(k) => answer.amounts.get(*k).is_some_and(|n| *n <= 0.0),
        None => ln_saturation(candidate, answer).is_none_or(|ln| ln <= SUPERSATURATED),
    })
}

/// ln of ion product over solubility product; none where something it is made of is absent,
/// so that it cannot form.
fn ln_saturation(candidate: &Candidate, answer: &Answer) -> Option<f64> {
    let mut ln = candidate.water * answer.ln_water - candidate.ln_value;
    for (j, n) in &candidate.row {
        let component = *answer.ln_components.get(*j)?;
        if !component.is_finite() {
            return None;
        }
        ln += n.to_f64()? * component;
    }
    Some(ln)
}

struct Assembling<'a> {
    asked: &'a System,
    /// The candidates that are there, in the order in which they were added.
    there: Vec<usize>,
    /// `asked` with those behind its held phases.
    system: System,
    last: Option<Answer>,
    /// The sets that were solved.
    seen: HashSet<Vec<usize>>,
    /// Whether a set has come back: then the lowest number is taken first in every choice,
    /// which keeps to no circle.
    careful: bool,
    iterations: u32,
}

impl<'a> Assembling<'a> {
    fn new(asked: &'a System) -> Self {
        Self {
            asked,
            there: Vec::new(),
            system: asked.clone(),
            last: None,
            seen: HashSet::new(),
            careful: false,
            iterations: 0,
        }
    }

    fn settle(&mut self, cancel: &AtomicBool) -> Result<(), Failure> {
        let most = MOST_SETS * (self.asked.candidates.len() + 2);
        let mut widened = false;
        for _ in 0..most {
            let mut set = self.there.clone();
            set.sort_unstable();
            self.careful |= !self.seen.insert(set);
            match self.solve(cancel) {
                Ok(answer) => self.last = Some(answer),
                // What cannot be dissolved may be there as a solid.
                Err(Failure::Infeasible { .. }) if !widened && self.widen() => {
                    widened = true;
                    continue;
                }
                Err(other) => return Err(other),
            }
            if let Some(place) = self.negative() {
                self.there.remove(place);
            } else if let Some(candidate) = self.supersaturated() {
                self.add(candidate)?;
            } else {
                return Ok(());
            }
        }
        let residual = self.last.as_ref().map_or(1.0, |answer| answer.residual);
        Err(Failure::NotConverged { residual, iterations: self.iterations })
    }

    /// The answer with the present solids held, from the last one where that leads there.
    fn solve(&mut self, cancel: &AtomicBool) -> Result<Answer, Failure> {
        self.system.fixed.truncate(self.asked.fixed.len());
        let held = self.there.iter().map(|&c| self.asked.candidates[c].held());
        self.system.fixed.extend(held);
        // With activity coefficients a set can have more than one state; the one that a circle
        // came by is not the one to go on from.
        let start = self.last.as_ref().filter(|_| !self.careful);
        let mut result = solve(&self.system, start, cancel);
        if start.is_some() && matches!(result, Err(Failure::NotConverged { .. })) {
            result = solve(&self.system, None, cancel);
        }
        if let Ok(answer) = &mut result {
            self.iterations += answer.iterations;
            answer.iterations = self.iterations;
        }
        result
    }

    /// Adds every candidate that is independent of what is there; whether there was one.
    fn widen(&mut self) -> bool {
        let before = self.there.len();
        for c in 0..self.asked.candidates.len() {
            if !self.there.contains(&c) && self.dependence(c).is_none() {
                self.there.push(c);
            }
        }
        self.last = None;
        self.there.len() > before
    }

    fn amount(&self, place: usize) -> f64 {
        let amounts = self.last.as_ref().map(|answer| &answer.amounts);
        -amounts.and_then(|n| n.get(self.asked.fixed.len() + place)).copied().unwrap_or(0.0)
    }

    /// Which of the solids there is least of, and less than nothing.
    fn negative(&self) -> Option<usize> {
        let sizes = self.sizes();
        let below = (0..self.there.len()).filter_map(|place| {
            let row = &self.asked.candidates[self.there[place]].row;
            let each = row.iter().map(|(j, n)| sizes[*j] / n.to_f64().unwrap_or(1.0).abs());
            let least = if self.careful {
                -NEARLY_NOTHING * each.fold(0.0, f64::max)
            } else {
                -NOTHING * each.fold(f64::INFINITY, f64::min)
            };
            let amount = self.amount(place);
            (amount < least).then_some((place, amount))
        });
        if self.careful {
            return below.map(|(place, _)| place).min_by_key(|&place| self.there[place]);
        }
        below.min_by(|a, b| a.1.total_cmp(&b.1)).map(|(place, _)| place)
    }

    /// The sum of the terms of each component's row, as amounts.
    fn sizes(&self) -> Vec<f64> {
        let mut sizes: Vec<f64> = self.asked.totals.iter().map(|total| total.abs()).collect();
        let Some(answer) = &self.last else { return sizes };
        for (species, c) in self.asked.species.iter().zip(&answer.concentrations) {
            for (j, n) in &species.row {
                sizes[*j] += n.to_f64().unwrap_or(0.0).abs() * c;
            }
        }
        for (fixed, amount) in self.system.fixed.iter().zip(&answer.amounts) {
            for (j, n) in &fixed.supply {
                sizes[*j] += (n.to_f64().unwrap_or(0.0) * amount).abs();
            }
        }
        sizes
    }

    fn saturations(&self) -> impl Iterator<Item = (usize, f64)> {
        let answer = self.last.as_ref();
        (0..self.asked.candidates.len())
            .filter(|c| !self.there.contains(c))
            .filter_map(move |c| Some((c, ln_saturation(&self.asked.candidates[c], answer?)?)))
    }

    fn supersaturated(&self) -> Option<usize> {
        let mut above = self.saturations().filter(|(_, ln)| *ln > SUPERSATURATED);
        if self.careful {
            return above.next().map(|(c, _)| c);
        }
        above.max_by(|a, b| a.1.total_cmp(&b.1)).map(|(c, _)| c)
    }

    /// Whether a solid that is not there might as well be in the place of one that is.
    fn is_tied(&self) -> bool {
        self.saturations().any(|(_, ln)| ln.abs() <= 10.0 * SUPERSATURATED)
    }

    /// How often each phase that is there, the held ones first, makes up this candidate's
    /// row; none where they do not.
    fn dependence(&self, candidate: usize) -> Option<Vec<Rational64>> {
        let candidates = &self.asked.candidates;
        let held = self.asked.fixed.iter().map(|fixed| fixed.row.as_slice());
        let there = self.there.iter().map(|&c| candidates[c].row.as_slice());
        let rows: Vec<&[(usize, Rational64)]> = held.chain(there).collect();
        match express(&candidates[candidate].row, &rows) {
            Ok(Solution::Unique(values) | Solution::Many { particular: values, .. }) => {
                Some(values)
            }
            Ok(Solution::None { .. }) | Err(_) => None,
        }
    }

    fn add(&mut self, candidate: usize) -> Result<(), Failure> {
        let Some(makes) = self.dependence(candidate) else {
            self.there.push(candidate);
            return Ok(());
        };
        // As it forms, each of the others gives up or takes on its share.
        let stated = self.asked.fixed.len();
        let lasts = |place: usize| {
            let share = makes.get(stated + place).filter(|share| share.is_positive())?;
            Some((place, self.amount(place).max(0.0) / share.to_f64()?))
        };
        let used_up = (0..self.there.len()).filter_map(lasts).min_by(|a, b| {
            let by_number = self.there[a.0].cmp(&self.there[b.0]);
            a.1.total_cmp(&b.1).then(by_number)
        });
        match used_up {
            Some((place, _)) => {
                self.there[place] = candidate;
                Ok(())
            }
            None => {
                let fixed =
                    (0..stated).filter(|&k| makes.get(k).is_some_and(|n| *n != 0.into())).collect();
                Err(Failure::Endless { candidate, fixed })
            }
        }
    }

    fn finish(self) -> Result<Assemblage, Failure> {
        let Some(mut answer) = self.last else {
            return Err(Failure::NotConverged { residual: 1.0, iterations: self.iterations });
        };
        let stated = self.asked.fixed.len();
        let amount = |place: usize| answer.amounts.get(stated + place).copied().unwrap_or(0.0);
        // In their own order, whichever was found first; and what rounding leaves below nothing
        // is nothing.
        let mut there: Vec<(usize, f64)> =
            self.there.iter().enumerate().map(|(place, &c)| (c, amount(place).min(0.0))).collect();
        there.sort_unstable_by_key(|&(c, _)| c);
        let mut formed = vec![None; self.asked.candidates.len()];
        answer.amounts.truncate(stated);
        for (place, &(c, amount)) in there.iter().enumerate() {
            formed[c] = Some(stated + place);
            answer.amounts.push(amount);
        }
        Ok(Assemblage { system: assembled(self.asked.clone(), &formed), answer, formed })
    }
}
