//! The edges: absent components, recipes that leave a species out, redox, totals over
//! many decades, fractions and huge coefficients, and numbers that are none.

mod equilibrium_support;

use std::sync::atomic::AtomicBool;

use equilibrium_support::{DAVIES, IDEAL, LN_10, by_ionic_strength, hold_ph, row, species};
use lyate::chemistry::activity::ActivityKind;
use lyate::equilibrium::sensitivity::Sensitivity;
use lyate::equilibrium::solve::solve;
use lyate::equilibrium::system::{Answer, Failure, Fixed, IonicStrength, Species, System};
use num_rational::Rational64;
use proptest::prelude::*;

const NO_START: Option<&Answer> = None;

fn run(system: &System) -> Result<Answer, Failure> {
    solve(system, NO_START, &AtomicBool::new(false))
}

fn solved(system: &System) -> Answer {
    match run(system) {
        Ok(answer) => answer,
        Err(failure) => panic!("{failure:?} for {system:?}"),
    }
}

fn system(species: Vec<Species>, totals: &[f64]) -> System {
    System {
        species,
        totals: totals.to_vec(),
        fixed: Vec::new(),
        candidates: Vec::new(),
        activity: IDEAL,
        ionic_strength: IonicStrength::Computed,
    }
}

fn water(charges: &[i64]) -> Vec<Species> {
    vec![species(&[(0, 1)], 0.0, charges), species(&[(0, -1)], -14.0, charges)]
}

/// Equal but for rounding; zero only where it is zero.
fn same(found: &[f64], expected: &[f64]) {
    for (f, e) in found.iter().zip(expected) {
        assert!(f == e || (f / e - 1.0).abs() < 1e-14, "{found:?} {expected:?}");
    }
}

fn ph(answer: &Answer) -> f64 {
    -answer.ln_components[0] / LN_10
}

#[test]
fn water_alone_is_neutral() {
    for activity in [IDEAL, DAVIES] {
        let mut system = system(water(&[1]), &[0.0]);
        system.activity = activity;
        assert!((ph(&solved(&system)) - 7.0).abs() < 1e-12);
    }
}

#[test]
fn strong_acid_and_base_go_past_the_scale() {
    let acid = solved(&system(water(&[1]), &[12.0]));
    assert!((ph(&acid) + 12f64.log10()).abs() < 1e-12, "{}", ph(&acid));
    let base = solved(&system(water(&[1]), &[-20.0]));
    assert!((ph(&base) - 14.0 - 20f64.log10()).abs() < 1e-12, "{}", ph(&base));
}

#[test]
fn a_component_without_a_total_takes_its_species_along() {
    let charges = [1, 0, -2];
    let mut list = water(&charges);
    list.push(species(&[(1, 1)], 0.0, &charges));
    list.push(species(&[(1, 1), (0, 1)], 9.25, &charges));
    list.push(species(&[(2, 1)], 0.0, &charges));
    list.push(species(&[(2, 1), (1, 2)], 12.0, &charges));
    let answer = solved(&system(list.clone(), &[0.0, 0.0, 0.01]));
    assert_eq!(answer.ln_components[1], f64::NEG_INFINITY);
    same(&answer.concentrations[2..], &[0.0, 0.0, 0.01, 0.0]);
    // A gas brings it back.
    let mut held = system(list, &[0.0, 0.0, 0.01]);
    let gas = row(&[(1, 1)]);
    held.fixed.push(Fixed {
        row: gas.clone(),
        ln_value: 1e-3f64.ln(),
        water: 0.0,
        concentration_of: None,
        supply: gas,
    });
    let answer = solved(&held);
    assert!((answer.concentrations[2] / 1e-3 - 1.0).abs() < 1e-12);
    let brought: f64 =
        answer.concentrations[2] + answer.concentrations[3] + 2.0 * answer.concentrations[5];
    assert!((answer.amounts[0] / brought - 1.0).abs() < 1e-12);
}

#[test]
fn a_negative_total_of_what_only_adds_up_is_infeasible() {
    let charges = [1, 0];
    let mut list = water(&charges);
    list.push(species(&[(1, 1)], 0.0, &charges));
    assert_eq!(run(&system(list, &[0.0, -1e-9])), Err(Failure::Infeasible { component: 1 }));
}

