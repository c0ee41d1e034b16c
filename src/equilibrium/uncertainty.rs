//! How uncertain answers are for the uncertainty of their inputs, and which input brings
//! how much of it: the law of propagation of the *Guide to the Expression of Uncertainty in
//! Measurement* (JCGM 100:2008, 5.1.2) with exact sensitivities, to first order and for
//! independent inputs.

use std::sync::OnceLock;

use super::derivative::{Derivatives, Movement};
use super::quantities::Solved;
use crate::problem::input::Input;
use crate::problem::model::{Problem, Sought, Unknown};

/// How an answer moves with each of its uncertain inputs: found when first asked for, since
/// few problems carry any.
#[derive(Debug, Default)]
pub struct Uncertainties {
    /// Of each uncertain input of the problem; none where the answer has no two-sided
    /// derivative by it.
    movements: OnceLock<Vec<Option<Movement>>>,
}

/// A quantity with its standard uncertainty, and what that comes from.
#[derive(Clone, Debug, PartialEq)]
pub struct Budget {
    pub value: f64,
    /// In the unit of the value; zero where no uncertain input moves it.
    pub standard_uncertainty: f64,
    /// Largest first; every uncertain input that moves the quantity.
    pub shares: Vec<Share>,
    /// Uncertain inputs whose part is not known, and not counted.
    pub left_out: Vec<usize>,
}

/// What one input brings to the uncertainty of a quantity.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Share {
    /// The index of the uncertain input in the problem.
    pub source: usize,
    /// What the quantity moves by when the input moves by one standard uncertainty up.
    pub contribution: f64,
    /// Of the variance, in percent.
    pub percent: f64,
}

impl Uncertainties {
    /// The budget of a quantity of the answer that these are of. None where nothing is
    /// uncertain or the quantity has no value.
    pub fn budget(&self, problem: &Problem, solved: &Solved, sought: Sought) -> Option<Budget> {
        if problem.uncertain.is_empty() {
            return None;
        }
        let value = solved.value(problem, sought).filter(|value| value.is_finite())?;
        let rounding = ROUNDING * size(solved, sought, value);
        let mut shares = Vec::new();
        let mut left_out = Vec::new();
        let movements = self.movements.get_or_init(|| movements(problem, solved));
        for (source, movement) in movements.iter().enumerate() {
            let slope = movement.as_ref().and_then(|m| m.of(problem, solved, sought));
            match slope.map(|slope| slope * problem.uncertain[source].standard_uncertainty) {
                None => left_out.push(source),
                Some(contribution) if contribution.abs() <= rounding => {}
                Some(contribution) => shares.push(Share { source, contribution, percent: 0.0 }),
            }
        }
        let standard_uncertainty = shares.iter().fold(0.0f64, |u, s| u.hypot(s.contribution));
        if !standard_uncertainty.is_finite() {
            return None;
        }
        for share in &mut shares {
            share.percent = 100.0 * (share.contribution / standard_uncertainty).powi(2);
        }
        shares.sort_by(|a, b| b.percent.total_cmp(&a.percent));
        Some(Budget { value, standard_uncertainty, shares, left_out })
    }
}

/// Below this share of its size, a move of a quantity is the rounding of sums that cancel.
const ROUNDING: f64 = 1e-12;

/// The size of what a quantity is the sum of.
fn size(solved: &Solved, sought: Sought, value: f64) -> f64 {
    let sum = match sought {
        Sought::Alkalinity | Sought::ChargeImbalance { equivalents: true } => solved.charges().0,
        Sought::ChargeImbalance { equivalents: false } => 100.0,
        _ => 0.0,
    };
    sum.max(value.abs())
}

/// Costs one factorisation, and a few solutions for each input.
fn movements(problem: &Problem, solved: &Solved) -> Vec<Option<Movement>> {
    let targets: Vec<(Sought, Input)> = (problem.targets.iter())
        .map(|target| {
            let dose = match target.unknown {
                Unknown::Reagent(reagent) => Input::Reagent(reagent),
                Unknown::Total(component) => Input::Total(component),
            };
            (target.sought, dose)
        })
        .collect();
    let derivatives = Derivatives::new(problem, solved);
    let derivatives = match targets.is_empty() {
        true => derivatives,
        false => derivatives.and_then(|by| by.with_targets(&targets)),
    };
    let mut movements: Vec<Option<Movement>> = Vec::with_capacity(problem.uncertain.len());
    for (source, uncertain) in problem.uncertain.iter().enumerate() {
        // Two lines of one reagent move the answer in the same way.
        let before = problem.uncertain[..source].iter().position(|u| u.input == uncertain.input);
        movements.push(match before {
            Some(before) => movements[before].clone(),
            None => derivatives.as_ref().and_then(|by| by.movement(uncertain.input)),
        });
    }
    movements
}
