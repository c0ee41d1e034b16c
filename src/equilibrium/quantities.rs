//! Quantities of the solved state, as a file asks for them.

use std::f64::consts::LN_10;

use num_traits::ToPrimitive;

use super::build::ln_formation;
use super::sensitivity;
use super::system::{Answer, System};
use crate::chemistry::constant::volts_per_pe;
use crate::problem::model::{Problem, Sought, WrittenBalance, WrittenTerm, WrittenWhat};
use crate::problem::scope::WATER;

/// A problem with its numbers and its answer.
#[derive(Clone, Debug)]
pub struct Solved {
    pub system: System,
    pub answer: Answer,
    /// pH and ionic strength of other states that meet the same equations; none for most
    /// problems.
    pub others: Vec<(f64, f64)>,
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
            return Some(0.0);
        }
        let sum: f64 = made
            .row
            .iter()
            .map(|&(j, n)| n.to_f64().unwrap_or(0.0) * self.answer.ln_components[j])
            .sum();
        Some(ln_formation(problem, species) + sum)
    }

    /// mol per litre or kilogram of a component over all dissolved species.
    pub fn total(&self, component: usize) -> f64 {
        self.shares(component).map(|(_, share)| share).sum()
    }

    /// What each dissolved species holds of a component, by row of the stoichiometry.
    pub fn shares(&self, component: usize) -> impl Iterator<Item = (usize, f64)> + '_ {
        self.system.species.iter().enumerate().filter_map(move |(i, species)| {
            let at = species.row.iter().find(|&&(j, _)| j == component)?;
            Some((i, at.1.to_f64()? * self.answer.concentrations[i]))
        })
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
                        WrittenWhat::Added(reagent) => problem.reagents[reagent].amount,
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
        let mut sums = (0.0, 0.0);
        for (species, c) in self.system.species.iter().zip(&self.answer.concentrations) {
            let charge = f64::from(species.charge) * c;
            if charge > 0.0 {
                sums.0 += charge;
            } else {
                sums.1 -= charge;
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
            Sought::Total(component) => self.total(component),
            Sought::Fraction { species, component } => {
                let row = problem.scope.row_of(species)?;
                let (_, share) = self.shares(component).find(|&(i, _)| i == row)?;
                share / self.total(component)
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
        };
        // Minus infinity is the saturation index of a solid whose ions are absent.
        (!value.is_nan()).then_some(value)
    }
}
