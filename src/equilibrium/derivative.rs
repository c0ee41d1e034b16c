//! How every quantity of an answer moves with every input: exact first derivatives, from
//! the response of the solved state and what the quantity holds of the input itself.

use std::f64::consts::LN_10;

use nalgebra::{DMatrix, DVector, Dyn, LU};
use num_traits::ToPrimitive;

use super::build::water_taken;
use super::movement::{Push, add};
use super::quantities::Solved;
use super::sensitivity::{Response, Sensitivity, buffer_capacity};
use super::solve::needs_activity;
use super::system::{Activity, Answer, IonicStrength, System};
use crate::chemistry::constant::volts_per_pe;
use crate::problem::input::Input;
use crate::problem::model::{Presence, Problem, Sought};
use crate::problem::scope::WATER;

/// A solved problem, ready to be asked how its answer moves.
pub struct Derivatives<'a> {
    problem: &'a Problem,
    solved: &'a Solved,
    sensitivity: Sensitivity<'a>,
    targets: Option<Targets>,
}

/// Doses that follow so that quantities keep their values.
struct Targets {
    kept: Vec<Sought>,
    /// How the state moves with each dose.
    doses: Vec<Movement>,
    /// Of each kept quantity by each dose.
    factors: LU<f64, Dyn, Dyn>,
}

/// How the whole state moves with one input.
#[derive(Clone, Debug)]
pub struct Movement {
    push: Push,
    response: Response,
    /// Of the dose that each target finds.
    pub doses: Vec<f64>,
}

/// How far the largest logarithm moves along the tangent, for the one difference taken.
const TANGENT: f64 = 1e-4;

impl<'a> Derivatives<'a> {
    /// Of an answer to this very problem. None where the equations leave the state
    /// undetermined to first order.
    pub fn new(problem: &'a Problem, solved: &'a Solved) -> Option<Self> {
        let excess = problem.solids_that_are(Presence::Excess).count();
        let formed = solved.formed.iter().flatten().count();
        if problem.held.len() + excess + formed != solved.system.fixed.len() {
            return None;
        }
        let sensitivity = Sensitivity::new(&solved.system, &solved.answer)?;
        Some(Self { problem, solved, sensitivity, targets: None })
    }

    /// The same where doses were found to meet targets, each a quantity that keeps its value
    /// and the input that moves for it. Then every derivative is that with the doses
    /// following. None where the doses cannot move their targets independently.
    pub fn with_targets(mut self, targets: &[(Sought, Input)]) -> Option<Self> {
        let kept: Vec<Sought> = targets.iter().map(|&(sought, _)| sought).collect();
        let doses: Vec<Movement> =
            targets.iter().map(|&(_, dose)| self.by_itself(dose)).collect::<Option<_>>()?;
        let count = kept.len();
        let mut matrix = DMatrix::zeros(count, count);
        for (row, &sought) in kept.iter().enumerate() {
            for (column, dose) in doses.iter().enumerate() {
                matrix[(row, column)] = self.along(sought, dose)?;
            }
        }
        let factors = LU::new(matrix);
        if !factors.is_invertible() {
            return None;
        }
        self.targets = Some(Targets { kept, doses, factors });
        Some(self)
    }

    /// The derivative of a quantity by an input, both in base units. None where either is
    /// not part of the problem, or where there is no two-sided derivative: a component of
    /// which there is none can only be given more.
    pub fn of(&self, sought: Sought, input: Input) -> Option<f64> {
        self.along(sought, &self.movement(input)?)
    }

    /// How the whole state moves with an input, doses following.
    pub fn movement(&self, input: Input) -> Option<Movement> {
        let mut movement = self.by_itself(input)?;
        let Some(targets) = &self.targets else { return Some(movement) };
        // What the doses have to make up for: ∂Q/∂p by all but the doses, or the target's
        // own move.
        let mut missing = DVector::zeros(targets.kept.len());
        for (k, &sought) in targets.kept.iter().enumerate() {
            missing[k] = f64::from(input == Input::Target(k)) - self.along(sought, &movement)?;
        }
        if !targets.factors.solve_mut(&mut missing) {
            return None;
        }
        for (dose, &by) in targets.doses.iter().zip(missing.iter()) {
            movement.push.add(by, &dose.push);
            add_response(&mut movement.response, by, &dose.response);
        }
        movement.doses = missing.as_slice().to_vec();
        Some(movement)
    }

