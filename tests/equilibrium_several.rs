//! Equations that more than one state meets.

mod equilibrium_support;

use std::sync::atomic::AtomicBool;

use equilibrium_support::{DAVIES, IDEAL, LN_10, Random, chemistry_like, row, species};
use lyate::equilibrium::several::other_states;
use lyate::equilibrium::solve::solve;
use lyate::equilibrium::system::{Answer, Fixed, IonicStrength, System};

fn ph(answer: &Answer) -> f64 {
    -answer.ln_components[0] / LN_10
}

/// Sodium phosphate (pKa 2.148, 7.198, 12.35, from memory) with \[HPO4^2-\] held.
fn phosphate(sodium: f64, held: f64) -> System {
    let charges = [1, -3, 1];
    System {
        species: vec![
            species(&[(0, 1)], 0.0, &charges),
            species(&[(0, -1)], -13.995, &charges),
            species(&[(1, 1)], 0.0, &charges),
            species(&[(1, 1), (0, 1)], 12.35, &charges),
            species(&[(1, 1), (0, 2)], 19.548, &charges),
            species(&[(1, 1), (0, 3)], 21.696, &charges),
            species(&[(2, 1)], 0.0, &charges),
        ],
        totals: vec![-sodium, 0.0, sodium],
        fixed: vec![Fixed {
            row: row(&[(0, 1), (1, 1)]),
            ln_value: held.ln() - 12.35 * LN_10,
            concentration_of: Some((-2, 4.0)),
            // With counter-ions that the charge balance does not see: z of HPO4^2- off.
            supply: row(&[(0, 3), (1, 1)]),
        }],
        candidates: Vec::new(),
        activity: IDEAL,
        ionic_strength: IonicStrength::Computed,
    }
}

#[test]
fn phosphate_reaches_a_held_ion_on_the_way_up_and_on_the_way_down() {
    let cancel = AtomicBool::new(false);
    for activity in [IDEAL, DAVIES] {
        let mut system = phosphate(0.010, 0.001);
        system.activity = activity;
        let answer = solve(&system, None, &cancel).expect("two states");
        // The first 1.3 mmol/L of phosphoric acid reach it, and 9 mmol/L once more.
        assert!(ph(&answer) > 11.5, "{}", ph(&answer));
        let others = other_states(&system, &answer, &cancel).expect("nothing cancels");
        assert_eq!(others.len(), 1);
        assert!((ph(&others[0]) - 6.3).abs() < 0.2, "{}", ph(&others[0]));
        for state in [&answer, &others[0]] {
            assert!((state.concentrations[3] / 0.001 - 1.0).abs() < 1e-10);
            assert!(state.residual < 1e-12);
            let charges: f64 = system
                .species
                .iter()
                .zip(&state.concentrations)
                .map(|(s, c)| f64::from(s.charge) * c)
                .sum();
            assert!(charges.abs() < 1e-14, "{charges}");
        }
    }
    // The most that this much sodium can carry is reached once; beyond it, never.
    assert!(solve(&phosphate(0.010, 0.00495), None, &cancel).is_ok());
    assert!(solve(&phosphate(0.010, 0.00502), None, &cancel).is_err());
}

#[test]
fn ideal_systems_have_one_state() {
    let cancel = AtomicBool::new(false);
    for seed in 0..50 {
        let system = chemistry_like(&mut Random::new(seed), 5, 20);
        let answer = solve(&system, None, &cancel).expect("solved");
        assert_eq!(other_states(&system, &answer, &cancel), Ok(Vec::new()));
    }
}

/// M^z+ and L^z- with a neutral complex, both at one total: the ionic strengths at which
/// the equation that is left of it, x + K γ² x² = total with I = z² x, closes.
fn ionic_strengths(z: i32, total: f64, log_k: f64) -> Vec<f64> {
    let z2 = f64::from(z * z);
    let open = |i: f64| {
        let root = i.sqrt();
        let log_gamma = -0.5098 * z2 * (root / (1.0 + root) - 0.3 * i);
        let k = 10f64.powf(log_k + 2.0 * log_gamma);
        let x = 2.0 * total / (1.0 + (1.0 + 4.0 * k * total).sqrt());
        z2 * x - i
    };
    let mut found = Vec::new();
    let at = |n: u32| 10f64.powf(-6.0 + 0.005 * f64::from(n));
    for n in 0..1600 {
        let (mut low, mut high) = (at(n), at(n + 1));
        if open(low) * open(high) < 0.0 {
            for _ in 0..60 {
                let middle = 0.5 * (low + high);
                *(if open(low) * open(middle) > 0.0 { &mut low } else { &mut high }) = middle;
            }
            found.push(low);
        }
    }
    found
}

#[test]
fn ions_of_high_charge_can_have_several_states() {
    let cancel = AtomicBool::new(false);
    let (mut one, mut three) = (0, 0);
    for z in [3, 4, 5] {
        for total in [0.003, 0.01, 0.03, 0.1, 0.3] {
            for step in 0..12 {
                let log_k = 5.0 + 0.3 * f64::from(step);
                let charges = [1, i64::from(z), -i64::from(z)];
                let system = System {
                    species: vec![
                        species(&[(0, 1)], 0.0, &charges),
                        species(&[(0, -1)], -13.995, &charges),
                        species(&[(1, 1)], 0.0, &charges),
                        species(&[(2, 1)], 0.0, &charges),
                        species(&[(1, 1), (2, 1)], log_k, &charges),
                    ],
                    totals: vec![0.0, total, total],
                    fixed: Vec::new(),
                    candidates: Vec::new(),
                    activity: DAVIES,
                    ionic_strength: IonicStrength::Computed,
                };
                // Water's own ions count for next to nothing here.
                let expected = ionic_strengths(z, total, log_k);
                let answer = solve(&system, None, &cancel).expect("a state");
                let mut states = other_states(&system, &answer, &cancel).expect("no cancel");
                states.push(answer);
                let mut found: Vec<f64> = states.iter().map(|s| s.ionic_strength).collect();
                found.sort_by(f64::total_cmp);
                assert_eq!(found.len(), expected.len(), "{z} {total} {log_k}: {found:?}");
                for (found, expected) in found.iter().zip(&expected) {
                    let off = (found - expected).abs();
                    assert!(off < 1e-3 * expected + 3e-7, "{found} {expected}");
                }
                *(if found.len() == 1 { &mut one } else { &mut three }) += 1;
            }
        }
    }
    println!("one state: {one}; several: {three}");
    assert!(one > 50 && three > 10, "{one} {three}");
}
