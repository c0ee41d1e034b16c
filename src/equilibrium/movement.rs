//! What one input moves by itself, before the state answers to it: totals, formation
//! constants, activity coefficients and held values.

use std::f64::consts::LN_10;

use num_traits::ToPrimitive;

use super::build::activity_at;
use super::quantities::Solved;
use super::system::{Activity, IonicStrength, System};
use crate::chemistry::activity::ActivityModel;
use crate::chemistry::constant::{ReactionHeat, log_k_at};
use crate::chemistry::water;
use crate::problem::input::Input;
use crate::problem::model::{HeldWhat, Presence, Problem, carried};
use crate::problem::reaction::LogK;
use crate::problem::scope::PROTON;

/// Derivatives by one input, the unknowns of the solver staying where they are.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct Push {
    /// Of each component's row.
    pub totals: Vec<f64>,
    /// Of ln of the formation constant of each species of the scope.
    pub ln_formation: Vec<f64>,
    /// Of ln γ of each dissolved species, at the ionic strength as it is.
    pub ln_gammas: Vec<f64>,
    /// Of `ln_value` of each held phase.
    pub ln_values: Vec<f64>,
    /// Of ln γ of each phase held by concentration, at the ionic strength as it is.
    pub held_ln_gammas: Vec<f64>,
    /// Of the ionic strength, where it is given.
    pub ionic_strength: f64,
    /// Of the temperature, kelvin.
    pub kelvin: f64,
    /// Of the amount of each reagent.
    pub reagents: Vec<f64>,
}

impl Push {
    pub fn none(problem: &Problem, system: &System) -> Push {
        Push {
            totals: vec![0.0; system.totals.len()],
            ln_formation: vec![0.0; problem.scope.species.len()],
            ln_gammas: vec![0.0; system.species.len()],
            ln_values: vec![0.0; system.fixed.len()],
            held_ln_gammas: vec![0.0; system.fixed.len()],
            ionic_strength: 0.0,
            kelvin: 0.0,
            reagents: vec![0.0; problem.reagents.len()],
        }
    }

    /// What an input moves. None where the problem has no such input.
    pub fn new(problem: &Problem, solved: &Solved, input: Input) -> Option<Push> {
        let (system, answer) = (&solved.system, &solved.answer);
        let mut push = Push::none(problem, system);
        match input {
            Input::Total(j) => push.total(problem, j, problem.dilution().recip()),
            Input::Reagent(i) => {
                let reagent = problem.reagents.get(i)?;
                let dilution = problem.dilution();
                for &(j, n) in reagent.row.iter().filter(|&&(j, _)| j != PROTON) {
                    push.total(problem, j, n.to_f64()? / dilution);
                }
                // What its stock brings along dilutes all there is.
                let brings = carried(reagent.stock.as_deref(), problem.scale) / dilution;
                for j in (1..system.totals.len()).filter(|_| brings != 0.0) {
                    push.total(problem, j, -system.totals[j] * brings);
                }
                push.reagents[i] = 1.0;
            }
            Input::Held(k) => {
                *push.ln_values.get_mut(k)? = match problem.held.get(k)?.what {
                    HeldWhat::Ph(_) | HeldWhat::Pe(_) => -LN_10,
                    HeldWhat::Pressure { atm: value, .. }
                    | HeldWhat::Activity { value, .. }
                    | HeldWhat::Concentration { value, .. } => value.recip(),
                };
            }
            Input::LogK(r) => push.constants(problem, |reaction| f64::from(reaction == r)),
            Input::Enthalpy(r) => {
                let by = by_heat(problem, r, ReactionHeat { enthalpy: 1.0, heat_capacity: 0.0 })?;
                push.constants(problem, |reaction| if reaction == r { by } else { 0.0 });
            }
            Input::HeatCapacity(r) => {
                let by = by_heat(problem, r, ReactionHeat { enthalpy: 0.0, heat_capacity: 1.0 })?;
                push.constants(problem, |reaction| if reaction == r { by } else { 0.0 });
            }
            Input::IonicStrength => {
                let given = problem.ionic_strength?;
                // A model by composition does not ask for it.
                if let Some(model) = system.activity.by_ionic_strength() {
                    push.ionic_strength = 1.0;
                    let by = |charge, size| model.ln_gamma(charge, size, given).1;
                    push.coefficients(system, by);
                }
            }
            Input::Temperature => {
                push.kelvin = 1.0;
                let slopes: Vec<f64> = (problem.scope.reactions.iter())
                    .map(|reaction| {
                        by_kelvin(problem.kelvin, |kelvin| {
                            reaction.log_k(kelvin).map_or(0.0, |(log_k, _)| log_k)
                        })
                    })
                    .collect();
                push.constants(problem, |reaction| slopes[reaction]);
                // Amounts that the density of water brought onto the file's scale.
                let by_density = by_kelvin(problem.kelvin, |kelvin| water::density(kelvin).ln());
                for &(input, amount) in &problem.by_ln_density {
                    push.add(amount * by_density, &Push::new(problem, solved, input)?);
                }
                let i = answer.ionic_strength;
                push.coefficients(system, |charge, size| {
                    by_kelvin_of(problem, |model| model.ln_gamma(charge, size, i).0)
                });
                if let Activity::ByComposition(_) = &system.activity {
                    push.composition(problem, solved);
                }
            }
            // Moves only the dose that meets it.
            Input::Target(_) => {}
        }
        push.hold(problem, &solved.formed);
        Some(push)
    }

