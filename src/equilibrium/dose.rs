//! From a problem with targets to the search for the amounts that meet them.

use std::f64::consts::LN_10;

use num_rational::Rational64;
use num_traits::{One, ToPrimitive};

use super::build::{ln_formation, system, water_taken};
use super::quantities::{Dosed, Solved};
use super::system::{Failure, Fixed, System};
use super::target::{Bench, Dosing, Goal, Met, Missed, Search, Unknown, find};
use crate::chemistry::quantity::Scale;
use crate::problem::model::{self, HeldWhat, Problem, Sought, Target, carried};
use crate::problem::scope::PROTON;

/// Finds what meets the targets of a problem. `solve` gives the state of a system from a near
/// one. `near` is an answer that is thought to be near; where it is one to this very problem,
/// it is given back.
///
/// # Errors
/// [`Failure::Cancelled`]; another where the water itself has no state.
pub fn meet(
    problem: &Problem,
    near: Option<&Solved>,
    solve: impl Fn(System, Option<&Solved>) -> Result<Solved, Failure>,
) -> Result<Result<Solved, Missed>, Failure> {
    let dosing = dosing(problem);
    let known = near.and_then(|near| near.dosed.as_ref().map(|dosed| (near, dosed)));
    if let Some((near, dosed)) = known
        && dosed.targets == problem.targets
        && near.answers(&dosing.system(&dosed.amounts))
    {
        return Ok(Ok(near.clone()));
    }
    let goals: Vec<Goal> =
        problem.targets.iter().map(|target| goal(problem, &dosing, target)).collect();
    let start = known.map(|(_, dosed)| dosed.amounts.as_slice());
    let trials = Trials { problem, near, solve };
    Ok(match find(&trials, &dosing, &goals, start)? {
        Search::Missed(missed) => Err(missed),
        Search::Met(met) => {
            let Met { doses: amounts, state, others, .. } = *met;
            let targets = problem.targets.clone();
            Ok(Solved { dosed: Some(Dosed { targets, amounts, others }), ..state })
        }
    })
}

struct Trials<'a, F> {
    problem: &'a Problem,
    near: Option<&'a Solved>,
    solve: F,
}

impl<F: Fn(System, Option<&Solved>) -> Result<Solved, Failure>> Bench for Trials<'_, F> {
    type State = Solved;

    fn solve(&self, system: System, near: Option<&Solved>) -> Result<Solved, Failure> {
        (self.solve)(system, near.or(self.near))
    }

    fn brought(&self, state: &Solved, phase: usize) -> f64 {
        state.answer.amounts.get(phase).copied().unwrap_or(f64::NAN)
    }

    fn value(&self, goal: usize, state: &Solved) -> Option<f64> {
        state.value(self.problem, self.problem.targets[goal].sought)
    }
}

fn dosing(problem: &Problem) -> Dosing {
    let mut base = system(problem);
    let dilution = problem.dilution();
    base.totals.iter_mut().for_each(|total| *total *= dilution);
    let unknowns = problem.targets.iter().map(|target| unknown(problem, target.unknown));
    Dosing { base, dilution, unknowns: unknowns.collect() }
}

fn unknown(problem: &Problem, unknown: model::Unknown) -> Unknown {
    let (mut row, brings) = match unknown {
        model::Unknown::Total(j) => (vec![(j, 1.0)], 0.0),
        model::Unknown::Reagent(index) => {
            let reagent = &problem.reagents[index];
            let others = reagent.row.iter().filter(|&&(j, _)| j != PROTON);
            let row = others.map(|&(j, n)| (j, n.to_f64().unwrap_or(0.0)));
            (row.collect(), carried(reagent.stock.as_deref(), problem.scale))
        }
    };
    let components = &problem.scope.components;
    let charge: f64 = row.iter().map(|&(j, n)| f64::from(components[j].formula.charge) * n).sum();
    row.insert(0, (PROTON, -charge));
    Unknown { row, brings }
}

