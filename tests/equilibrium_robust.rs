//! Whether random problems are solved: every well-posed one, and the answers that are
//! known beforehand. `LYATE_PROBLEMS=100000 cargo test --release --test
//! equilibrium_robust -- --nocapture` is the long form.

mod equilibrium_support;

use std::sync::atomic::AtomicBool;

use equilibrium_support::{
    DAVIES, LN_10, Random, adversarial, chemistry_like, hold_ph, row, sample, species,
};
use lyate::equilibrium::solve::solve;
use lyate::equilibrium::system::{Answer, Failure, Fixed, IonicStrength, System};

/// How many problems of a family: `short`, or so much of the long form.
fn count(short: u64) -> u64 {
    let long = std::env::var("LYATE_PROBLEMS").ok().and_then(|n| n.parse::<u64>().ok());
    long.map_or(short, |n| n.max(1))
}

struct Survey {
    name: &'static str,
    iterations: Vec<u32>,
    failures: Vec<String>,
}

impl Survey {
    fn new(name: &'static str) -> Self {
        Self { name, iterations: Vec::new(), failures: Vec::new() }
    }

    /// Counts a solve; the answer where there is one and its rows close.
    fn take(&mut self, seed: u64, result: Result<Answer, Failure>) -> Option<Answer> {
        match result {
            Ok(answer) if answer.residual <= 2e-12 => {
                self.iterations.push(answer.iterations);
                Some(answer)
            }
            Ok(answer) => {
                self.fail(seed, format!("closed only to {:e}", answer.residual));
                None
            }
            Err(failure) => {
                self.fail(seed, format!("{failure:?}"));
                None
            }
        }
    }

    fn fail(&mut self, seed: u64, what: String) {
        self.failures.push(format!("{} {seed}: {what}", self.name));
    }

    fn finish(mut self, allowed: usize) {
        self.iterations.sort_unstable();
        assert!(!self.iterations.is_empty(), "{}: nothing was solved", self.name);
        let at = |q: f64| self.iterations[((self.iterations.len() - 1) as f64 * q) as usize];
        println!(
            "{}: {} solved, {} failed; iterations median {}, 99 % {}, worst {}",
            self.name,
            self.iterations.len(),
            self.failures.len(),
            at(0.5),
            at(0.99),
            at(1.0)
        );
        let shown = self.failures.iter().take(20).cloned().collect::<Vec<_>>().join("\n");
        assert!(self.failures.len() <= allowed, "{shown}");
    }
}

fn run(system: &System) -> Result<Answer, Failure> {
    solve(system, None, &AtomicBool::new(false))
}

fn chemistry(seed: u64) -> System {
    let random = &mut Random::new(seed);
    let components = 2 + random.below(11);
    let species = 5 + random.below(56);
    chemistry_like(random, components, species)
}

#[test]
fn chemistry_like_problems_solve() {
    let mut survey = Survey::new("chemistry-like");
    for seed in 0..count(600) {
        survey.take(seed, run(&chemistry(seed)));
    }
    survey.finish(0);
}

#[test]
fn adversarial_problems_give_the_answer_they_were_made_from() {
    let mut survey = Survey::new("adversarial");
    for seed in 0..count(600) {
        let random = &mut Random::new(seed);
        let components = 2 + random.below(11);
        let species = components + random.below(49);
        let (system, concentrations) = adversarial(random, components, species);
        if let Some(answer) = survey.take(seed, run(&system)) {
            // The totals are rounded, so that only what is not small beside them is known.
            let most = concentrations.iter().fold(0.0f64, |most, c| most.max(*c));
            for (i, (made, found)) in concentrations.iter().zip(&answer.concentrations).enumerate()
            {
                let off = (made - found).abs();
                if off > 1e-9 * made && off > 1e-13 * most {
                    survey.fail(seed, format!("species {i}: {found:e}, made with {made:e}"));
                    break;
                }
            }
        }
    }
    survey.finish(0);
}

#[test]
fn davies_problems_solve() {
    let mut survey = Survey::new("Davies");
    for seed in 0..count(400) {
        let mut system = chemistry(seed);
        system.activity = DAVIES;
        if let Some(answer) = survey.take(seed, run(&system)) {
            let terms = system.species.iter().zip(&answer.concentrations);
            let sum: f64 = terms.map(|(s, c)| 0.5 * f64::from(s.charge).powi(2) * c).sum();
            if (sum / answer.ionic_strength - 1.0).abs() > 1e-11 {
                survey.fail(seed, format!("ionic strength {sum}, not {}", answer.ionic_strength));
            }
        }
    }
    survey.finish(0);
}

#[test]
fn problems_at_a_given_ionic_strength_solve() {
    let mut survey = Survey::new("given ionic strength");
    for seed in 0..count(200) {
        let mut system = chemistry(seed);
        system.activity = DAVIES;
        let random = &mut Random::new(!seed);
        system.ionic_strength = IonicStrength::Given(10f64.powf(random.uniform(-5.0, 0.3)));
        survey.take(seed, run(&system));
    }
    survey.finish(0);
}