    fn total(&mut self, problem: &Problem, component: usize, by: f64) {
        let charge = f64::from(problem.scope.components[component].formula.charge);
        self.totals[component] += by;
        // The proton's row holds the charge balance.
        self.totals[PROTON] -= charge * by;
    }

    /// Formation constants from how log10 K of each reaction moves.
    fn constants(&mut self, problem: &Problem, by: impl Fn(usize) -> f64) {
        for (made, ln) in problem.scope.belonging.made.iter().zip(&mut self.ln_formation) {
            *ln = made.as_ref().map_or(0.0, |made| LN_10 * made.log_beta(&by));
        }
    }

    /// Activity coefficients, of dissolved species and of what is held by concentration.
    fn coefficients(&mut self, system: &System, by: impl Fn(i32, f64) -> f64) {
        for (species, ln_gamma) in system.species.iter().zip(&mut self.ln_gammas) {
            *ln_gamma = by(species.charge, species.ion_size);
        }
        for (fixed, ln_gamma) in system.fixed.iter().zip(&mut self.held_ln_gammas) {
            if let Some(species) = fixed.concentration_of.and_then(|row| system.species.get(row)) {
                *ln_gamma = by(species.charge, species.ion_size);
            }
        }
    }

    /// The same of a model by composition, by temperature: the activity of water, which acts
    /// as a coefficient turned round does, with it.
    fn composition(&mut self, problem: &Problem, solved: &Solved) {
        let system = &solved.system;
        let at = |kelvin: f64| match activity_at(problem, kelvin) {
            Activity::ByComposition(interaction) => {
                Some(interaction.coefficients(&solved.answer.concentrations))
            }
            Activity::ByIonicStrength(_) => None,
        };
        let (low, high) = around(problem.kelvin);
        let (Some(before), Some(after)) = (at(low), at(high)) else { return };
        let slope = |after: f64, before: f64| (after - before) / (high - low);
        let water = slope(after.ln_water, before.ln_water);
        let by: Vec<f64> =
            after.ln_gamma.iter().zip(&before.ln_gamma).map(|(a, b)| slope(*a, *b)).collect();
        for ((species, by), ln_gamma) in system.species.iter().zip(&by).zip(&mut self.ln_gammas) {
            *ln_gamma = by - species.water * water;
        }
        for (fixed, ln_gamma) in system.fixed.iter().zip(&mut self.held_ln_gammas) {
            let own = fixed.concentration_of.and_then(|row| by.get(row)).copied();
            *ln_gamma = own.unwrap_or(0.0) - fixed.water * water;
        }
    }

