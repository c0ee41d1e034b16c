//! The ionic strength as one more unknown: Newton on its logarithm together with the
//! balances, and behind that a bracketed search for where the ionic strength that the
//! coefficients were taken at is the one that comes out.

use std::sync::atomic::{AtomicBool, Ordering};

use nalgebra::{DMatrix, DVector};

use super::direction::{log_jacobian, solve_square};
use super::newton::CLOSED;
use super::search::Search;
use super::system::Failure;

/// How far rows need to close before the ionic strength joins in.
const ROUGH: f64 = 1e-2;
const FULL_STEPS: u32 = 40;
/// The longest step of any unknown in the joint iteration.
const LONGEST: f64 = 3.0;
/// Ionic strengths looked at, mol per litre or kilogram.
const RANGE: (f64, f64) = (1e-14, 1e2);

/// Closes all rows with activity coefficients at the ionic strength that comes out.
/// With ions of charge three and more there can be several such states; this finds the
/// one nearest to where it starts, which without a near answer is the ideal one.
pub(super) fn converge(
    search: &mut Search,
    warm: bool,
    cancel: &AtomicBool,
) -> Result<(), Failure> {
    if !warm {
        search.converge(ROUGH, cancel)?;
    }
    let ionic_strength = search.ionic_strength_now();
    if ionic_strength <= 0.0 {
        // No ions at all: every coefficient is one.
        search.set_ionic_strength(0.0);
        search.evaluate();
        return search.converge(CLOSED, cancel);
    }
    search.set_ionic_strength(ionic_strength.clamp(RANGE.0, 2.0));
    search.evaluate();
    search.converge(ROUGH, cancel)?;
    if joint(search, cancel)? {
        return Ok(());
    }
    bracket(search, cancel)
}

/// How far the rows and the ionic strength are from closing.
fn open(search: &Search) -> f64 {
    let ionic_strength = search.ionic_strength.unwrap_or(0.0);
    let now = search.ionic_strength_now();
    let off = (now - ionic_strength).abs() / (now + ionic_strength);
    let off = if off.is_nan() { 1.0 } else { off };
    search.point.residual().max(off)
}

/// Newton on all unknowns at once; false where it makes no headway.
pub(super) fn joint(search: &mut Search, cancel: &AtomicBool) -> Result<bool, Failure> {
    let mut now = open(search);
    for _ in 0..FULL_STEPS {
        if cancel.load(Ordering::Relaxed) {
            return Err(Failure::Cancelled);
        }
        if now <= CLOSED {
            return Ok(true);
        }
        if search.outgrown() {
            search.rebase()?;
        }
        search.iterations += 1;
        let Some(step) = joint_step(search) else {
            return Ok(false);
        };
        let longest = step.iter().fold(0.0f64, |most, s| most.max(s.abs()));
        let mut t = (LONGEST / longest).min(1.0);
        let from = search.ionic_strength.unwrap_or(0.0);
        let u = search.point.u.clone();
        let mut better = false;
        for _ in 0..5 {
            for (j, value) in search.point.u.iter_mut().enumerate() {
                *value = u[j] + t * step[j];
            }
            search.set_ionic_strength(from * (t * step[u.len()]).exp());
            search.evaluate();
            let then = open(search);
            if then < now {
                now = then;
                better = true;
                break;
            }
            t *= 0.4;
        }
        if !better {
            search.point.u.copy_from_slice(&u);
            search.set_ionic_strength(from);
            search.evaluate();
            return Ok(now <= 10.0 * CLOSED);
        }
    }
    Ok(false)
}

/// The step of every unknown and, last, of ln I.
fn joint_step(search: &Search) -> Option<Vec<f64>> {
    let (at, point) = (&search.at, &search.point);
    let size = at.slots.len();
    let now = search.ionic_strength_now();
    let mut matrix = DMatrix::zeros(size + 1, size + 1);
    log_jacobian(at, point, &mut matrix);
    for (i, &species) in at.species.iter().enumerate() {
        let c = point.concentrations[i];
        let slope = search.shift_slopes[i];
        let charge = f64::from(search.system().species[species].charge);
        let ions = 0.5 * charge * charge * c / now;
        for &(j, value) in at.row(i) {
            let j = j as usize;
            let side = if value > 0.0 { point.positive[j] } else { point.negative[j] };
            matrix[(j, size)] += c * value * slope / side;
            matrix[(size, j)] += ions * value;
        }
        matrix[(size, size)] += ions * slope;
    }
    matrix[(size, size)] -= 1.0;
    let mut side = DVector::zeros(size + 1);
    for j in 0..size {
        side[j] = (point.negative[j] / point.positive[j]).ln();
    }
    side[size] = (search.ionic_strength? / now).ln();
    solve_square(matrix, &mut side).then(|| side.as_slice().to_vec())
}

/// Finds where the ionic strength that comes out passes the one put in, solving the
/// convex problem at each trial value.
fn bracket(search: &mut Search, cancel: &AtomicBool) -> Result<(), Failure> {
    // ln(I out / I in) at ln I in.
    let excess = |search: &mut Search, ln: f64| -> Result<f64, Failure> {
        search.set_ionic_strength(ln.exp());
        search.evaluate();
        search.converge(CLOSED, cancel)?;
        Ok((search.ionic_strength_now()).ln() - ln)
    };
    // From the ideal state upwards to the first change of sign.
    let mut low = RANGE.0.ln();
    let mut at_low = excess(search, low)?;
    let mut high = low + at_low.max(0.1);
    let top = RANGE.1.ln();
    let mut at_high = excess(search, high)?;
    while at_high > 0.0 {
        if high > top {
            return Err(not_converged(search));
        }
        (low, at_low) = (high, at_high);
        high += at_high.clamp(0.05, 0.7);
        at_high = excess(search, high)?;
    }
    for round in 0..200 {
        let secant = low + (high - low) * at_low / (at_low - at_high);
        let width = high - low;
        let inside = secant.clamp(low + 0.05 * width, high - 0.05 * width);
        let middle = if round % 3 == 2 { 0.5 * (low + high) } else { inside };
        let at_middle = excess(search, middle)?;
        if at_middle > 0.0 {
            (low, at_low) = (middle, at_middle);
        } else {
            (high, at_high) = (middle, at_middle);
        }
        if (high - low < 1e-3 && joint(search, cancel)?) || at_middle.abs() <= CLOSED {
            return Ok(());
        }
        if high - low < 1e-15 {
            break;
        }
    }
    Err(not_converged(search))
}

fn not_converged(search: &Search) -> Failure {
    Failure::NotConverged { residual: open(search), iterations: search.iterations }
}