/// The component is a complex, so that its ligand's total is negative in a plain salt.
#[test]
fn a_negative_total_is_right_where_a_species_takes_from_it() {
    let charges = [1, 0, 2];
    let list = |free: bool| {
        let mut list = water(&charges);
        list.push(species(&[(1, 1)], 0.0, &charges));
        list.push(species(&[(1, 1), (0, 1)], 9.25, &charges));
        list.push(species(&[(2, 1)], 0.0, &charges));
        if free {
            // The bare metal, from M(NH3)4.
            list.push(species(&[(2, 1), (1, -4)], -11.75, &charges));
        }
        list
    };
    // 10 mM metal, 30 mM ammonia: total of the ligand −4·10 + 30.
    let answer = solved(&system(list(true), &[0.0, -0.01, 0.01]));
    let ammonia =
        4.0 * answer.concentrations[4] + answer.concentrations[2] + answer.concentrations[3];
    assert!((ammonia / 0.03 - 1.0).abs() < 1e-12);
    // No ammonia at all, on the very edge: only the bare metal is left.
    let answer = solved(&system(list(true), &[0.0, -0.04, 0.01]));
    same(&answer.concentrations[2..], &[0.0, 0.0, 0.0, 0.01]);
    // Even with the rounding of 4 · 0.0031 against 0.0124 and the like.
    for n in 1..200 {
        let metal = f64::from(n) * 0.0007;
        let ligand = -(metal + metal + metal + metal) * (1.0 + f64::EPSILON * f64::from(n % 2));
        let answer = solved(&system(list(true), &[0.0, ligand, metal]));
        assert!((answer.concentrations[5] / metal - 1.0).abs() < 1e-14);
        assert!(answer.concentrations[4] < 1e-14 * metal);
    }
    // Beyond the edge.
    let beyond = run(&system(list(true), &[0.0, -0.05, 0.01]));
    assert_eq!(beyond, Err(Failure::Infeasible { component: 1 }));
}

/// Iron with the electron as a component that is no species.
fn iron(electrons: f64) -> System {
    let charges = [1, 2, -1];
    let mut list = water(&charges);
    list.push(species(&[(1, 1)], 0.0, &charges));
    list.push(species(&[(1, 1), (2, -1)], -13.0, &charges));
    list.push(species(&[(1, 1), (2, -1), (0, -1)], -15.19, &charges));
    system(list, &[0.02, 0.01, electrons])
}

#[test]
fn the_electron_needs_no_species_of_its_own() {
    // All reduced: no electron activity is left to speak of.
    let reduced = solved(&iron(0.0));
    same(&reduced.concentrations[2..], &[0.01, 0.0, 0.0]);
    assert_eq!(reduced.ln_components[2], f64::NEG_INFINITY);
    // All oxidised, on the other edge.
    let oxidised = solved(&iron(-0.01));
    assert_eq!(oxidised.concentrations[2], 0.0);
    assert!((oxidised.concentrations[3] + oxidised.concentrations[4] - 0.01).abs() < 1e-16);
    // In between the activity follows from the ratio.
    let between = solved(&iron(-0.004));
    let pe = -between.ln_components[2] / LN_10;
    let ratio = (between.concentrations[3] / between.concentrations[2]).log10();
    assert!((pe - 13.0 - ratio).abs() < 1e-12, "{pe}");
    assert!((between.concentrations[2] - 0.006).abs() < 1e-15);
    // More taken than there is.
    assert!(matches!(run(&iron(-0.011)), Err(Failure::Infeasible { .. })));
    assert!(matches!(run(&iron(0.001)), Err(Failure::Infeasible { .. })));
    // An answer on the edge starts the next one, and knows how it moves.
    let warm = solve(&iron(-0.004), Some(&oxidised), &AtomicBool::new(false));
    assert_eq!(warm.map(|a| a.residual < 1e-12), Ok(true));
    let on_edge = iron(-0.01);
    let sensitivity = Sensitivity::new(&on_edge, &oxidised);
    let response = sensitivity.as_ref().and_then(|s| s.by_total(0));
    assert!(response.is_some_and(|r| r.ph() < 0.0));
    assert_eq!(sensitivity.and_then(|s| s.by_total(2)), None);
}

