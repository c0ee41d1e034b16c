//! Which terms of a balance the answer rests on, and what each is worth.
//!
//! A balance is looked at along a line of states that meet every equation but this one:
//! for a charge or proton balance the states at other pH, for the mass balance of a
//! component those with more or less of it. The answer is where the balance closes on
//! that line; without a term it closes elsewhere, and the distance in pH is the price of
//! the term.

use std::sync::atomic::AtomicBool;

use super::line::Line;
use super::system::{Answer, Failure, System};

/// The change of pH that nobody minds.
pub const TOLERANCE: f64 = 0.01;
/// Shifts beyond this are found exactly, smaller ones to first order.
pub(super) const FIRST_ORDER: f64 = TOLERANCE / 3.0;
/// More terms than this are dropped one by one, without looking for fewer still.
const ENUMERATED: usize = 16;

/// What stands in a balance beside a coefficient.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum DominanceTerm {
    /// The concentration of a species of the system.
    Species(usize),
    /// A fixed amount, mol per litre or kilogram.
    Constant(f64),
}

/// What a balance decides.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Decides {
    /// The pH, as charge and proton balances do.
    Ph,
    /// How much there is of this component.
    Component(usize),
}

/// `Σ left = Σ right`.
#[derive(Clone, Debug, PartialEq)]
pub struct Balance {
    pub decides: Decides,
    pub left: Vec<(f64, DominanceTerm)>,
    pub right: Vec<(f64, DominanceTerm)>,
}

/// What a term is worth.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct TermWeight {
    /// Coefficient times concentration, mol per litre or kilogram.
    pub value: f64,
    /// Its magnitude over the sum of those on its side; zero where all of them are.
    pub share: f64,
    /// Whether it belongs to the smallest set of terms that still gives the answer.
    pub dominant: bool,
    /// How the pH moves when this term alone is left out. None where nothing closes the
    /// balance without it, where the balance decides no pH, or where it did not close
    /// before.
    pub ph_shift: Option<f64>,
}

#[derive(Clone, Debug, Default, PartialEq)]
pub struct Dominance {
    pub left: Vec<TermWeight>,
    pub right: Vec<TermWeight>,
}

/// Weighs every term of a balance at a solved state.
///
/// For a balance that decides the pH, a set of terms is enough when it alone has opposite
/// signs [`TOLERANCE`] below and above the answer's pH, and the smallest such set is
/// dominant. For a mass balance it is enough when what is left out on each side is less
/// than that tolerance in log10 (2.3 %) of the side. So it is, too, where the pH is held
/// or the balance does not close at the answer, as a wrong one does not.
///
/// # Errors
/// [`Failure::Cancelled`], and those of states near the answer that cannot be solved.
pub fn dominance(
    system: &System,
    answer: &Answer,
    balance: &Balance,
    cancel: &AtomicBool,
) -> Result<Dominance, Failure> {
    // One side is negative from here on: the balance closes where the sum is nothing.
    let terms: Vec<(f64, DominanceTerm)> = balance
        .left
        .iter()
        .copied()
        .chain(balance.right.iter().map(|(coefficient, what)| (-coefficient, *what)))
        .collect();
    let values: Vec<f64> = terms.iter().map(|t| value(t, answer)).collect();
    let size: f64 = values.iter().map(|v| v.abs()).sum();
    let closes = values.iter().sum::<f64>().abs() <= 1e-6 * size && size > 0.0;
    let mut kept = vec![true; terms.len()];
    let mut shifts = vec![None; terms.len()];
    let mut line = closes.then(|| Line::new(system, answer, balance.decides, cancel)).flatten();
    match (balance.decides, line.as_mut()) {
        (Decides::Ph, Some(line)) => {
            let low = line.terms_at(-TOLERANCE, &terms)?;
            let high = line.terms_at(TOLERANCE, &terms)?;
            kept = smallest_set(&values, &low, &high).unwrap_or(kept);
            let whole = high.iter().sum::<f64>() - low.iter().sum::<f64>();
            for (t, shift) in shifts.iter_mut().enumerate() {
                let slope = (sum_without(&high, t) - sum_without(&low, t)) / (2.0 * TOLERANCE);
                let first = values[t] / slope;
                *shift = if first.abs() <= FIRST_ORDER {
                    Some(first)
                } else {
                    line.shift_without(t, &terms, &values, whole)?
                };
            }
        }
        (decides, line) => {
            let split = balance.left.len();
            keep_larger(&values[..split], &mut kept[..split]);
            keep_larger(&values[split..], &mut kept[split..]);
            if let (Some(line), Decides::Component(_)) = (line, decides) {
                for (t, shift) in shifts.iter_mut().enumerate() {
                    *shift = line.shift_without_mass(t, &terms, &values)?;
                }
            }
        }
    }
    let weigh = |from: usize, to: usize, sign: f64| {
        let side: f64 = values[from..to].iter().map(|v| v.abs()).sum();
        (from..to)
            .map(|t| TermWeight {
                value: sign * values[t] + 0.0,
                share: if side > 0.0 { values[t].abs() / side } else { 0.0 },
                dominant: kept[t],
                ph_shift: shifts[t],
            })
            .collect()
    };
    let split = balance.left.len();
    Ok(Dominance { left: weigh(0, split, 1.0), right: weigh(split, terms.len(), -1.0) })
}

