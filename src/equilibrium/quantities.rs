//! Quantities of the solved state, as a file asks for them.

use std::f64::consts::LN_10;

use num_traits::ToPrimitive;

use super::build::{ln_formation, water_taken};
use super::phases::Assemblage;
use super::sensitivity;
use super::system::{Answer, System};
use crate::chemistry::constant::volts_per_pe;
use crate::problem::model::{
    Presence, Problem, Sought, Target, WrittenBalance, WrittenTerm, WrittenWhat,
};
use crate::problem::scope::WATER;

/// A problem with its numbers and its answer.
#[derive(Clone, Debug)]
pub struct Solved {
    /// The system that `answer` is one to: the solids that formed stand behind its held phases.
    pub system: System,
    pub answer: Answer,
    /// Of each solid that may form, where it stands among the held phases; none where it did
    /// not.
    pub formed: Vec<Option<usize>>,
    /// pH and ionic strength of other states that meet the same equations; none for most
    /// problems.
    pub others: Vec<(f64, f64)>,
    /// What was found for the targets of the problem; none where it has none.
    pub dosed: Option<Dosed>,
}

/// Amounts that meet targets, mol per litre or kilogram of the water treated.
#[derive(Clone, Debug, PartialEq)]
pub struct Dosed {
    /// The targets that they were found for.
    pub targets: Vec<Target>,
    /// One for each target.
    pub amounts: Vec<f64>,
    /// Others that meet them too.
    pub others: Vec<Vec<f64>>,
}

impl From<Assemblage> for Solved {
    fn from(Assemblage { system, answer, formed }: Assemblage) -> Self {
        Solved { system, answer, formed, others: Vec::new(), dosed: None }
    }
}

impl Solved {
    pub fn ph(&self) -> f64 {
        self.answer.ph()
    }

    /// ln activity of a species of the scope: for a gas, of its pressure in atm; for a
    /// solid, of its degree of saturation. None where it does not belong.
    pub fn ln_activity(&self, problem: &Problem, species: usize) -> Option<f64> {
        let made = problem.scope.belonging.made[species].as_ref()?;
        if species == WATER {
            return Some(self.answer.ln_water);
        }
        let sum: f64 = made
            .row
            .iter()
            .map(|&(j, n)| n.to_f64().unwrap_or(0.0) * self.answer.ln_components[j])
            .sum();
        let ln_water = self.answer.ln_water;
        // Most models leave it at one.
        let water = if ln_water == 0.0 { 0.0 } else { water_taken(problem, species) * ln_water };
        Some(ln_formation(problem, species) + sum + water)
    }

    /// How many of the held phases are as the problem states them.
    fn stated(&self) -> usize {
        self.system.fixed.len() - self.formed.iter().flatten().count()
    }

    /// The system as it was asked, without the solids that formed.
    pub fn asked(&self) -> System {
        let mut asked = self.system.clone();
        asked.fixed.truncate(self.stated());
        asked
    }

    /// Whether this is the answer to a system.
    pub fn answers(&self, system: &System) -> bool {
        let own = &self.system;
        let System { species, totals, fixed, candidates, activity, ionic_strength } = system;
        own.species == *species
            && own.totals == *totals
            && own.fixed.get(..self.stated()) == Some(fixed)
            && own.candidates == *candidates
            && own.activity == *activity
            && own.ionic_strength == *ionic_strength
    }

    /// Whether a system has the same components, species and phases, whatever their numbers.
    pub fn is_shaped_like(&self, system: &System) -> bool {
        let shape = |system: &System, fixed: usize| {
            (system.totals.len(), system.species.len(), fixed, system.candidates.len())
        };
        shape(&self.system, self.stated()) == shape(system, system.fixed.len())
    }

    /// What each held value, each solid in excess and then each solid that may form brought,
    /// mol per litre or kilogram; below zero where it took away.
    pub fn brought(&self) -> Vec<f64> {
        self.brought_of(&self.answer.amounts)
    }

    fn brought_of(&self, amounts: &[f64]) -> Vec<f64> {
        let at = |k: usize| amounts.get(k).copied().unwrap_or(0.0);
        let formed = self.formed.iter().map(|place| place.map_or(0.0, at));
        (0..self.stated()).map(at).chain(formed).collect()
    }

    /// mol per litre or kilogram of a solid that formed, or in excess grew; below zero where
    /// it dissolved. None where the problem states nothing of this species.
    pub fn precipitated(&self, problem: &Problem, species: usize) -> Option<f64> {
        self.precipitated_of(problem, species, &self.answer.amounts)
    }

    /// The same of something else than the amounts of the held phases.
    pub(super) fn precipitated_of(
        &self,
        problem: &Problem,
        species: usize,
        amounts: &[f64],
    ) -> Option<f64> {
        let at = |presence: Presence| {
            problem.solids_that_are(presence).position(|solid| solid.species == species)
        };
        let index = match at(Presence::Excess) {
            Some(k) => problem.held.len() + k,
            None => self.stated() + at(Presence::Forms)?,
        };
        // A plain zero where nothing formed.
        self.brought_of(amounts).get(index).map(|brought| 0.0 - brought)
    }

    /// mol per litre or kilogram of a component in the solids that formed.
    pub fn solid_total(&self, component: usize) -> f64 {
        self.solid_total_of(component, &self.answer.amounts)
    }

    /// The same sum over something else than the amounts of the held phases.
    pub(super) fn solid_total_of(&self, component: usize, amounts: &[f64]) -> f64 {
        self.formed
            .iter()
            .flatten()
            .map(|&k| {
                let row = &self.system.fixed[k].row;
                let share = row.iter().find(|&&(j, _)| j == component);
                -share.map_or(0.0, |(_, n)| n.to_f64().unwrap_or(0.0)) * amounts[k]
            })
            .sum()
    }

