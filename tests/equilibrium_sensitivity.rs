//! The derivatives against differences of whole solves, and the buffer capacity against
//! its textbook sum.

mod equilibrium_support;

use std::sync::atomic::AtomicBool;

use equilibrium_support::{DAVIES, IDEAL, LN_10, Random, chemistry_like, hold_ph, row, species};
use lyate::equilibrium::sensitivity::{Response, Sensitivity, buffer_capacity};
use lyate::equilibrium::solve::solve;
use lyate::equilibrium::system::{Answer, Fixed, IonicStrength, System};

fn run(system: &System, start: Option<&Answer>) -> Answer {
    match solve(system, start, &AtomicBool::new(false)) {
        Ok(answer) => answer,
        Err(failure) => panic!("{failure:?} for {system:?}"),
    }
}

/// Compares a response with the central difference over `±step` of a change.
fn check(
    what: &str,
    system: &System,
    answer: &Answer,
    response: &Response,
    step: f64,
    change: impl Fn(&mut System, f64),
) {
    let moved = |by: f64| {
        let mut moved = system.clone();
        change(&mut moved, by);
        run(&moved, Some(answer))
    };
    let (up, down) = (moved(step), moved(-step));
    // Differences of logarithms are good to about 1e-13 / step, and to step².
    let near = |found: f64, up: f64, down: f64, name: &str| {
        let difference = (up - down) / (2.0 * step);
        let size = difference.abs().max(found.abs());
        let moved = (up - down).abs();
        assert!(
            (found - difference).abs() <= 1e-4 * size + 1e-12 / step || moved < 1e-10,
            "{what}, {name}: {found} against {difference}"
        );
    };
    for l in 0..system.totals.len() {
        near(response.ln_components[l], up.ln_components[l], down.ln_components[l], "component");
    }
    for i in 0..system.species.len() {
        let ln = |a: &Answer| a.concentrations[i].ln();
        near(response.ln_concentrations[i], ln(&up), ln(&down), "species");
    }
    for k in 0..system.fixed.len() {
        let scale = answer.amounts[k].abs().max(1e-12);
        near(response.amounts[k] / scale, up.amounts[k] / scale, down.amounts[k] / scale, "amount");
    }
}

#[test]
fn derivatives_are_the_differences_of_solves() {
    let mut compared = 0;
    for seed in 0..60 {
        let random = &mut Random::new(seed);
        let components = 2 + random.below(4);
        let mut system = chemistry_like(random, components, 14);
        system.totals.iter_mut().skip(1).for_each(|t| *t = t.max(1e-6));
        if random.chance(0.6) {
            system.activity = DAVIES;
        }
        if random.chance(0.3) {
            hold_ph(&mut system, random.uniform(3.0, 11.0));
        }
        if seed % 20 == 7 {
            // An ion by its concentration, with a counter-ion as it comes.
            let i = 2 + random.below(components - 1);
            let held = system.species[i].clone();
            let j = held.row[0].0;
            system.totals[j] = 0.0;
            let ln_value = -random.uniform(4.0, 8.0);
            system.fixed.push(Fixed {
                row: held.row,
                ln_value,
                water: 0.0,
                concentration_of: Some(i),
                supply: row(&[(0, -i64::from(held.charge)), (j, 1)]),
            });
        }
        let Ok(answer) = solve(&system, None, &AtomicBool::new(false)) else {
            // An ion can be held where no pH closes the charge.
            assert!(!system.fixed.is_empty(), "{seed}");
            continue;
        };
        if answer.concentrations.iter().any(|c| *c > 10.0) {
            // Held far from any water: rounding alone would move what is compared.
            continue;
        }
        compared += 1;
        let Some(sensitivity) = Sensitivity::new(&system, &answer) else {
            panic!("{seed}: no sensitivity");
        };
        // Each solve with a held ion is a walk over the pH: only some of them.
        let few = seed % 20 == 7;
        for l in 0..if few { 1 } else { system.totals.len() } {
            let Some(response) = sensitivity.by_total(l) else { continue };
            let largest = response.ln_components.iter().fold(0.0f64, |m, v| m.max(v.abs()));
            let step = 1e-5 / largest.max(1.0);
            check(&format!("{seed}, total {l}"), &system, &answer, &response, step, |s, by| {
                s.totals[l] += by;
            });
        }
        for _ in 0..if few { 1 } else { 3 } {
            let i = random.below(system.species.len());
            let Some(response) = sensitivity.by_ln_k(i) else { panic!("{seed}") };
            check(&format!("{seed}, ln k {i}"), &system, &answer, &response, 1e-5, |s, by| {
                s.species[i].ln_k += by;
            });
        }
        for k in (0..system.fixed.len()).rev().take(if few { 1 } else { 2 }) {
            let Some(response) = sensitivity.by_fixed(k) else { panic!("{seed}") };
            check(&format!("{seed}, held {k}"), &system, &answer, &response, 1e-5, |s, by| {
                s.fixed[k].ln_value += by;
            });
        }
    }
    assert!(compared > 40, "{compared}");
}

/// Acetic acid (pKa 4.756) and ammonia (pKa of NH4+ 9.25), constants from memory; the
/// totals are ours.
fn two_buffers() -> System {
    let charges = [1, -1, 0];
    System {
        species: vec![
            species(&[(0, 1)], 0.0, &charges),
            species(&[(0, -1)], -13.995, &charges),
            species(&[(1, 1)], 0.0, &charges),
            species(&[(1, 1), (0, 1)], 4.756, &charges),
            species(&[(2, 1)], 0.0, &charges),
            species(&[(2, 1), (0, 1)], 9.25, &charges),
        ],
        totals: vec![0.012, 0.02, 0.005],
        fixed: Vec::new(),
        candidates: Vec::new(),
        activity: IDEAL,
        ionic_strength: IonicStrength::Computed,
    }
}

/// Van Slyke's sum (D. D. Van Slyke, J. Biol. Chem. 52, 525, 1922; from memory):
/// ln 10 (\[H\] + \[OH\] + Σ C K \[H\] / (K + \[H\])²).
#[test]
fn buffer_capacity_is_van_slykes_sum() {
    let system = two_buffers();
    for ph in [None, Some(4.0), Some(7.0), Some(9.5)] {
        let mut system = system.clone();
        if let Some(ph) = ph {
            hold_ph(&mut system, ph);
        }
        let answer = run(&system, None);
        let h = answer.concentrations[0];
        let oh = answer.concentrations[1];
        let share = |total: f64, pka: f64| {
            let k = 10f64.powf(-pka);
            total * k * h / (k + h).powi(2)
        };
        let sum = LN_10 * (h + oh + share(0.02, 4.756) + share(0.005, 9.25));
        let found = buffer_capacity(&system, &answer).unwrap_or(f64::NAN);
        assert!((found / sum - 1.0).abs() < 1e-10, "{found} against {sum} at {ph:?}");
    }
}

#[test]
fn a_ph_that_cannot_move_has_no_buffer_capacity() {
    let mut system = two_buffers();
    // Both forms of ammonia held: the pH follows from them.
    for entries in [&[(2, 1)][..], &[(0, 1), (2, 1)]] {
        let held = row(entries);
        let supply = held.clone();
        system.fixed.push(Fixed {
            row: held,
            ln_value: -10.0,
            water: 0.0,
            concentration_of: None,
            supply,
        });
    }
    let answer = run(&system, None);
    assert_eq!(buffer_capacity(&system, &answer), None);
}
