//! Dominant terms against problems solved without the species, and against trying every
//! set of terms.

mod equilibrium_support;

use std::sync::atomic::AtomicBool;

use equilibrium_support::{DAVIES, IDEAL, LN_10, Random, chemistry_like, hold_ph, sample, species};
use lyate::equilibrium::dominance::{
    Balance, Decides, Dominance, DominanceTerm, TOLERANCE, dominance,
};
use lyate::equilibrium::solve::solve;
use lyate::equilibrium::system::{Answer, IonicStrength, System};

fn run(system: &System) -> Answer {
    match solve(system, None, &AtomicBool::new(false)) {
        Ok(answer) => answer,
        Err(failure) => panic!("{failure:?} for {system:?}"),
    }
}

fn ph(answer: &Answer) -> f64 {
    -answer.ln_components[0] / LN_10
}

fn weigh(system: &System, balance: &Balance) -> Dominance {
    match dominance(system, &run(system), balance, &AtomicBool::new(false)) {
        Ok(dominance) => dominance,
        Err(failure) => panic!("{failure:?} for {system:?}"),
    }
}

/// Ammonia (pKa of NH4+ 9.25, from memory) as 12 mmol/L of its sulfate, with caustic.
/// Species: H+, OH-, NH3, NH4+, Na+, SO4^2-, HSO4-.
fn ammonia(caustic: f64) -> System {
    let charges = [1, 0, 1, -2];
    System {
        species: vec![
            species(&[(0, 1)], 0.0, &charges),
            species(&[(0, -1)], -13.995, &charges),
            species(&[(1, 1)], 0.0, &charges),
            species(&[(1, 1), (0, 1)], 9.25, &charges),
            species(&[(2, 1)], 0.0, &charges),
            species(&[(3, 1)], 0.0, &charges),
            species(&[(3, 1), (0, 1)], 1.99, &charges),
        ],
        totals: vec![2.0 * 0.012 - caustic, 0.024, caustic, 0.012],
        fixed: Vec::new(),
        candidates: Vec::new(),
        activity: DAVIES,
        ionic_strength: IonicStrength::Computed,
    }
}

/// \[H+\] + \[HSO4-\] + added NaOH = \[OH-\] + \[NH3\]: the proton condition over NH4+ and
/// SO4^2-.
fn proton_condition(caustic: f64) -> Balance {
    use DominanceTerm::{Constant, Species};
    Balance {
        decides: Decides::Ph,
        left: vec![(1.0, Species(0)), (1.0, Species(6)), (1.0, Constant(caustic))],
        right: vec![(1.0, Species(1)), (1.0, Species(2))],
    }
}

#[test]
fn caustic_and_free_ammonia_carry_the_proton_condition() {
    let system = ammonia(0.009);
    let found = weigh(&system, &proton_condition(0.009));
    let dominant = |side: &[lyate::equilibrium::dominance::TermWeight]| -> Vec<bool> {
        side.iter().map(|t| t.dominant).collect()
    };
    assert_eq!(dominant(&found.left), [false, false, true]);
    assert_eq!(dominant(&found.right), [false, true]);
    // Without hydroxide as a species at all, the balances are those without its term.
    let mut without = system.clone();
    without.species.remove(1);
    // Its share of the ionic strength goes too; the difference is beyond first order.
    let moved = ph(&run(&without)) - ph(&run(&system));
    let shift = found.right[0].ph_shift.unwrap_or(f64::NAN);
    assert!((shift - moved).abs() < 2e-5, "{shift} against {moved}");
    // Nothing but [H+] and [HSO4-] could stand against free ammonia.
    let without_caustic = found.left[2].ph_shift.unwrap_or(f64::NAN);
    assert!(without_caustic < -2.0, "{without_caustic}");
    assert!((found.left[2].share - 1.0).abs() < 1e-6);
    assert_eq!(found.left[2].value, 0.009);
}

#[test]
fn a_shift_past_the_tolerance_is_exact() {
    // So much caustic that hydroxide matters, ideal so that only the term counts.
    let mut system = ammonia(0.025);
    system.activity = IDEAL;
    let found = weigh(&system, &proton_condition(0.025));
    let mut without = system.clone();
    without.species.remove(1);
    let found = found.right[0];
    match solve(&without, None, &AtomicBool::new(false)) {
        Ok(answer) => {
            let moved = ph(&answer) - ph(&run(&system));
            assert!((found.ph_shift.unwrap_or(f64::NAN) - moved).abs() < 1e-6);
        }
        // More caustic than ammonia: without hydroxide there is nowhere for it to go.
        Err(_) => assert_eq!(found.ph_shift, None),
    }
    assert!(found.dominant);
    let mut system = ammonia(0.0235);
    system.activity = IDEAL;
    let found = weigh(&system, &proton_condition(0.0235)).right[0];
    let mut without = system.clone();
    without.species.remove(1);
    let moved = ph(&run(&without)) - ph(&run(&system));
    assert!(moved > TOLERANCE, "{moved}");
    assert!((found.ph_shift.unwrap_or(f64::NAN) - moved).abs() < 1e-6, "{found:?} {moved}");
}