    /// mol per litre or kilogram of a component over all dissolved species.
    pub fn dissolved(&self, component: usize) -> f64 {
        self.shares(component).map(|(_, share)| share).sum()
    }

    /// mol per litre or kilogram of a component over all dissolved species and the solids
    /// that formed.
    pub fn total(&self, component: usize) -> f64 {
        self.dissolved(component) + self.solid_total(component)
    }

    /// What each dissolved species holds of a component, by row of the stoichiometry.
    pub fn shares(&self, component: usize) -> impl Iterator<Item = (usize, f64)> + '_ {
        self.counts(component).map(|(i, n)| (i, n * self.answer.concentrations[i]))
    }

    /// How often each dissolved species holds a component, where it does.
    fn counts(&self, component: usize) -> impl Iterator<Item = (usize, f64)> + '_ {
        self.system.species.iter().enumerate().filter_map(move |(i, species)| {
            let at = species.row.iter().find(|&&(j, _)| j == component)?;
            Some((i, at.1.to_f64()?))
        })
    }

    /// The same sum over something else than concentrations, given by row.
    pub(super) fn total_of(&self, component: usize, of: impl Fn(usize) -> f64) -> f64 {
        self.counts(component).map(|(i, n)| n * of(i)).sum()
    }

    /// Left less right of a written balance at the answer, mol per litre or kilogram.
    pub fn written_error(&self, problem: &Problem, balance: &WrittenBalance) -> f64 {
        let sum = |terms: &[WrittenTerm]| -> f64 {
            terms
                .iter()
                .map(|term| {
                    let value = match term.what {
                        WrittenWhat::Species(row) => self.answer.concentrations[row],
                        WrittenWhat::Total(component) => self.total(component),
                        WrittenWhat::Precipitated(candidate) => {
                            let place = self.formed.get(candidate).copied().flatten();
                            place.map_or(0.0, |k| -self.answer.amounts[k])
                        }
                        WrittenWhat::Added(reagent) => {
                            problem.reagents[reagent].amount / problem.dilution()
                        }
                        WrittenWhat::Amount { value, .. } => value,
                    };
                    term.coefficient.to_f64().unwrap_or(0.0) * value
                })
                .sum()
        };
        sum(&balance.left) - sum(&balance.right)
    }

    /// Charge of all cations and of all anions, both positive, eq per litre or kilogram.
    pub fn charges(&self) -> (f64, f64) {
        self.charges_of(|row| self.answer.concentrations[row])
    }

    /// The same sums over something else than concentrations, given by row.
    pub(super) fn charges_of(&self, of: impl Fn(usize) -> f64) -> (f64, f64) {
        let mut sums = (0.0, 0.0);
        for (row, species) in self.system.species.iter().enumerate() {
            let charge = f64::from(species.charge);
            if charge > 0.0 {
                sums.0 += charge * of(row);
            } else {
                sums.1 -= charge * of(row);
            }
        }
        sums
    }

    /// Cations less anions over their sum, in percent; zero where there are no ions.
    pub fn imbalance_percent(&self) -> f64 {
        let (cations, anions) = self.charges();
        let sum = cations + anions;
        if sum > 0.0 { 100.0 * (cations - anions) / sum } else { 0.0 }
    }

    /// mol per litre or kilogram of strong base for one unit of pH.
    pub fn buffer_capacity(&self) -> Option<f64> {
        sensitivity::buffer_capacity(&self.system, &self.answer)
    }

    /// The value in base units; none where the quantity has none here.
    pub fn value(&self, problem: &Problem, sought: Sought) -> Option<f64> {
        let value = match sought {
            Sought::Ph => self.ph(),
            Sought::Poh => {
                let hydroxide = problem.scope.find("OH-")?;
                -self.ln_activity(problem, hydroxide)? / LN_10
            }
            Sought::Pe => {
                let pe = -self.answer.ln_components[problem.scope.component("e-")?] / LN_10;
                // Where nothing is there in two states, electrons have no activity.
                pe.is_finite().then_some(pe)?
            }
            Sought::Concentration(species) => {
                self.answer.concentrations[problem.scope.row_of(species)?]
            }
            Sought::Activity(species) | Sought::Pressure(species) => {
                self.ln_activity(problem, species)?.exp()
            }
            Sought::SaturationIndex(species) => self.ln_activity(problem, species)? / LN_10,
            Sought::Precipitated(species) => self.precipitated(problem, species)?,
            Sought::Total(component) => self.total(component),
            Sought::Fraction { species, component } => {
                let row = problem.scope.row_of(species)?;
                let (_, share) = self.shares(component).find(|&(i, _)| i == row)?;
                share / self.dissolved(component)
            }
            Sought::Potential => self.value(problem, Sought::Pe)? * volts_per_pe(problem.kelvin),
            Sought::Alkalinity => self.alkalinity(problem),
            Sought::Acidity => self.acidity(problem),
            Sought::Hardness => self.hardness(problem),
            Sought::CarbonateHardness => self.carbonate_hardness(problem),
            Sought::IonicStrength => self.answer.ionic_strength,
            Sought::BufferCapacity => self.buffer_capacity()?,
            Sought::ChargeImbalance { equivalents: false } => self.imbalance_percent(),
            Sought::ChargeImbalance { equivalents: true } => {
                let (cations, anions) = self.charges();
                cations - anions
            }
            Sought::Dose(reagent) => problem.reagents[reagent].amount,
        };
        // Minus infinity is the saturation index of a solid whose ions are absent.
        (!value.is_nan()).then_some(value)
    }
}