    /// How the state moves with an input, doses staying as they are.
    fn by_itself(&self, input: Input) -> Option<Movement> {
        let Solved { system, answer, .. } = self.solved;
        let push = Push::new(self.problem, self.solved, input)?;
        let mut response = Response {
            ln_components: vec![0.0; system.totals.len()],
            ln_concentrations: vec![0.0; system.species.len()],
            ln_ionic_strength: 0.0,
            amounts: vec![0.0; system.fixed.len()],
        };
        let sensitivity = &self.sensitivity;
        for (j, &by) in push.totals.iter().enumerate().filter(|&(_, &by)| by != 0.0) {
            add_response(&mut response, by, &sensitivity.by_total(j)?);
        }
        for (row, &species) in self.problem.scope.dissolved.iter().enumerate() {
            // A coefficient acts on a concentration as a constant turned round does.
            let by = push.ln_formation[species] - push.ln_gammas[row];
            if by != 0.0 && answer.concentrations[row] > 0.0 {
                add_response(&mut response, by, &sensitivity.by_ln_k(row)?);
            }
        }
        for (k, (value, ln_gamma)) in push.ln_values.iter().zip(&push.held_ln_gammas).enumerate() {
            let by = value + ln_gamma;
            if by != 0.0 {
                add_response(&mut response, by, &sensitivity.by_fixed(k)?);
            }
        }
        Some(Movement { push, response, doses: Vec::new() })
    }

    /// The derivative of a quantity along a movement of the state.
    pub fn along(&self, sought: Sought, movement: &Movement) -> Option<f64> {
        movement.of(self.problem, self.solved, sought)
    }
}

impl Movement {
    /// The derivative of a quantity of the answer that moves. None where it has none.
    pub fn of(&self, problem: &Problem, solved: &Solved, sought: Sought) -> Option<f64> {
        let scope = &problem.scope;
        let concentrations = &solved.answer.concentrations;
        let moved = |row: usize| concentrations[row] * self.response.ln_concentrations[row];
        let value = match sought {
            Sought::Ph => self.response.ph(),
            Sought::Poh => -self.ln_activity(problem, solved, scope.find("OH-")?)? / LN_10,
            Sought::Pe => -self.response.ln_components[scope.component("e-")?] / LN_10,
            Sought::Concentration(species) => moved(scope.row_of(species)?),
            Sought::Activity(species) | Sought::Pressure(species) => {
                solved.value(problem, sought)? * self.ln_activity(problem, solved, species)?
            }
            Sought::SaturationIndex(species) => {
                solved.value(problem, sought).filter(|index| index.is_finite())?;
                self.ln_activity(problem, solved, species)? / LN_10
            }
            Sought::Total(component) => {
                let amounts = &self.response.amounts;
                solved.total_of(component, moved) + solved.solid_total_of(component, amounts)
            }
            Sought::Dose(reagent) => *self.push.reagents.get(reagent)?,
            Sought::Precipitated(species) => {
                solved.precipitated_of(problem, species, &self.response.amounts)?
            }
            Sought::Fraction { species, component } => {
                let fraction = solved.value(problem, sought)?;
                let total = solved.dissolved(component);
                let of_total = solved.total_of(component, moved);
                let by_ln = self.response.ln_concentrations[scope.row_of(species)?];
                fraction * (by_ln - of_total / total)
            }
            Sought::Potential => {
                let volts = solved.value(problem, Sought::Potential)?;
                let by_pe = self.of(problem, solved, Sought::Pe)? * volts_per_pe(problem.kelvin);
                by_pe + volts * self.push.kelvin / problem.kelvin
            }
            Sought::Alkalinity => solved.alkalinity_of(problem, moved),
            Sought::Acidity => solved.acidity_of(problem, moved),
            Sought::Hardness => solved.hardness_of(problem, moved),
            Sought::CarbonateHardness => {
                let (hardness, half) = (solved.hardness(problem), solved.alkalinity(problem) / 2.0);
                match half {
                    half if half <= 0.0 => 0.0,
                    half if half < hardness => solved.alkalinity_of(problem, moved) / 2.0,
                    _ => solved.hardness_of(problem, moved),
                }
            }
            Sought::IonicStrength => match solved.system.ionic_strength {
                // With ideal activities a given one goes nowhere, and the answer's own is told.
                IonicStrength::Given(_) if needs_activity(&solved.system) => {
                    self.push.ionic_strength
                }
                _ => {
                    let ions = solved.system.species.iter().enumerate();
                    ions.map(|(row, s)| 0.5 * f64::from(s.charge).powi(2) * moved(row)).sum()
                }
            },
            Sought::BufferCapacity => self.buffer_capacity(problem, solved)?,
            Sought::ChargeImbalance { equivalents } => {
                let (cations, anions) = solved.charges();
                let (up, down) = solved.charges_of(moved);
                let sum = cations + anions;
                match equivalents {
                    true => up - down,
                    false if sum > 0.0 => 200.0 * (anions * up - cations * down) / (sum * sum),
                    false => 0.0,
                }
            }
        };
        value.is_finite().then_some(value)
    }

