//! Whether random problems with solids are solved: nothing negative, nothing supersaturated,
//! every row closed. `LYATE_PROBLEMS=100000 cargo test --release --test
//! equilibrium_phases_robust -- --nocapture` is the long form.

mod equilibrium_support;

use std::sync::atomic::AtomicBool;

use equilibrium_support::solids::{add_candidates, hold_phase, saturation_index};
use equilibrium_support::{DAVIES, IDEAL, Random, chemistry_like, hold_ph};
use lyate::equilibrium::phases::{Assemblage, Near, equilibrate};
use lyate::equilibrium::solve::solve;
use lyate::equilibrium::system::{Failure, System};

/// How many problems of a family: `short`, or so much of the long form.
fn count(short: u64) -> u64 {
    let long = std::env::var("LYATE_PROBLEMS").ok().and_then(|n| n.parse::<u64>().ok());
    long.map_or(short, |n| n.max(1))
}

fn run(system: &System) -> Result<Assemblage, Failure> {
    equilibrate(system.clone(), None, &AtomicBool::new(false))
}

/// A system with candidates, one in six with more of them than components.
fn problem(random: &mut Random) -> System {
    let components = 2 + random.below(9);
    let species = 5 + random.below(46);
    let mut system = chemistry_like(random, components, species);
    let count = if random.chance(1.0 / 6.0) {
        components + 1 + random.below(6)
    } else {
        1 + random.below(components)
    };
    add_candidates(random, &mut system, count);
    system
}

/// What is wrong with an answer; nothing where all conditions are met.
fn fault(asked: &System, state: &Assemblage) -> Option<String> {
    if state.answer.residual > 2e-12 {
        return Some(format!("closed only to {:e}", state.answer.residual));
    }
    for (c, (candidate, at)) in asked.candidates.iter().zip(&state.formed).enumerate() {
        match at {
            Some(k) => {
                if state.answer.amounts[*k] > 0.0 {
                    return Some(format!("less than nothing of solid {c}"));
                }
                let index = saturation_index(candidate, &state.answer.ln_components);
                if index.is_none_or(|index| index.abs() > 1e-10) {
                    return Some(format!("solid {c} is there at a saturation index of {index:?}"));
                }
            }
            None => {
                let index = saturation_index(candidate, &state.answer.ln_components);
                if index.is_some_and(|index| index > 1e-10) {
                    return Some(format!("solid {c} is supersaturated by {index:?}"));
                }
            }
        }
    }
    None
}

/// Whether what is held makes more ions than Davies' equation has a state for: a gas held
/// over a caustic can ask for 10^20 mol/L, which only ideal ions can be.
fn is_past_model(system: &System) -> bool {
    let mut ideal = system.clone();
    ideal.activity = IDEAL;
    ideal.candidates.clear();
    let answer = solve(&ideal, None, &AtomicBool::new(false));
    !system.fixed.is_empty() && answer.is_ok_and(|answer| answer.ionic_strength > 100.0)
}

struct Survey {
    name: &'static str,
    formed: Vec<usize>,
    iterations: Vec<u32>,
    more_than_components: usize,
    /// More ions than the activity model has a state for.
    past_model: usize,
    /// Proven to have no answer: no state, or one that never comes to rest.
    infeasible: usize,
    endless: usize,
    failures: Vec<String>,
}

impl Survey {
    fn new(name: &'static str) -> Self {
        let (formed, iterations, failures) = (Vec::new(), Vec::new(), Vec::new());
        Self {
            name,
            formed,
            iterations,
            more_than_components: 0,
            past_model: 0,
            infeasible: 0,
            endless: 0,
            failures,
        }
    }

    fn take(&mut self, seed: u64, system: &System, result: Result<Assemblage, Failure>) {
        self.more_than_components += usize::from(system.candidates.len() > system.totals.len());
        match result {
            Ok(state) => {
                self.formed.push(state.formed.iter().flatten().count());
                self.iterations.push(state.answer.iterations);
                if let Some(fault) = fault(system, &state) {
                    self.failures.push(format!("{} {seed}: {fault}", self.name));
                }
            }
            Err(Failure::Infeasible { .. }) => self.infeasible += 1,
            Err(Failure::Endless { .. }) => self.endless += 1,
            Err(Failure::NotConverged { .. }) if is_past_model(system) => self.past_model += 1,
            Err(other) => self.failures.push(format!("{} {seed}: {other:?}", self.name)),
        }
    }

