//! How near a target comes that no amount meets.

use super::one::Line;
use super::{Bench, COARSE, amounts};
use crate::equilibrium::system::Failure;

/// A target that is not met.
#[derive(Clone, Debug, PartialEq)]
pub enum Missed {
    /// The amount has no part in the quantity, which is this.
    Still { value: Option<f64> },
    /// One goal: what comes nearest to it.
    Short(Nearest),
    /// Several goals: the amounts that would meet them, some of them below zero, where the
    /// equations lead there.
    Together { amounts: Option<Vec<f64>> },
}

#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Nearest {
    /// The quantity with none of it; none where it has no value then.
    pub without: Option<f64>,
    /// Whether more of it, at first, raises the quantity.
    pub raises: bool,
    /// mol per litre or kilogram of the water treated. Zero where none is best.
    pub dose: f64,
    pub value: f64,
    /// Whether it comes ever nearer as the dose grows.
    pub grows: bool,
}

/// What moves less than this, as a share of its size or in powers of ten, stands still.
const STILL: f64 = 1e-9;

pub(super) fn nearest<B: Bench>(
    line: &mut Line<B>,
    without: Option<f64>,
) -> Result<Missed, Failure> {
    let mut marks: Vec<(f64, f64)> = Vec::new();
    for dose in amounts(&line.dosing.unknowns[0], COARSE) {
        if let Some(value) = line.value(dose)?.filter(|value| value.is_finite()) {
            marks.push((dose, value));
        }
    }
    let goal = line.goal;
    let (low, high) = marks.iter().fold((f64::INFINITY, f64::NEG_INFINITY), |(low, high), mark| {
        (low.min(mark.1), high.max(mark.1))
    });
    let size = if goal.logarithmic { 1.0 } else { low.abs().max(high.abs()) };
    let off = |mark: &(f64, f64)| goal.off(mark.1).abs();
    let best = (0..marks.len()).min_by(|&a, &b| off(&marks[a]).total_cmp(&off(&marks[b])));
    let (Some(best), true) = (best, high - low > STILL * size) else {
        return Ok(Missed::Still { value: without });
    };
    let first = marks[0].1;
    let raises = marks
        .iter()
        .map(|mark| mark.1 - first)
        .find(|more| more.abs() > STILL * size)
        .is_some_and(|more| more > 0.0);
    let grows = best + 1 == marks.len();
    let (mut dose, mut value) = marks[best];
    if !grows && best > 0 {
        // Near enough to be told in three digits.
        let (mut from, mut to) = (marks[best - 1].0, marks[best + 1].0);
        for _ in 0..16 {
            let wide = if to - dose > dose - from { to } else { from };
            let other = dose + 0.381_966 * (wide - dose);
            let Some(found) = line.value(other)? else { break };
            if goal.off(found).abs() < goal.off(value).abs() {
                *(if other > dose { &mut from } else { &mut to }) = dose;
                (dose, value) = (other, found);
            } else {
                *(if other > dose { &mut to } else { &mut from }) = other;
            }
        }
    }
    // No better than with none of it.
    if without.is_some_and(|none| goal.off(none).abs() <= goal.off(value).abs() + STILL) {
        (dose, value) = (0.0, without.unwrap_or(value));
    }
    Ok(Missed::Short(Nearest { without, raises, dose, value, grows: grows && dose > 0.0 }))
}