#[test]
fn a_mass_balance_rests_on_what_holds_most_of_it() {
    use DominanceTerm::{Constant, Species};
    let mut system = ammonia(0.022);
    system.activity = IDEAL;
    let balance = Balance {
        decides: Decides::Component(1),
        left: vec![(1.0, Species(3)), (1.0, Species(2))],
        right: vec![(1.0, Constant(0.024))],
    };
    let found = weigh(&system, &balance);
    assert!(found.left[0].dominant && found.left[1].dominant && found.right[0].dominant);
    assert_eq!(found.right[0].ph_shift, None);
    // Without NH4+ in its balance NH3 alone comes to the total; the charge balance stays.
    // The same state by fixed-point iteration on the total of all ammonia.
    let mut moved = system.clone();
    let mut answer = run(&moved);
    let charge_carried = moved.totals[0];
    for _ in 0..200 {
        let all = 0.024 + answer.concentrations[3];
        moved.totals[1] = 0.5 * (moved.totals[1] + all);
        // NH3 has no charge: the proton's row is not touched.
        moved.totals[0] = charge_carried;
        answer = run(&moved);
    }
    let shift = ph(&answer) - ph(&run(&system));
    assert!(shift.abs() > TOLERANCE);
    let given = found.left[0].ph_shift.unwrap_or(f64::NAN);
    assert!((given - shift).abs() < 1e-6, "{given} against {shift}");
    // At pH 7 NH3 is 0.6 % of it and does not matter.
    let mut system = ammonia(0.0001);
    system.activity = IDEAL;
    let found = weigh(&system, &balance);
    assert!(found.left[0].dominant && !found.left[1].dominant);
}

#[test]
fn with_the_ph_held_only_shares_are_given() {
    let mut system = ammonia(0.009);
    hold_ph(&mut system, 9.0);
    let found = weigh(&system, &proton_condition(0.009));
    assert!(found.left.iter().chain(&found.right).all(|t| t.ph_shift.is_none()));
    assert!(found.right[1].dominant && !found.right[0].dominant);
}

/// The charge balance of a system.
fn charge_balance(system: &System) -> Balance {
    let side = |sign: i32| {
        let ions = system.species.iter().enumerate().filter(|(_, s)| s.charge.signum() == sign);
        ions.map(|(i, s)| (f64::from(s.charge.abs()), DominanceTerm::Species(i))).collect()
    };
    Balance { decides: Decides::Ph, left: side(1), right: side(-1) }
}

#[test]
fn no_smaller_set_of_terms_would_do() {
    let mut compared = 0;
    for seed in 0..400 {
        let random = &mut Random::new(seed);
        let components = 2 + random.below(5);
        let mut system = chemistry_like(random, components, 12);
        if random.chance(0.5) {
            system.activity = DAVIES;
        }
        // Electrically neutral, so that the charge balance is what decides the pH.
        let free = |j: usize| {
            let alone = equilibrium_support::row(&[(j, 1)]);
            system.species.iter().find(|s| s.row == alone).map_or(0, |s| s.charge)
        };
        let charge: f64 = (1..components).map(|j| f64::from(free(j)) * system.totals[j]).sum();
        system.totals[0] = -charge;
        let balance = charge_balance(&system);
        let found = weigh(&system, &balance);
        let answer = run(&system);
        let at = |offset: f64| {
            let mut held = system.clone();
            hold_ph(&mut held, ph(&answer) + offset);
            let state = run(&held);
            let value = |sign: f64, side: &[(f64, DominanceTerm)]| -> Vec<f64> {
                side.iter()
                    .map(|(n, what)| match what {
                        DominanceTerm::Species(i) => sign * n * state.concentrations[*i],
                        DominanceTerm::Constant(amount) => sign * n * amount,
                    })
                    .collect()
            };
            [value(1.0, &balance.left), value(-1.0, &balance.right)].concat()
        };
        let (low, high) = (at(-TOLERANCE), at(TOLERANCE));
        let enough = |chosen: &[usize]| {
            let sum = |values: &[f64]| -> f64 { chosen.iter().map(|&t| values[t]).sum() };
            sum(&low) > 0.0 && sum(&high) < 0.0
        };
        let chosen: Vec<usize> = found
            .left
            .iter()
            .chain(&found.right)
            .enumerate()
            .filter_map(|(t, weight)| weight.dominant.then_some(t))
            .collect();
        assert!(enough(&chosen), "{seed}: {chosen:?}");
        for fewer in 0..chosen.len() {
            for other in sample::choices(low.len(), fewer) {
                assert!(!enough(&other), "{seed}: {other:?} does, {chosen:?} was found");
            }
        }
        // Whatever moves the pH past the tolerance cannot be left out alone.
        for (t, weight) in found.left.iter().chain(&found.right).enumerate() {
            let small = weight.ph_shift.is_some_and(|shift| shift.abs() < TOLERANCE);
            let all_but: Vec<usize> = (0..low.len()).filter(|other| *other != t).collect();
            let edge = weight.ph_shift.is_some_and(|s| (s.abs() / TOLERANCE - 1.0).abs() < 1e-3);
            assert!(edge || enough(&all_but) == small, "{seed}: term {t} {weight:?}");
        }
        compared += 1;
    }
    assert_eq!(compared, 400);
}