    /// `provable` says whether this family holds problems without an answer.
    fn finish(mut self, provable: bool) {
        self.iterations.sort_unstable();
        self.formed.sort_unstable();
        assert!(!self.iterations.is_empty(), "{}: nothing was solved", self.name);
        let at = |list: &[u32], q: f64| list[((list.len() - 1) as f64 * q) as usize];
        println!(
            "{}: {} solved ({} with more solids than components), {} infeasible, {} endless, \
             {} past the model, {} failed; solids formed median {}, most {}; iterations median {}, 99 % {}, worst {}",
            self.name,
            self.iterations.len(),
            self.more_than_components,
            self.infeasible,
            self.endless,
            self.past_model,
            self.failures.len(),
            self.formed[self.formed.len() / 2],
            self.formed[self.formed.len() - 1],
            at(&self.iterations, 0.5),
            at(&self.iterations, 0.99),
            at(&self.iterations, 1.0)
        );
        assert!(self.formed[self.formed.len() - 1] > 1, "{}: no two solids formed", self.name);
        assert!(self.more_than_components > 0);
        let shown = self.failures.iter().take(20).cloned().collect::<Vec<_>>().join("\n");
        assert!(self.failures.is_empty(), "{shown}");
        assert!(
            provable || self.infeasible + self.endless + self.past_model == 0,
            "{}: not solved",
            self.name
        );
    }
}

#[test]
fn solids_form_or_do_not() {
    let mut survey = Survey::new("solids");
    for seed in 0..count(200) {
        let system = problem(&mut Random::new(seed));
        let result = run(&system);
        survey.take(seed, &system, result);
    }
    survey.finish(false);
}

#[test]
fn solids_with_davies_form_or_do_not() {
    let mut survey = Survey::new("solids with Davies");
    for seed in 0..count(200) {
        let mut system = problem(&mut Random::new(seed));
        system.activity = DAVIES;
        let result = run(&system);
        survey.take(seed, &system, result);
    }
    survey.finish(false);
}

/// Held phases never run out, so that some of these have no state of rest.
#[test]
fn solids_beside_held_phases_form_or_do_not() {
    let mut survey = Survey::new("solids, held phases");
    for seed in 0..count(200) {
        let random = &mut Random::new(seed);
        let mut system = problem(random);
        if random.chance(0.4) {
            hold_ph(&mut system, random.uniform(-1.0, 15.0));
        }
        for _ in 0..random.below(3) {
            hold_phase(random, &mut system);
        }
        if random.chance(0.5) {
            system.activity = DAVIES;
        }
        let result = run(&system);
        if matches!(result, Err(Failure::Dependent { .. })) {
            continue;
        }
        survey.take(seed, &system, result);
    }
    survey.finish(true);
}

/// A near answer is only a place to start from: the same solids are found.
#[test]
fn a_near_answer_leads_to_the_same_solids() {
    let mut compared = 0;
    for seed in 0..count(100) {
        let random = &mut Random::new(seed);
        let mut system = problem(random);
        let Ok(before) = run(&system) else { continue };
        let near = Near { answer: &before.answer, formed: &before.formed };
        let component = 1 + random.below(system.totals.len() - 1);
        let factor = 10f64.powf(random.uniform(-1.0, 1.0));
        let charge = system.totals[component] * (factor - 1.0);
        system.totals[component] += charge;
        let cold = run(&system);
        let warm = equilibrate(system.clone(), Some(near), &AtomicBool::new(false));
        match (cold, warm) {
            (Ok(cold), Ok(warm)) => {
                assert_eq!(fault(&system, &warm), None, "{seed}");
                let solids = |state: &Assemblage| -> Vec<bool> {
                    let amount = |k: usize| state.answer.amounts[k] < 0.0;
                    state.formed.iter().map(|at| at.is_some_and(amount)).collect()
                };
                assert_eq!(solids(&cold), solids(&warm), "{seed}");
                compared += 1;
            }
            (cold, warm) => {
                assert_eq!(cold.is_err(), warm.is_err(), "{seed}: {cold:?} {warm:?}")
            }
        }
    }
    assert!(compared > 0);
}