#[test]
fn a_held_ph_solves_and_the_amount_closes_the_charge() {
    let mut survey = Survey::new("held pH");
    for seed in 0..count(300) {
        let mut system = chemistry(seed);
        let random = &mut Random::new(!seed);
        if random.chance(0.5) {
            system.activity = DAVIES;
        }
        let ph = random.uniform(-1.0, 15.0);
        hold_ph(&mut system, ph);
        if let Some(answer) = survey.take(seed, run(&system))
            && (answer.ln_components[0] + ph * LN_10).abs() > 1e-12 * ph.abs().max(1.0)
        {
            survey.fail(seed, format!("pH {}", -answer.ln_components[0] / LN_10));
        }
    }
    survey.finish(0);
}

/// Holds the value that a species has in a solved state and forgets the total of one of
/// its components: that state is one of those possible, and the amount given is what it
/// takes of the held phase.
fn hold_solved(
    system: &System,
    answer: &Answer,
    i: usize,
    by_concentration: bool,
) -> (System, f64) {
    let species = &system.species[i];
    let mut held = system.clone();
    let component = species.row.iter().map(|e| e.0).find(|j| *j != 0).unwrap_or(0);
    let ln_c = answer.concentrations[i].ln();
    let mut supply = species.row.clone();
    let charge = num_rational::Rational64::from_integer(i64::from(species.charge));
    match supply.iter().position(|e| e.0 == 0) {
        Some(at) => supply[at].1 -= charge,
        None => supply.insert(0, (0, -charge)),
    }
    supply.retain(|e| *e.1.numer() != 0);
    // What is taken off the totals is what the phase must bring.
    let coefficient = species
        .row
        .iter()
        .find(|e| e.0 == component)
        .map_or(1.0, |e| *e.1.numer() as f64 / *e.1.denom() as f64);
    let amount = system.totals[component] / coefficient;
    for (j, n) in &supply {
        held.totals[*j] -= amount * *n.numer() as f64 / *n.denom() as f64;
    }
    held.totals[component] = 0.0;
    let ln_gamma = answer.ln_gammas[i];
    held.fixed.push(Fixed {
        row: species.row.clone(),
        ln_value: ln_c - species.ln_k + if by_concentration { 0.0 } else { ln_gamma },
        water: 0.0,
        concentration_of: by_concentration.then_some(i),
        supply,
    });
    (held, amount)
}

fn held_species(name: &'static str, problems: u64, charged: bool) {
    let mut survey = Survey::new(name);
    let mut other = 0;
    for seed in 0..count(problems) {
        let random = &mut Random::new(!seed);
        // Ions take a walk over the pH each: smaller problems.
        let components = 2 + random.below(5);
        let mut system =
            if charged { chemistry_like(random, components, 18) } else { chemistry(seed) };
        if random.chance(0.5) {
            system.activity = DAVIES;
        }
        let Ok(answer) = run(&system) else {
            survey.fail(seed, "not solved without a held value".into());
            continue;
        };
        // A species that its component is not a trace in.
        let candidates: Vec<usize> = (2..system.species.len())
            .filter(|&i| (system.species[i].charge != 0) == charged)
            .filter(|&i| answer.concentrations[i] > 1e-14)
            .filter(|&i| system.species[i].row.iter().any(|e| e.0 != 0 && *e.1.numer() > 0))
            .collect();
        if candidates.is_empty() {
            continue;
        }
        let i = candidates[random.below(candidates.len())];
        let (held, amount) = hold_solved(&system, &answer, i, random.chance(0.5));
        if let Some(found) = survey.take(seed, run(&held))
            && (found.ln_components[0] - answer.ln_components[0]).abs() > 1e-6
        {
            other += 1;
            // Of several states the one that takes least is given.
            if charged && found.amounts[0].abs() > amount.abs() * (1.0 + 1e-6) {
                survey.fail(seed, format!("takes {}, not {amount}", found.amounts[0]));
            }
        }
    }
    println!("{name}: another state than the one it was made from in {other}");
    // An ion held where the activity model is far past its range can have states out of
    // reach; no other problem may fail.
    survey.finish(if charged { count(problems) as usize / 300 } else { 0 });
}

#[test]
fn a_held_neutral_species_solves() {
    held_species("held neutral species", 300, false);
}

#[test]
fn a_held_ion_solves() {
    held_species("held ion", 15, true);
}

