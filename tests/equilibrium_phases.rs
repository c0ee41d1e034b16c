//! Which solids form, in systems small enough to be solved by hand.

mod equilibrium_support;

use std::sync::atomic::AtomicBool;

use equilibrium_support::{IDEAL, LN_10, hold_ph, row, species};
use lyate::equilibrium::phases::{Assemblage, equilibrate};
use lyate::equilibrium::system::{Candidate, Failure, Fixed, IonicStrength, System};

/// Water with components 1, 2, … of these charges and totals.
fn water(components: &[(i64, f64)]) -> System {
    let charges: Vec<i64> = std::iter::once(1).chain(components.iter().map(|c| c.0)).collect();
    let mut list = vec![species(&[(0, 1)], 0.0, &charges), species(&[(0, -1)], -14.0, &charges)];
    list.extend((1..charges.len()).map(|j| species(&[(j, 1)], 0.0, &charges)));
    let proton: f64 = components.iter().map(|(z, total)| -(*z as f64) * total).sum();
    System {
        species: list,
        totals: std::iter::once(proton).chain(components.iter().map(|c| c.1)).collect(),
        fixed: Vec::new(),
        candidates: Vec::new(),
        activity: IDEAL,
        ionic_strength: IonicStrength::Computed,
    }
}

fn candidate(system: &mut System, entries: &[(usize, i64)], log_value: f64) {
    system.candidates.push(Candidate {
        row: row(entries),
        ln_value: log_value * LN_10,
        water: 0.0,
    });
}

fn excess(system: &mut System, entries: &[(usize, i64)], log_value: f64) {
    let row = row(entries);
    let ln_value = log_value * LN_10;
    system.fixed.push(Fixed {
        supply: row.clone(),
        row,
        ln_value,
        water: 0.0,
        concentration_of: None,
    });
}

fn run(system: &System) -> Result<Assemblage, Failure> {
    equilibrate(system.clone(), None, &AtomicBool::new(false))
}

fn solved(system: &System) -> Assemblage {
    run(system).unwrap_or_else(|failure| panic!("{failure:?}"))
}

/// What formed of a candidate; none where it did not.
fn formed(state: &Assemblage, candidate: usize) -> Option<f64> {
    state.formed[candidate].map(|k| -state.answer.amounts[k])
}

fn near(found: f64, wanted: f64) {
    assert!((found / wanted - 1.0).abs() < 1e-9, "{found:e}, not {wanted:e}");
}

#[test]
fn a_salt_of_two_ions_forms_down_to_the_root_of_its_product() {
    // 1 mmol/L of either, product 1e-10: 0.99 mmol/L comes down.
    let mut system = water(&[(1, 1e-3), (-1, 1e-3)]);
    candidate(&mut system, &[(1, 1), (2, 1)], -10.0);
    let state = solved(&system);
    near(formed(&state, 0).unwrap(), 1e-3 - 1e-5);
    near(state.answer.concentrations[2], 1e-5);
}

#[test]
fn an_undersaturated_salt_stays_away() {
    let mut system = water(&[(1, 9e-6), (-1, 9e-6)]);
    candidate(&mut system, &[(1, 1), (2, 1)], -10.0);
    let state = solved(&system);
    assert_eq!(formed(&state, 0), None);
    assert_eq!(state.system.fixed.len(), 0);
}

#[test]
fn a_common_ion_pushes_the_other_out() {
    // (0.025 + s) s = 1.6e-10.
    let mut system = water(&[(1, 1e-6), (-1, 0.025), (1, 0.025)]);
    candidate(&mut system, &[(1, 1), (2, 1)], 1.6e-10f64.log10());
    let state = solved(&system);
    let b = 0.025 - 1e-6;
    let s = (-b + f64::sqrt(b * b + 4.0 * 1.6e-10)) / 2.0;
    near(state.answer.concentrations[2], s);
    near(formed(&state, 0).unwrap(), 1e-6 - s);
}

#[test]
fn of_two_forms_the_less_soluble_one_is_left() {
    let mut system = water(&[(2, 2e-3), (-2, 2e-3)]);
    candidate(&mut system, &[(1, 1), (2, 1)], -6.0);
    candidate(&mut system, &[(1, 1), (2, 1)], -8.0);
    candidate(&mut system, &[(1, 1), (2, 1)], -7.0);
    let state = solved(&system);
    assert_eq!((formed(&state, 0), formed(&state, 2)), (None, None));
    near(formed(&state, 1).unwrap(), 2e-3 - 1e-4);
}

#[test]
fn of_two_equally_soluble_forms_one_is_there() {
    let mut system = water(&[(2, 2e-3), (-2, 2e-3)]);
    candidate(&mut system, &[(1, 1), (2, 1)], -8.0);
    candidate(&mut system, &[(1, 1), (2, 1)], -8.0);
    let state = solved(&system);
    let amount: f64 = (0..2).filter_map(|c| formed(&state, c)).sum();
    assert_eq!(state.formed.iter().flatten().count(), 1);
    near(amount, 2e-3 - 1e-4);
}

