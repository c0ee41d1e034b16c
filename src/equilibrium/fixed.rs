//! Held phases: what they brought or took away, from the rows that they released.

use nalgebra::{DMatrix, DVector, LU};

use super::frame::Slot;
use super::search::Search;
use super::sum::Sum;
use super::system::System;

/// The amount of each held phase at the present point, positive where it brought
/// something in.
pub(super) fn amounts(search: &Search) -> Vec<f64> {
    let frame = &search.frame;
    let count = search.system().fixed.len();
    let slots: Vec<usize> =
        (0..frame.slots.len()).filter(|&s| matches!(frame.slots[s], Slot::Held(_))).collect();
    if slots.is_empty() {
        return vec![0.0; count];
    }
    let mut missing = DVector::zeros(slots.len());
    // Rows by the size of their terms, so that what a small row says of an amount is not
    // drowned in the rounding of a large one.
    let mut sizes = vec![1.0; slots.len()];
    for (r, &slot) in slots.iter().enumerate() {
        let mut sum = Sum::default();
        for (&species, c) in search.at.species.iter().zip(&search.point.concentrations) {
            if !frame.basis.is_zero(species, slot) {
                sum.add_product(*c, frame.basis.value(species, slot));
            }
        }
        sum.add_product(frame.total(slot).value(), -1.0);
        if sum.size > 0.0 {
            sizes[r] = sum.size;
        }
        missing[r] = sum.value() / sizes[r];
    }
    let supply =
        DMatrix::from_fn(slots.len(), count, |r, k| frame.supplied(k, slots[r]) / sizes[r]);
    // Frames are only made of independent supplies.
    LU::new(supply).solve_mut(&mut missing);
    missing.as_slice().to_vec()
}

/// The worst row over the given components: what is left over the sum of the
/// magnitudes of its terms.
pub(super) fn residual(system: &System, concentrations: &[f64], amounts: &[f64]) -> f64 {
    let mut sums = vec![Sum::default(); system.totals.len()];
    let number = |r: &num_rational::Rational64| *r.numer() as f64 / *r.denom() as f64;
    for (species, c) in system.species.iter().zip(concentrations) {
        for (j, coefficient) in &species.row {
            sums[*j].add_product(*c, number(coefficient));
        }
    }
    for (fixed, amount) in system.fixed.iter().zip(amounts) {
        for (j, coefficient) in &fixed.supply {
            sums[*j].add_product(-*amount, number(coefficient));
        }
    }
    let mut worst = 0.0f64;
    for (sum, total) in sums.iter_mut().zip(&system.totals) {
        sum.add_product(*total, -1.0);
        if sum.size > 0.0 {
            worst = worst.max(sum.value().abs() / sum.size);
        }
    }
    worst
}
