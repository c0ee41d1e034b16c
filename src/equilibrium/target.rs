//! Targets: which amounts put in give the quantities that are wanted.
//!
//! A quantity that fixes the activity of something (pH, a gas, a saturation index, a species)
//! is not looked for by its own value. In a trial it is held at the value wanted, and what the
//! holding had to bring in must come to nothing. That is close to proportional to the dose
//! where the quantity itself turns sharply, as a pH does at an end point; with ideal activities
//! and no complexes it is a straight line. Any other quantity is looked for by its value.

mod nearest;
mod one;
mod root;
mod together;

use super::system::{Failure, Fixed, System};

pub use nearest::{Missed, Nearest};

/// What trials are made with: the solver, and the quantities asked for.
pub trait Bench {
    type State;

    /// The state of a system. `near` is that of another trial.
    ///
    /// # Errors
    /// Those of the solver. All but [`Failure::Cancelled`] say that there is no such water.
    fn solve(&self, system: System, near: Option<&Self::State>) -> Result<Self::State, Failure>;

    /// What the held phase of this index in the system as it was given brought in.
    fn brought(&self, state: &Self::State, phase: usize) -> f64;

    /// The quantity that a goal is about, in its base units.
    fn value(&self, goal: usize, state: &Self::State) -> Option<f64>;
}

/// A water, and what may be put into it.
#[derive(Clone, Debug)]
pub struct Dosing {
    /// Without the unknown amounts. Its totals are per litre (kilogram of water) of the water
    /// treated.
    pub base: System,
    /// Litres of mixture, or kilograms of water in it, for one of the water treated, without
    /// the unknown amounts.
    pub dilution: f64,
    pub unknowns: Vec<Unknown>,
}

/// Something of which an amount is to be found.
#[derive(Clone, Debug, PartialEq)]
pub struct Unknown {
    /// What one mole brings of each component, the charge balance included.
    pub row: Vec<(usize, f64)>,
    /// Litres, or kilograms of water, that one mole brings along.
    pub brings: f64,
}

impl Dosing {
    /// The mixture with these amounts, mol per litre or kilogram of the water treated.
    pub fn system(&self, doses: &[f64]) -> System {
        let mut system = self.base.clone();
        for (unknown, dose) in self.unknowns.iter().zip(doses) {
            for (j, n) in &unknown.row {
                system.totals[*j] += n * dose;
            }
        }
        let dilution = self.dilution_with(doses);
        if dilution != 1.0 {
            system.totals.iter_mut().for_each(|total| *total /= dilution);
        }
        system
    }

    /// Litres of mixture, or kilograms of water in it, for one of the water treated.
    pub fn dilution_with(&self, doses: &[f64]) -> f64 {
        let brought = self.unknowns.iter().zip(doses).map(|(unknown, dose)| unknown.brings * dose);
        self.dilution + brought.sum::<f64>()
    }
}

/// A quantity that is to have a value.
#[derive(Clone, Debug, PartialEq)]
pub struct Goal {
    pub wanted: f64,
    /// What holds it at the value, where an activity does.
    pub held: Option<Fixed>,
    /// Whether the value counts powers of ten.
    pub logarithmic: bool,
    /// Whether it tells how the state moves, as a buffer capacity does, and so is another one
    /// while something is held.
    pub slope: bool,
    /// Whether no more than one amount can meet it, so that the first found is the only one.
    pub single: bool,
}

impl Goal {
    /// How far off a value is: in powers of ten, or else as a share of the value wanted.
    pub fn off(&self, value: f64) -> f64 {
        let size = if self.logarithmic || self.wanted == 0.0 { 1.0 } else { self.wanted.abs() };
        (value - self.wanted) / size
    }
}

/// Off by no more than this a state meets its goal; what is off by more, where a search ended,
/// is a jump from one state to another.
const MET: f64 = 1e-6;

/// Amounts that meet all goals.
#[derive(Clone, Debug)]
pub struct Met<S> {
    /// mol per litre or kilogram of the water treated.
    pub doses: Vec<f64>,
    pub state: S,
    /// Other amounts that meet them too; all that lie further apart than the meshes of the
    /// search, for one goal, and none where there are several.
    pub others: Vec<Vec<f64>>,
    /// How many states were solved.
    pub trials: u32,
}

/// What a search came to.
#[derive(Clone, Debug)]
pub enum Search<S> {
    Met(Box<Met<S>>),
    Missed(Missed),
}

/// Finds the amounts that meet the goals, one unknown for each goal, none below zero; of
/// several for one goal the smallest. `start` are amounts that are thought to be near.
///
/// # Errors
/// [`Failure::Cancelled`]; another where the water itself has no state.
pub fn find<B: Bench>(
    bench: &B,
    dosing: &Dosing,
    goals: &[Goal],
    start: Option<&[f64]>,
) -> Result<Search<B::State>, Failure> {
    match goals {
        [goal] => one::find(bench, dosing, goal, start.and_then(|start| start.first().copied())),
        _ => together::find(bench, dosing, goals, start),
    }
}

/// None where there is no such state; a raised flag ends everything.
fn passed<T>(result: Result<T, Failure>) -> Result<Option<T>, Failure> {
    match result {
        Ok(found) => Ok(Some(found)),
        Err(Failure::Cancelled) => Err(Failure::Cancelled),
        Err(_) => Ok(None),
    }
}

/// Amounts looked at: from next to nothing to more than dissolves, so many in each decade.
fn amounts(unknown: &Unknown, in_decade: f64) -> impl Iterator<Item = f64> + Clone {
    let most = most(unknown);
    let steps = (0..).map(move |n| LEAST * 10f64.powf(f64::from(n) / in_decade));
    std::iter::once(0.0).chain(steps.take_while(move |&dose| dose < most)).chain([most])
}

/// Amounts in a decade that are looked at first, and where that finds none.
const COARSE: f64 = 2.0;
const FINE: f64 = 24.0;

/// mol per litre or kilogram.
const LEAST: f64 = 1e-9;

/// The largest amount looked at: more dissolves of nothing, and of a solution a hundred times
/// as much as of the water.
fn most(unknown: &Unknown) -> f64 {
    if unknown.brings > 0.0 { 100.0 / unknown.brings } else { 50.0 }
}