    /// Of ln activity of a species of the scope.
    fn ln_activity(&self, problem: &Problem, solved: &Solved, species: usize) -> Option<f64> {
        let made = problem.scope.belonging.made[species].as_ref()?;
        let water = self.ln_water(problem, solved);
        if species == WATER {
            return Some(water);
        }
        let components = &self.response.ln_components;
        let sum: f64 =
            made.row.iter().map(|&(j, n)| n.to_f64().unwrap_or(0.0) * components[j]).sum();
        let taken = if water == 0.0 { 0.0 } else { water * water_taken(problem, species) };
        Some(self.push.ln_formation[species] + sum + taken)
    }

    /// Of ln activity of water, by a central difference of what the model gives along the
    /// tangent; zero where the model leaves it at one.
    fn ln_water(&self, problem: &Problem, solved: &Solved) -> f64 {
        let Activity::ByComposition(_) = &solved.system.activity else { return 0.0 };
        let moves = &self.response.ln_concentrations;
        let largest = moves.iter().fold(self.push.kelvin.abs(), |most, ln| most.max(ln.abs()));
        if largest == 0.0 {
            return 0.0;
        }
        let step = TANGENT / largest;
        let at = |by: f64| {
            let system = self.push.moved(problem, &solved.system, by);
            moved_answer(&solved.answer, &system, &self.response, by).ln_water
        };
        (at(step) - at(-step)) / (2.0 * step)
    }

    /// The buffer capacity is a derivative itself, so this is one of second order: the
    /// central difference of exact capacities at two states on the tangent. How the path
    /// bends counts the same on both sides, so no state has to be solved; what is left is of
    /// the square of [`TANGENT`].
    fn buffer_capacity(&self, problem: &Problem, solved: &Solved) -> Option<f64> {
        let Movement { push, response, .. } = self;
        let logarithms = [
            &response.ln_components,
            &response.ln_concentrations,
            &push.ln_formation,
            &push.ln_gammas,
            &push.ln_values,
        ];
        let mut largest = push.kelvin.abs().max(response.ln_ionic_strength.abs());
        if let IonicStrength::Given(value) = solved.system.ionic_strength {
            largest = largest.max((push.ionic_strength / value).abs());
        }
        largest = logarithms.into_iter().flatten().fold(largest, |most, ln| most.max(ln.abs()));
        if largest == 0.0 {
            return Some(0.0);
        }
        let step = TANGENT / largest;
        let at = |by: f64| {
            let system = push.moved(problem, &solved.system, by);
            let answer = moved_answer(&solved.answer, &system, response, by);
            buffer_capacity(&system, &answer)
        };
        Some((at(step)? - at(-step)?) / (2.0 * step))
    }
}

/// The answer so far along a response, in a system moved with it.
fn moved_answer(answer: &Answer, system: &System, response: &Response, by: f64) -> Answer {
    let mut moved = answer.clone();
    add(&mut moved.ln_components, by, &response.ln_components);
    add(&mut moved.amounts, by, &response.amounts);
    for (c, ln) in moved.concentrations.iter_mut().zip(&response.ln_concentrations) {
        *c *= (by * ln).exp();
    }
    moved.ionic_strength = match system.ionic_strength {
        IonicStrength::Given(value) => value,
        IonicStrength::Computed => moved.ionic_strength * (by * response.ln_ionic_strength).exp(),
    };
    match &system.activity {
        Activity::ByIonicStrength(model) => {
            for (species, ln_gamma) in system.species.iter().zip(&mut moved.ln_gammas) {
                let (charge, size) = (species.charge, species.ion_size);
                *ln_gamma = model.ln_gamma(charge, size, moved.ionic_strength).0;
            }
        }
        Activity::ByComposition(interaction) => {
            let found = interaction.coefficients(&moved.concentrations);
            moved.ln_gammas = found.ln_gamma;
            moved.ln_water = found.ln_water;
        }
    }
    moved
}

fn add_response(to: &mut Response, times: f64, other: &Response) {
    add(&mut to.ln_components, times, &other.ln_components);
    add(&mut to.ln_concentrations, times, &other.ln_concentrations);
    add(&mut to.amounts, times, &other.amounts);
    to.ln_ionic_strength += times * other.ln_ionic_strength;
}