pub(super) fn value(term: &(f64, DominanceTerm), answer: &Answer) -> f64 {
    let amount = match term.1 {
        DominanceTerm::Species(i) => answer.concentrations.get(i).copied().unwrap_or(0.0),
        DominanceTerm::Constant(amount) => amount,
    };
    // A zero times a coefficient keeps no sign.
    term.0 * amount + 0.0
}

pub(super) fn sum_without(values: &[f64], left_out: usize) -> f64 {
    values.iter().enumerate().filter(|(t, _)| *t != left_out).map(|(_, v)| v).sum()
}

/// Leaves out the smallest terms of a side, as far as they come to less than the
/// tolerance together.
fn keep_larger(values: &[f64], kept: &mut [bool]) {
    let side: f64 = values.iter().map(|v| v.abs()).sum();
    let most = side * (10f64.powf(TOLERANCE) - 1.0);
    let mut out = 0.0;
    for t in by_size(values) {
        out += values[t].abs();
        if out > most {
            break;
        }
        kept[t] = false;
    }
}

/// Term numbers, the smallest first.
fn by_size(values: &[f64]) -> Vec<usize> {
    let mut order: Vec<usize> = (0..values.len()).collect();
    order.sort_by(|a, b| values[*a].abs().total_cmp(&values[*b].abs()));
    order
}

/// The smallest set of terms whose sum changes sign, strictly, between the two states,
/// in the direction of the whole. None where the whole does not.
fn smallest_set(values: &[f64], low: &[f64], high: &[f64]) -> Option<Vec<bool>> {
    let direction = (high.iter().sum::<f64>() - low.iter().sum::<f64>()).signum();
    let enough = |low: f64, high: f64| low * direction < 0.0 && high * direction > 0.0;
    let sums = |kept: &[bool]| {
        let of = |values: &[f64]| -> f64 {
            values.iter().zip(kept).filter(|(_, kept)| **kept).map(|(v, _)| v).sum()
        };
        (of(low), of(high))
    };
    let mut kept = vec![true; values.len()];
    let (all_low, all_high) = sums(&kept);
    if !enough(all_low, all_high) {
        return None;
    }
    // The smallest first is nearly always best; then whatever fewer terms would do.
    let order = by_size(values);
    for &t in &order {
        kept[t] = false;
        let (low, high) = sums(&kept);
        kept[t] = !enough(low, high);
    }
    let count = kept.iter().filter(|kept| **kept).count();
    if values.len() <= ENUMERATED {
        let rank: Vec<usize> = order.into_iter().rev().collect();
        for fewer in 2..count {
            if let Some(chosen) = first_choice(&rank, fewer, |chosen| {
                let sum = |values: &[f64]| chosen.iter().map(|&t| values[t]).sum();
                enough(sum(low), sum(high))
            }) {
                kept.fill(false);
                chosen.into_iter().for_each(|t| kept[t] = true);
                break;
            }
        }
    }
    Some(kept)
}

/// The first choice of `size` things that is good, the foremost tried first.
fn first_choice(
    things: &[usize],
    size: usize,
    good: impl Fn(&[usize]) -> bool,
) -> Option<Vec<usize>> {
    let mut places: Vec<usize> = (0..size).collect();
    loop {
        let chosen: Vec<usize> = places.iter().map(|&p| things[p]).collect();
        if good(&chosen) {
            return Some(chosen);
        }
        // The next choice: the last place that can still move on, and those after it.
        let movable = (0..size).rev().find(|&k| places[k] + size - k < things.len())?;
        places[movable] += 1;
        for k in movable + 1..size {
            places[k] = places[k - 1] + 1;
        }
    }
}