/// Whether amounts, none negative, give the totals: some choice of as many independent
/// rows as there are components does it alone (Carathéodory), tried one by one.
fn reachable(rows: &[Vec<i64>], totals: &[i64]) -> bool {
    let m = totals.len();
    let determinant = |columns: &[&[i64]]| match columns {
        [a] => a[0],
        [a, b] => a[0] * b[1] - a[1] * b[0],
        [a, b, c] => {
            a[0] * (b[1] * c[2] - b[2] * c[1]) - a[1] * (b[0] * c[2] - b[2] * c[0])
                + a[2] * (b[0] * c[1] - b[1] * c[0])
        }
        _ => unreachable!("small problems only"),
    };
    sample::choices(rows.len(), m).into_iter().any(|choice| {
        let basis: Vec<&[i64]> = choice.iter().map(|&i| rows[i].as_slice()).collect();
        let whole = determinant(&basis);
        whole != 0
            && (0..m).all(|k| {
                let mut replaced = basis.clone();
                replaced[k] = totals;
                determinant(&replaced) * whole.signum() >= 0
            })
    })
}

/// Small problems with any totals at all: solved where they can be, and proven to have
/// no answer where they have none. A third of them lie on the very edge, where species
/// must vanish.
#[test]
fn what_has_no_answer_is_proven_so_and_everything_else_is_solved() {
    let mut survey = Survey::new("any totals");
    let mut impossible = 0;
    for seed in 0..count(3000) {
        let random = &mut Random::new(seed);
        let m = 1 + random.below(3);
        let mut rows: Vec<Vec<i64>> = Vec::new();
        for j in 0..m {
            rows.push((0..m).map(|l| i64::from(l == j)).collect());
        }
        // The first component plays the proton: it can always be given and taken.
        rows.push((0..m).map(|l| if l == 0 { -1 } else { 0 }).collect());
        for _ in 0..random.below(6) {
            let fresh: Vec<i64> = (0..m).map(|_| random.between(-3, 3)).collect();
            if fresh.iter().any(|n| *n != 0) && !rows.contains(&fresh) {
                rows.push(fresh);
            }
        }
        let mut totals: Vec<i64> = vec![0; m];
        if random.chance(0.5) {
            totals.iter_mut().for_each(|t| *t = random.between(-4, 8));
        } else {
            for _ in 0..random.between(1, 2) {
                let chosen = random.below(rows.len());
                let times = random.between(1, 3);
                (0..m).for_each(|j| totals[j] += times * rows[chosen][j]);
            }
        }
        let charges = vec![0; m];
        let system = System {
            species: rows
                .iter()
                .map(|r| {
                    let entries: Vec<_> = r.iter().copied().enumerate().collect();
                    species(&entries, random.uniform(-20.0, 20.0), &charges)
                })
                .collect(),
            totals: totals.iter().map(|t| *t as f64 * 0.125).collect(),
            fixed: Vec::new(),
            candidates: Vec::new(),
            activity: equilibrium_support::IDEAL,
            ionic_strength: IonicStrength::Computed,
        };
        let possible = reachable(&rows, &totals);
        match run(&system) {
            Err(Failure::Infeasible { .. }) if !possible => impossible += 1,
            Ok(_) if !possible => survey.fail(seed, "solved what has no answer".into()),
            result => {
                survey.take(seed, result);
            }
        }
    }
    println!("any totals: {impossible} proven to have no answer");
    assert!(impossible > 0);
    survey.finish(0);
}

#[test]
fn dependent_rows_and_held_values_are_named() {
    let charges = [1, 0, 0];
    let acid = |entries: &[(usize, i64)], log_k: f64| species(entries, log_k, &charges);
    // Two components that only occur together.
    let system = System {
        species: vec![acid(&[(0, 1)], 0.0), acid(&[(0, -1)], -14.0), acid(&[(1, 1), (2, 1)], 3.0)],
        totals: vec![0.0, 0.01, 0.01],
        fixed: Vec::new(),
        candidates: Vec::new(),
        activity: equilibrium_support::IDEAL,
        ionic_strength: IonicStrength::Computed,
    };
    let dependent = Err(Failure::Dependent { components: vec![1, 2], fixed: vec![] });
    assert_eq!(run(&system), dependent);
    let mut uneven = system.clone();
    uneven.totals[2] = 0.02;
    assert!(matches!(run(&uneven), Err(Failure::Infeasible { .. })));
    // The pH held, and a gas and its ion that fix it as well.
    let mut held = system;
    held.species.push(acid(&[(1, 1)], 0.0));
    held.species.push(acid(&[(2, 1)], 0.0));
    for entries in [&[(0, 1)][..], &[(1, 1)], &[(0, 1), (1, 1)]] {
        let held_row = row(entries);
        held.fixed.push(Fixed {
            row: held_row.clone(),
            ln_value: -10.0,
            water: 0.0,
            concentration_of: None,
            supply: held_row,
        });
    }
    let dependent = Err(Failure::Dependent { components: vec![], fixed: vec![0, 1, 2] });
    assert_eq!(run(&held), dependent);
}

#[test]
fn a_raised_flag_stops_the_search() {
    let cancelled = AtomicBool::new(true);
    assert_eq!(solve(&chemistry(1), None, &cancelled), Err(Failure::Cancelled));
}
