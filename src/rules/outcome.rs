//! One base or case taken through the rooms: resolved, solved, and looked over.

use std::sync::atomic::AtomicBool;
use std::sync::{Arc, OnceLock};

use super::catalogue::rules;
use super::compared::{Compared, compared};
use super::context::Context;
use super::finding::Finding;
use crate::balance::BalanceKind;
use crate::equilibrium::build::system;
use crate::equilibrium::dose::meet;
use crate::equilibrium::phases::{Near, equilibrate, is_settled};
use crate::equilibrium::quantities::Solved;
use crate::equilibrium::several::other_states;
use crate::equilibrium::system::{Failure, System};
use crate::equilibrium::target::Missed;
use crate::equilibrium::uncertainty::{Budget, Uncertainties};
use crate::equilibrium::weighed::{Balances, Weighed};
use crate::problem::blend::Waters;
use crate::problem::case::resolve;
use crate::problem::effective::InForce;
use crate::problem::model::{Problem, Sought};
use crate::problem::scope::Scope;
use crate::text::span::Place;

#[derive(Debug)]
pub struct Outcome {
    pub problem: Problem,
    pub state: State,
    pub compared: Vec<Compared>,
    pub findings: Vec<Finding<Place>>,
    /// Weighed when first asked for: no rule needs them.
    balances: OnceLock<Balances>,
    uncertainties: Uncertainties,
}

/// What became of the equations.
#[derive(Debug)]
pub enum State {
    Solved(Box<Solved>),
    /// The file states no amounts: definitions alone.
    NothingStated,
    /// Something found wrong has to be put right first.
    NotWellPosed,
    Failed(Failure),
    /// No amounts meet the targets.
    OutOfReach(Missed),
}

impl Outcome {
    pub fn solved(&self) -> Option<&Solved> {
        match &self.state {
            State::Solved(solved) => Some(solved),
            _ => None,
        }
    }

    /// The implied balance of a kind, term by term; none where there is no answer.
    pub fn balance(&self, kind: BalanceKind) -> Option<&Weighed> {
        let solved = self.solved()?;
        self.balances.get_or_init(|| Balances::new(&self.problem, solved)).of(kind, solved)
    }

    /// What a quantity is uncertain by, and from which inputs; none where nothing is
    /// uncertain, or where there is no answer.
    pub fn budget(&self, sought: Sought) -> Option<Budget> {
        let (problem, solved) = (&self.problem, self.solved()?);
        self.uncertainties.budget(problem, solved, sought)
    }

    /// One standard uncertainty of the pH; none where nothing uncertain moves it.
    pub fn ph_uncertainty(&self) -> Option<f64> {
        let size = self.budget(Sought::Ph)?.standard_uncertainty;
        (size > 0.0).then_some(size)
    }

    /// Takes the statements in force through all rooms. `waters` are those of the blend's
    /// parts. `near` is an answer to start from;
    /// `inherited` says that the scope was looked over with the base. None when cancelled.
    pub fn new(
        in_force: &InForce,
        scope: Arc<Scope>,
        waters: &Waters,
        inherited: bool,
        near: Option<&Solved>,
        cancel: &AtomicBool,
    ) -> Option<Outcome> {
        let mut problem = resolve(&in_force.statements, in_force.defects.clone(), scope, waters);
        let state = if !problem.states_problem {
            State::NothingStated
        } else if problem.blocked {
            State::NotWellPosed
        } else {
            let solved = if problem.targets.is_empty() {
                answer(system(&problem), near, cancel).map(|s| State::Solved(Box::new(s)))
            } else {
                dosed(&mut problem, near, cancel)
            };
            match solved {
                Ok(state) => state,
                Err(Failure::Cancelled) => return None,
                Err(failure) => State::Failed(failure),
            }
        };
        let brought = match &state {
            State::Solved(solved) => Some(solved.brought()),
            _ => None,
        };
        let same_sources = inherited && !in_force.other_sources;
        let compared = compared(&problem, brought.as_deref(), same_sources);
        let mut findings = Vec::new();
        let uncertainties = Uncertainties::default();
        let context =
            Context::new(in_force, &problem, &state, (&compared, &uncertainties), inherited);
        for rule in rules() {
            (rule.find)(&context, &mut findings);
        }
        let balances = OnceLock::new();
        Some(Outcome { problem, state, compared, findings, balances, uncertainties })
    }
}

/// The answer to a system. One that is near gives it at once where it is the same system,
/// and else a place to start from.
fn answer(system: System, near: Option<&Solved>, cancel: &AtomicBool) -> Result<Solved, Failure> {
    if let Some(near) = near.filter(|near| near.answers(&system)) {
        return Ok(near.clone());
    }
    let solved = with_others(state(system, near, cancel)?, cancel)?;
    // Where there are several, the one shown must not hang on what was shown before.
    if near.is_some() && !solved.others.is_empty() {
        return self::answer(solved.asked(), None, cancel);
    }
    Ok(solved)
}

/// A state of a system.
fn state(system: System, near: Option<&Solved>, cancel: &AtomicBool) -> Result<Solved, Failure> {
    // Only an answer over the same components and species is a place to start from.
    let rows =
        |system: &System| (system.totals.len(), system.species.len(), system.candidates.len());
    let start = near.filter(|near| rows(&near.system) == rows(&system));
    let start = start.map(|near| Near { answer: &near.answer, formed: &near.formed });
    Ok(equilibrate(system, start, cancel)?.into())
}

/// With what is known of other states.
fn with_others(mut solved: Solved, cancel: &AtomicBool) -> Result<Solved, Failure> {
    let Solved { system, answer, formed, .. } = &solved;
    solved.others = match other_states(system, answer, cancel) {
        Ok(others) => others
            .iter()
            .filter(|other| is_settled(system, formed, other))
            .map(|other| (other.ph(), other.ionic_strength))
            .collect(),
        Err(Failure::Cancelled) => return Err(Failure::Cancelled),
        Err(_) => Vec::new(),
    };
    Ok(solved)
}

/// Finds the amounts that meet the targets of a problem, and puts them in.
fn dosed(
    problem: &mut Problem,
    near: Option<&Solved>,
    cancel: &AtomicBool,
) -> Result<State, Failure> {
    let found = meet(problem, near, |system, near| state(system, near, cancel))?;
    Ok(match found {
        Ok(solved) => {
            let solved = with_others(solved, cancel)?;
            problem.put_in(solved.dosed.as_ref().map(|d| d.amounts.clone()).unwrap_or_default());
            State::Solved(Box::new(solved))
        }
        Err(missed) => State::OutOfReach(missed),
    })
}