/// Water between hydrogen and oxygen: amounts of 10⁻²⁸ decide the electron.
#[test]
fn redox_of_water_alone_is_solved() {
    let charges = [1, -1];
    let mut list = water(&charges);
    list.push(species(&[(0, 2), (1, 2)], -3.1, &charges));
    list.push(species(&[(0, -4), (1, -4)], -85.98, &charges));
    let answer = solved(&system(list, &[0.0, 0.0]));
    // 2 H2 = O2 · 4 in electrons.
    assert!((answer.concentrations[2] / (2.0 * answer.concentrations[3]) - 1.0).abs() < 1e-11);
    assert!((ph(&answer) - 7.0).abs() < 1e-9);
}

#[test]
fn fractional_coefficients_are_exact() {
    let charges = [1, 0];
    let half = Rational64::new(1, 2);
    // B is half a component: the total is in halves.
    let mut list = water(&charges);
    list.push(species(&[(1, 1)], 0.0, &charges));
    list.push(Species { row: vec![(1, half)], ln_k: 2.0, water: 0.0, charge: 0, ion_size: 0.0 });
    list.push(Species {
        row: vec![(0, Rational64::new(1, 3)), (1, Rational64::new(-1, 6))],
        ln_k: -3.0,
        charge: 0,
        water: 0.0,
        ion_size: 0.0,
    });
    let mut problem = system(list, &[0.001, 0.05]);
    let answer = solved(&problem);
    let c = &answer.concentrations;
    assert!((c[2] + 0.5 * c[3] - c[4] / 6.0 - 0.05).abs() < 1e-16);
    assert!((c[0] - c[1] + c[4] / 3.0 - 0.001).abs() < 1e-16);
    assert!((c[3].ln() - 2.0 - 0.5 * answer.ln_components[1]).abs() < 1e-12);
    // Held by a fractional row.
    problem.fixed.push(Fixed {
        row: vec![(1, half)],
        ln_value: -4.0,
        water: 0.0,
        concentration_of: None,
        supply: vec![(1, half)],
    });
    let answer = solved(&problem);
    assert!((answer.ln_components[1] + 8.0).abs() < 1e-12);
    let c = &answer.concentrations;
    let brought = c[2] + 0.5 * c[3] - c[4] / 6.0 - 0.05;
    assert!((0.5 * answer.amounts[0] / brought - 1.0).abs() < 1e-12);
}

#[test]
fn coefficients_past_machine_words_do_no_harm() {
    let charges = [1, 0, 0];
    let mut list = water(&charges);
    list.push(species(&[(1, 1)], 0.0, &charges));
    list.push(species(&[(2, 1)], 0.0, &charges));
    for (a, b) in [(1_000_003, 999_983), (999_979, 1_000_033), (1_000_037, 999_961)] {
        list.push(species(&[(1, a), (2, b)], 3e6, &charges));
    }
    let denominators = [(1, 999_999_937), (1, 999_999_929), (1, 999_999_893)];
    for (n, d) in denominators {
        let coefficient = Rational64::new(n, d);
        list.push(Species {
            row: vec![(2, coefficient)],
            ln_k: -9.0,
            water: 0.0,
            charge: 0,
            ion_size: 0.0,
        });
    }
    let answer = solved(&system(list, &[0.0, 0.01, 0.02]));
    assert!(answer.residual < 1e-12, "{}", answer.residual);
    let extreme = i64::MIN + 1;
    let mut list = water(&charges);
    list.push(species(&[(1, 1)], 0.0, &charges));
    list.push(Species {
        row: row(&[(1, i64::MAX), (0, extreme)]),
        ln_k: 0.0,
        charge: 0,
        water: 0.0,
        ion_size: 0.0,
    });
    // Whatever comes out, it comes out.
    let _ = run(&system(list, &[0.0, 0.01, 0.0]));
}

#[test]
fn constants_of_a_thousand_decades_are_solved() {
    let charges = [1, 0, 0];
    let mut list = water(&charges);
    list.push(species(&[(1, 1)], 0.0, &charges));
    list.push(species(&[(2, 1)], 0.0, &charges));
    list.push(species(&[(1, 2), (2, 1)], 1000.0, &charges));
    list.push(species(&[(1, 1), (0, 1)], -900.0, &charges));
    let answer = solved(&system(list, &[0.0, 0.02, 0.005]));
    assert!((answer.concentrations[4] - 0.005).abs() < 1e-16);
    assert!((answer.concentrations[2] - 0.01).abs() < 1e-16);
}