    /// The value of a held phase has its formation constant taken off.
    fn hold(&mut self, problem: &Problem, formed: &[Option<usize>]) {
        let formation = &self.ln_formation;
        for (held, ln_value) in problem.held.iter().zip(&mut self.ln_values) {
            *ln_value += match held.what {
                HeldWhat::Pressure { species, .. }
                | HeldWhat::Activity { species, .. }
                | HeldWhat::Concentration { species, .. } => -formation[species],
                // Where the pOH is held, the pH is pK − pOH.
                HeldWhat::Ph(_) if held.is_by_poh() => {
                    problem.scope.find("OH-").map_or(0.0, |hydroxide| formation[hydroxide])
                }
                HeldWhat::Ph(_) | HeldWhat::Pe(_) => 0.0,
            };
        }
        let excess = problem.solids_that_are(Presence::Excess).enumerate();
        let excess = excess.map(|(k, solid)| (problem.held.len() + k, solid.species));
        let forming = problem.solids_that_are(Presence::Forms).zip(formed);
        let forming = forming.filter_map(|(solid, place)| Some(((*place)?, solid.species)));
        for (place, species) in excess.chain(forming) {
            if let Some(ln_value) = self.ln_values.get_mut(place) {
                *ln_value -= formation[species];
            }
        }
    }

    /// Adds so many times another.
    pub fn add(&mut self, times: f64, other: &Push) {
        add(&mut self.totals, times, &other.totals);
        add(&mut self.ln_formation, times, &other.ln_formation);
        add(&mut self.ln_gammas, times, &other.ln_gammas);
        add(&mut self.ln_values, times, &other.ln_values);
        add(&mut self.held_ln_gammas, times, &other.held_ln_gammas);
        self.ionic_strength += times * other.ionic_strength;
        self.kelvin += times * other.kelvin;
        add(&mut self.reagents, times, &other.reagents);
    }

    /// The system with its constants moved by so much of the input; totals are not.
    pub fn moved(&self, problem: &Problem, system: &System, by: f64) -> System {
        let mut system = system.clone();
        for (species, &s) in system.species.iter_mut().zip(&problem.scope.dissolved) {
            species.ln_k += by * self.ln_formation[s];
        }
        for (fixed, ln_value) in system.fixed.iter_mut().zip(&self.ln_values) {
            fixed.ln_value += by * ln_value;
        }
        if self.kelvin != 0.0 {
            let kelvin = problem.kelvin + by * self.kelvin;
            system.activity = activity_at(problem, kelvin);
        }
        if let IonicStrength::Given(value) = &mut system.ionic_strength {
            *value += by * self.ionic_strength;
        }
        system
    }
}

/// `to += times · other`
pub(super) fn add(to: &mut [f64], times: f64, other: &[f64]) {
    for (to, other) in to.iter_mut().zip(other) {
        *to += times * other;
    }
}

/// The derivative of log10 K at the problem's temperature by the heat of a reaction. None
/// where its constant is not given at one temperature.
fn by_heat(problem: &Problem, reaction: usize, one: ReactionHeat) -> Option<f64> {
    match problem.scope.reactions.get(reaction)?.constant.as_ref()?.value {
        // Linear in both.
        LogK::At { kelvin, .. } => Some(log_k_at(0.0, kelvin, one, problem.kelvin)),
        LogK::OfT(_) | LogK::Water => None,
    }
}

/// Kelvin to either side, for differences of published functions of temperature alone:
/// they then agree with the derivative to about 10⁻⁹ of it.
const KELVIN: f64 = 0.01;

/// The derivative of a smooth function by temperature; at an end of the range of water's
/// properties, that to the inside.
fn by_kelvin(kelvin: f64, function: impl Fn(f64) -> f64) -> f64 {
    let (low, high) = around(kelvin);
    (function(high) - function(low)) / (high - low)
}

fn around(kelvin: f64) -> (f64, f64) {
    let (mut low, mut high) = (kelvin - KELVIN, kelvin + KELVIN);
    if water::in_range(kelvin) {
        low = low.max(*water::RANGE.start());
        high = high.min(*water::RANGE.end());
    }
    (low, high)
}

/// The same of what an activity model gives.
fn by_kelvin_of(problem: &Problem, value: impl Fn(ActivityModel) -> f64) -> f64 {
    by_kelvin(problem.kelvin, |kelvin| value(ActivityModel::new(problem.activity, kelvin)))
}