fn goal(problem: &Problem, dosing: &Dosing, target: &Target) -> Goal {
    let held = held(problem, target);
    let logarithmic =
        matches!(target.sought, Sought::Ph | Sought::Poh | Sought::Pe | Sought::SaturationIndex(_));
    let single = held.is_some()
        && problem.solids.is_empty()
        && matches!(target.sought, Sought::Ph | Sought::Poh)
        && problem.held.iter().all(|held| matches!(held.what, HeldWhat::Pressure { .. }))
        && keeps_to_itself(problem, &unknown(problem, target.unknown), dosing);
    let slope = target.sought == Sought::BufferCapacity;
    Goal { wanted: target.wanted, held, logarithmic, slope, single }
}

/// Whether what a dose brings forms species with protons alone, one of it in each: then, at a
/// given pH, the protons that it takes or gives are in proportion to it.
fn keeps_to_itself(problem: &Problem, unknown: &Unknown, dosing: &Dosing) -> bool {
    let one = Rational64::one();
    let electron = problem.scope.component("e-");
    unknown.row.iter().filter(|(j, _)| *j != PROTON).all(|(j, _)| {
        Some(*j) != electron
            && dosing.base.species.iter().all(|species| {
                let own = species.row.iter().find(|(column, _)| column == j);
                own.is_none_or(|(_, n)| {
                    *n == one
                        && species.row.iter().all(|(column, _)| column == j || *column == PROTON)
                })
            })
    })
}

/// What holds a quantity at the value wanted, where it is an activity or a concentration. What
/// it brings in is of its own kind, charge and all: in the end it brings nothing.
fn held(problem: &Problem, target: &Target) -> Option<Fixed> {
    let scope = &problem.scope;
    let row_of = |species: usize| Some(scope.belonging.made[species].as_ref()?.row.clone());
    let single = |j: usize| vec![(j, Rational64::one())];
    let wanted = target.wanted;
    let fixed = |row: Vec<(usize, Rational64)>, ln_value: f64| {
        let ln_value = Some(ln_value).filter(|value| value.is_finite())?;
        let is_something = !row.is_empty();
        let (water, concentration_of) = (0.0, None);
        is_something.then(|| Fixed { supply: row.clone(), row, ln_value, water, concentration_of })
    };
    let of = |species: usize, ln_activity: f64| {
        let held = fixed(row_of(species)?, ln_activity - ln_formation(problem, species))?;
        Some(Fixed { water: water_taken(problem, species), ..held })
    };
    match target.sought {
        Sought::Ph => fixed(single(PROTON), -wanted * LN_10),
        Sought::Poh => of(scope.find("OH-")?, -wanted * LN_10),
        Sought::Pe => fixed(single(scope.component("e-")?), -wanted * LN_10),
        Sought::Activity(species) | Sought::Pressure(species) => of(species, wanted.ln()),
        Sought::SaturationIndex(species) => of(species, wanted * LN_10),
        Sought::Concentration(species) => {
            let held = of(species, wanted.ln())?;
            Some(Fixed { concentration_of: Some(scope.row_of(species)?), ..held })
        }
        _ => None,
    }
}

/// Grams of the pure substance and, where it comes from a stock, of that and its millilitres,
/// each per litre or kilogram of the water treated.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Measures {
    pub grams: Option<f64>,
    pub stock_grams: Option<f64>,
    pub stock_millilitres: Option<f64>,
}

/// An amount of a reagent in the measures that it is weighed or pumped by.
pub fn measures(reagent: &model::Reagent, amount: f64) -> Measures {
    let stock = reagent.stock.as_deref();
    Measures {
        grams: reagent.formula.molar_mass().map(|mass| mass * amount),
        stock_grams: stock.and_then(|stock| Some(stock.grams_per_mole? * amount)),
        stock_millilitres: stock.and_then(|stock| Some(1e3 * stock.litres_per_mole? * amount)),
    }
}

/// What brings an amount per litre or kilogram of a problem onto the litre.
pub fn per_litre(problem: &Problem) -> f64 {
    match problem.scale {
        Scale::PerLitre => 1.0,
        Scale::PerKilogram => crate::chemistry::water::density(problem.kelvin) / 1000.0,
    }
}