#[test]
fn numbers_that_are_none_fail_and_nothing_more() {
    let charges = [1, 0];
    for bad in [f64::NAN, f64::INFINITY, f64::NEG_INFINITY, 1e308, -1e308, 5e-324] {
        for place in 0..4 {
            for activity in [IDEAL, DAVIES, by_ionic_strength(ActivityKind::Davies, f64::NAN)] {
                let mut list = water(&charges);
                list.push(species(&[(1, 1)], 0.0, &charges));
                list.push(species(&[(1, 2), (0, 1)], 5.0, &charges));
                let mut problem = system(list, &[0.0, 0.01]);
                problem.activity = activity;
                match place {
                    0 => problem.totals[0] = bad,
                    1 => problem.totals[1] = bad,
                    2 => problem.species[3].ln_k = bad,
                    _ => {
                        hold_ph(&mut problem, 7.0);
                        problem.fixed[0].ln_value = bad;
                    }
                }
                if let Ok(answer) = run(&problem) {
                    assert!(answer.residual < 1e-9, "{problem:?} {answer:?}");
                }
                problem.ionic_strength = IonicStrength::Given(bad);
                let _ = run(&problem);
            }
        }
    }
    // An answer of another shape is no start, and no harm.
    let mut list = water(&charges);
    list.push(species(&[(1, 1)], 0.0, &charges));
    let problem = system(list, &[0.0, 0.01]);
    let other = solved(&system(water(&[1]), &[0.0]));
    let found = solve(&problem, Some(&other), &AtomicBool::new(false));
    assert_eq!(found.map(|a| (a.concentrations[2] / 0.01 - 1.0).abs() < 1e-14), Ok(true));
    assert!(Sensitivity::new(&problem, &other).is_none());
}

#[test]
fn everything_held_leaves_only_amounts() {
    let charges = [1, 0];
    let mut list = water(&charges);
    list.push(species(&[(1, 1)], 0.0, &charges));
    let mut problem = system(list, &[0.0, 0.01]);
    problem.activity = DAVIES;
    hold_ph(&mut problem, 3.0);
    let held = row(&[(1, 1)]);
    problem.fixed.push(Fixed {
        row: held.clone(),
        ln_value: 0.5f64.ln(),
        water: 0.0,
        concentration_of: None,
        supply: held,
    });
    let answer = solved(&problem);
    assert!((answer.concentrations[2] - 0.5).abs() < 1e-15);
    assert!((answer.amounts[1] - 0.49).abs() < 1e-15);
    assert!((ph(&answer) - 3.0).abs() < 1e-14);
    assert!(answer.concentrations[0] > 1e-3, "an activity below one");
}

proptest! {
    #![proptest_config(ProptestConfig { failure_persistence: None, ..ProptestConfig::default() })]

    /// Acids and metals with a shared ligand, any constants and totals a chemist could
    /// write: solved, whatever they are.
    #[test]
    fn any_well_posed_problem_solves(
        pkas in prop::collection::vec(-3.0..16.0f64, 1..4),
        betas in prop::collection::vec(-4.0..35.0f64, 0..5),
        ligand in -14.0..1.0f64,
        metal in -14.0..1.0f64,
        acid in -10.0..10.0f64,
        charge in -4i64..3,
        davies in any::<bool>(),
    ) {
        let charges = [1, charge, 2];
        let mut list = water(&charges);
        list.push(species(&[(1, 1)], 0.0, &charges));
        list.push(species(&[(2, 1)], 0.0, &charges));
        let mut log_beta = 0.0;
        for (n, pka) in pkas.iter().enumerate() {
            log_beta += pka;
            list.push(species(&[(1, 1), (0, n as i64 + 1)], log_beta, &charges));
        }
        for (n, beta) in betas.iter().enumerate() {
            list.push(species(&[(2, 1), (1, n as i64 + 1)], *beta, &charges));
        }
        let acid = acid.signum() * 10f64.powf(acid.abs() - 10.0);
        let mut problem = system(list, &[acid, 10f64.powf(ligand), 10f64.powf(metal)]);
        if davies {
            problem.activity = DAVIES;
        }
        let answer = run(&problem);
        prop_assert!(answer.is_ok(), "{answer:?}");
        if let Ok(answer) = answer {
            prop_assert!(answer.residual < 2e-12, "{}", answer.residual);
            prop_assert!(answer.concentrations.iter().all(|c| *c >= 0.0));
        }
    }
}
