//! One base or case taken through the rooms: resolved, solved, and looked over.

use std::sync::atomic::AtomicBool;
use std::sync::{Arc, OnceLock};

use super::catalogue::rules;
use super::compared::{Compared, compared};
use super::context::Context;
use super::finding::Finding;
use crate::balance::BalanceKind;
use crate::equilibrium::build::system;
use crate::equilibrium::quantities::Solved;
use crate::equilibrium::several::other_states;
use crate::equilibrium::solve::solve;
use crate::equilibrium::system::{Failure, System};
use crate::equilibrium::weighed::{Balances, Weighed};
use crate::problem::blend::Waters;
use crate::problem::case::resolve;
use crate::problem::effective::InForce;
use crate::problem::model::Problem;
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

    /// Takes the statements in force through all rooms. `waters` are those of the blend's parts. `near` is an answer to start from;
    /// `inherited` says that the scope was looked over with the base. None when cancelled.
    pub fn new(
        in_force: &InForce,
        scope: Arc<Scope>,
        waters: &Waters,
        inherited: bool,
        near: Option<&Solved>,
        cancel: &AtomicBool,
    ) -> Option<Outcome> {
        let problem = resolve(&in_force.statements, in_force.defects.clone(), scope, waters);
        let state = if !problem.states_problem {
            State::NothingStated
        } else if problem.blocked {
            State::NotWellPosed
        } else {
            match answer(system(&problem), near, cancel) {
                Ok(solved) => State::Solved(Box::new(solved)),
                Err(Failure::Cancelled) => return None,
                Err(failure) => State::Failed(failure),
            }
        };
        let brought = match &state {
            State::Solved(solved) => Some(solved.answer.amounts.as_slice()),
            _ => None,
        };
        let same_sources = inherited && !in_force.other_sources;
        let compared = compared(&problem, brought, same_sources);
        let mut findings = Vec::new();
        let context = Context::new(in_force, &problem, &state, &compared, inherited);
        for rule in rules() {
            (rule.find)(&context, &mut findings);
        }
        Some(Outcome { problem, state, compared, findings, balances: OnceLock::new() })
    }
}

/// The answer to a system. One that is near gives it at once where it is the same system,
/// and else a place to start from.
fn answer(system: System, near: Option<&Solved>, cancel: &AtomicBool) -> Result<Solved, Failure> {
    if let Some(near) = near.filter(|near| near.system == system) {
        return Ok(near.clone());
    }
    // Only an answer over the same components and species is a place to start from.
    let start = near.filter(|near| {
        let rows =
            |system: &System| (system.totals.len(), system.species.len(), system.fixed.len());
        rows(&near.system) == rows(&system)
    });
    let answer = solve(&system, start.map(|near| &near.answer), cancel)?;
    let others: Vec<(f64, f64)> = match other_states(&system, &answer, cancel) {
        Ok(others) => others.iter().map(|other| (other.ph(), other.ionic_strength)).collect(),
        Err(Failure::Cancelled) => return Err(Failure::Cancelled),
        Err(_) => Vec::new(),
    };
    // Where there are several, the one shown must not hang on what was shown before.
    if start.is_some() && !others.is_empty() {
        return self::answer(system, None, cancel);
    }
    Ok(Solved { system, answer, others })
}
