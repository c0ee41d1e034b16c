//! Problems with one of their inputs moved, and solved again: what derivatives and
//! propagated uncertainties are held against.
#![allow(dead_code)] // each test uses its own part

use std::sync::atomic::AtomicBool;

use lyate::chemistry::formula::Phase;
use lyate::equilibrium::build::system;
use lyate::equilibrium::quantities::Solved;
use lyate::equilibrium::solve::solve;
use lyate::problem::files::Disk;
use lyate::problem::import::Imports;
use lyate::problem::input::Input;
use lyate::problem::model::{AmountSource, HeldWhat, Problem, Sought};
use lyate::problem::reaction::{LogK, Reaction};
use lyate::rules::check::{Checked, Surroundings, check};
use lyate::text::tree::Document;

pub struct Case {
    pub problem: Problem,
    pub solved: Solved,
}

pub fn checked(text: &str) -> Checked {
    let imports = Imports::default();
    let around = Surroundings {
        path: None,
        roots: &[],
        files: &Disk,
        imports: &imports,
        cancel: &AtomicBool::new(false),
    };
    check(Document::parse(text.to_owned()), &around, None).unwrap()
}

impl Case {
    pub fn new(text: &str) -> Case {
        let checked = checked(text);
        let outcome = &checked.outcomes[0];
        let solved = outcome.solved().unwrap_or_else(|| panic!("{text}\n{:?}", checked.findings));
        Case { problem: outcome.problem.clone(), solved: solved.clone() }
    }
}

pub fn solve_again(problem: &Problem) -> Solved {
    let system = system(problem);
    let answer = solve(&system, None, &AtomicBool::new(false)).unwrap();
    Solved { system, answer, formed: Vec::new(), others: Vec::new(), dosed: None }
}

/// The problem with one input moved by so much, resolved by its definition and nothing
/// that derivatives are made of.
pub fn moved(problem: &Problem, input: Input, by: f64) -> Problem {
    let mut moved = problem.clone();
    match input {
        Input::Total(j) => {
            let total = &mut moved.amounts[j].total;
            *total = Some(total.unwrap_or(0.0) + by);
        }
        Input::Reagent(i) => {
            moved.reagents[i].amount += by;
            for (j, n) in moved.reagents[i].row.clone() {
                if j != 0 {
                    assert_eq!(moved.amounts[j].source, AmountSource::Reagents);
                    let total = &mut moved.amounts[j].total;
                    *total = Some(total.unwrap() + by * *n.numer() as f64 / *n.denom() as f64);
                }
            }
        }
        Input::Held(k) => match &mut moved.held[k].what {
            HeldWhat::Ph(value)
            | HeldWhat::Pe(value)
            | HeldWhat::Pressure { atm: value, .. }
            | HeldWhat::Activity { value, .. }
            | HeldWhat::Concentration { value, .. } => *value += by,
        },
        Input::LogK(r) => {
            moved.log_k[r] += by;
            hold_poh(problem, &mut moved);
        }
        Input::Enthalpy(r) | Input::HeatCapacity(r) => {
            let reaction = &problem.scope.reactions[r];
            assert!(matches!(reaction.constant.as_ref().unwrap().value, LogK::At { .. }));
            let mut other = (**reaction).clone();
            let heat = match input {
                Input::Enthalpy(_) => &mut other.enthalpy,
                _ => &mut other.heat_capacity,
            };
            *heat = Some(heat.unwrap() + by);
            let log_k = |reaction: &Reaction| reaction.log_k(moved.kelvin).unwrap().0;
            moved.log_k[r] += log_k(&other) - log_k(reaction);
            hold_poh(problem, &mut moved);
        }
        Input::IonicStrength => {
            moved.ionic_strength = Some(moved.ionic_strength.unwrap() + by);
        }
        Input::Temperature => {
            moved.kelvin += by;
            for (r, reaction) in problem.scope.reactions_in_use() {
                // By what the temperature adds, so that constants moved before stay so.
                let log_k = |kelvin| reaction.log_k(kelvin).unwrap().0;
                moved.log_k[r] += log_k(moved.kelvin) - log_k(problem.kelvin);
            }
            hold_poh(problem, &mut moved);
        }
        Input::Target(_) => panic!("a target is no input of a solve"),
    }
    moved
}

/// A pH that is held by way of the pOH moves with water's constant.
fn hold_poh(problem: &Problem, moved: &mut Problem) {
    let water = problem
        .scope
        .reactions_in_use()
        .find(|(_, reaction)| reaction.key == "H+ OH-")
        .map(|(r, _)| r)
        .unwrap();
    let by = moved.log_k[water] - problem.log_k[water];
    for held in moved.held.iter_mut().filter(|held| held.words == "pOH") {
        if let HeldWhat::Ph(ph) = &mut held.what {
            *ph -= by;
        }
    }
}

/// Every quantity that can be asked of a problem.
pub fn quantities(problem: &Problem) -> Vec<Sought> {
    let scope = &problem.scope;
    let mut all = vec![
        Sought::Ph,
        Sought::Poh,
        Sought::Alkalinity,
        Sought::IonicStrength,
        Sought::BufferCapacity,
        Sought::ChargeImbalance { equivalents: false },
        Sought::ChargeImbalance { equivalents: true },
    ];
    if scope.component("e-").is_some() {
        all.push(Sought::Pe);
    }
    all.extend((1..scope.components.len()).map(Sought::Total));
    for s in (0..scope.species.len()).filter(|&s| scope.belongs(s)) {
        match scope.species[s].phase {
            Phase::Gas => all.push(Sought::Pressure(s)),
            Phase::Solid(_) => all.push(Sought::SaturationIndex(s)),
            _ => {
                all.push(Sought::Activity(s));
                if let Some(row) = scope.row_of(s) {
                    all.push(Sought::Concentration(s));
                    for &(j, _) in &scope.stoichiometry.species[row].row {
                        if j != 0 {
                            all.push(Sought::Fraction { species: s, component: j });
                        }
                    }
                }
            }
        }
    }
    all
}