#[test]
fn a_hydroxide_takes_the_proton_row_along() {
    // M^2+ with nothing but water and its anion: M(OH)2 forms from caustic, two protons each.
    let mut system = water(&[(2, 1e-3), (-1, 0.0), (1, 3e-3)]);
    candidate(&mut system, &[(0, -2), (1, 1)], 16.0);
    let state = solved(&system);
    let amount = formed(&state, 0).unwrap();
    let (h, oh, m) = (
        state.answer.concentrations[0],
        state.answer.concentrations[1],
        state.answer.concentrations[2],
    );
    near(m, 1e16 * h * h);
    near(m + amount, 1e-3);
    // The charge that is left: the caustic beside what the solid took.
    near(h + 2.0 * m + 3e-3, oh);
}

#[test]
fn more_solids_than_components_leave_as_many_as_can_be() {
    // AB, A2B, AB2 from as much A as B: only AB where it is the least soluble by far.
    let mut system = water(&[(1, 1e-2), (-1, 1e-2)]);
    candidate(&mut system, &[(1, 2), (2, 1)], -9.0);
    candidate(&mut system, &[(1, 1), (2, 1)], -12.0);
    candidate(&mut system, &[(1, 1), (2, 2)], -9.0);
    let state = solved(&system);
    assert_eq!((formed(&state, 0), formed(&state, 2)), (None, None));
    near(formed(&state, 1).unwrap(), 1e-2 - 1e-6);
    // With AB hardly less soluble, A2B and AB2 together hold all of it.
    system.candidates[1].ln_value = -6.0 * LN_10 / 1.5;
    let state = solved(&system);
    assert_eq!(formed(&state, 1), None);
    assert!(formed(&state, 0).is_some() && formed(&state, 2).is_some());
}

#[test]
fn a_solid_in_excess_brings_what_is_missing() {
    // Nothing but the solid: both ions at the root of the product, all of it from the solid.
    let mut system = water(&[(2, 0.0), (-2, 0.0)]);
    excess(&mut system, &[(1, 1), (2, 1)], -8.0);
    let state = solved(&system);
    near(state.answer.concentrations[2], 1e-4);
    near(state.answer.amounts[0], 1e-4);
}

#[test]
fn a_solid_in_excess_takes_what_is_too_much() {
    let mut system = water(&[(2, 2e-3), (-2, 2e-3)]);
    excess(&mut system, &[(1, 1), (2, 1)], -8.0);
    let state = solved(&system);
    near(state.answer.amounts[0], 1e-4 - 2e-3);
}

#[test]
fn two_forms_in_excess_contradict_each_other() {
    let mut system = water(&[(2, 2e-3), (-2, 2e-3)]);
    excess(&mut system, &[(1, 1), (2, 1)], -8.0);
    excess(&mut system, &[(1, 1), (2, 1)], -7.0);
    let dependent = Failure::Dependent { components: Vec::new(), fixed: vec![0, 1] };
    assert_eq!(run(&system).unwrap_err(), dependent);
}

#[test]
fn what_held_phases_keep_supersaturated_forms_without_end() {
    // A(s) and B(s) in excess fix A and B; AB is less soluble than both allow.
    let mut system = water(&[(0, 0.0), (0, 0.0)]);
    excess(&mut system, &[(1, 1)], -2.0);
    excess(&mut system, &[(2, 1)], -3.0);
    candidate(&mut system, &[(1, 1), (2, 1)], -7.0);
    assert_eq!(run(&system).unwrap_err(), Failure::Endless { candidate: 0, fixed: vec![0, 1] });
    // Where both may be used up, one is.
    let mut system = water(&[(0, 0.5), (0, 0.2)]);
    candidate(&mut system, &[(1, 1)], -2.0);
    candidate(&mut system, &[(2, 1)], -3.0);
    candidate(&mut system, &[(1, 1), (2, 1)], -7.0);
    let state = solved(&system);
    near(formed(&state, 0).unwrap(), 0.5 - 1e-2 - formed(&state, 2).unwrap());
    assert_eq!(formed(&state, 1), None);
    near(formed(&state, 2).unwrap(), 0.2 - 1e-5);
}

#[test]
fn a_held_ph_and_a_solid_go_together() {
    // M(OH)2 at pH 9: M = 10^(16 − 18).
    let mut system = water(&[(2, 0.1)]);
    hold_ph(&mut system, 9.0);
    candidate(&mut system, &[(0, -2), (1, 1)], 16.0);
    let state = solved(&system);
    near(state.answer.concentrations[2], 1e-2);
    near(formed(&state, 0).unwrap(), 0.09);
}

#[test]
fn a_solid_of_something_absent_cannot_form() {
    let mut system = water(&[(2, 2e-3), (-2, 0.0)]);
    candidate(&mut system, &[(1, 1), (2, 1)], -300.0);
    assert_eq!(formed(&solved(&system), 0), None);
}

#[test]
fn what_cannot_be_dissolved_may_be_there_as_a_solid() {
    // Component 2 plays the electron: M takes one up when dissolved, two as a solid, and there
    // are one and a half for each.
    let charges = [1, 2, -1];
    let mut system = water(&[(2, 1e-3), (-1, 1.5e-3)]);
    system.species.truncate(2);
    system.species.push(species(&[(1, 1)], 0.0, &charges));
    system.species.push(species(&[(1, 1), (2, 1)], 5.0, &charges));
    assert!(matches!(run(&system), Err(Failure::Infeasible { .. })));
    candidate(&mut system, &[(1, 1), (2, 2)], -10.0);
    let state = solved(&system);
    assert!(formed(&state, 0).unwrap() >= 0.5e-3);
    assert!(state.answer.residual < 1e-12);
}
