//! Activity coefficients that depend on the whole composition: Newton on the balances and
//! on every coefficient at once, with exact derivatives; and behind that the same with the
//! interactions turned up step by step, from none.

use std::sync::atomic::{AtomicBool, Ordering};

use nalgebra::{DMatrix, DVector, LU};

use super::direction::solve_square;
use super::newton::CLOSED;
use super::search::Search;
use super::system::{Activity, Failure, System};
use crate::chemistry::interaction::{Coefficients, Slopes};

/// How far rows need to close before the coefficients join in.
const ROUGH: f64 = 1e-2;
const FULL_STEPS: u32 = 60;
/// The longest step of any unknown.
const LONGEST: f64 = 3.0;
const BACKTRACKS: u32 = 12;
/// The least rise of the strength of interactions before the search gives up.
const LEAST_RISE: f64 = 1e-4;
/// No concentration goes into the coefficients as more than this, mol per kilogram: a
/// search may pass through states that no solution has.
const MOST: f64 = 50.0;

/// Closes all rows with coefficients at the composition that comes out.
pub(super) fn converge(
    search: &mut Search,
    warm: bool,
    cancel: &AtomicBool,
) -> Result<(), Failure> {
    if warm && search.taken.is_some() {
        search.converge(ROUGH, cancel)?;
        if joint(search, 1.0, cancel)? {
            return Ok(());
        }
    }
    forget(search);
    search.converge(ROUGH, cancel)?;
    let ideal = (search.point.u.clone(), search.frame.clone());
    // At once where the ideal state is near enough.
    let now = coefficients(search, 1.0);
    search.take(now);
    search.evaluate();
    if search.converge(ROUGH, cancel).is_ok() && joint(search, 1.0, cancel)? {
        return Ok(());
    }
    if cancel.load(Ordering::Relaxed) {
        return Err(Failure::Cancelled);
    }
    (search.point.u, search.frame) = ideal;
    search.at = search.frame.coordinates()?;
    forget(search);
    search.converge(ROUGH, cancel)?;
    turn_up(search, cancel)
}

/// Turns the interactions up from none, in steps that halve where they go wrong.
fn turn_up(search: &mut Search, cancel: &AtomicBool) -> Result<(), Failure> {
    let mut strength = 0.0;
    let mut rise: f64 = 0.25;
    while strength < 1.0 {
        let kept = (search.point.u.clone(), search.frame.clone(), search.taken.clone());
        let next = (strength + rise).min(1.0);
        if joint(search, next, cancel)? {
            strength = next;
            rise = (2.0 * rise).min(0.25);
            continue;
        }
        let open = open(search, &residue(search, next));
        (search.point.u, search.frame) = (kept.0, kept.1);
        search.at = search.frame.coordinates()?;
        if let Some(taken) = kept.2 {
            search.take(taken);
        }
        search.evaluate();
        rise *= 0.5;
        if rise < LEAST_RISE {
            return jump(search, open, cancel);
        }
    }
    Ok(())
}

/// Where the states that interactions lead to step by step turn back, as they can with ions
/// of charge three and above: goes over to another branch, by balances closed at given
/// coefficients and coefficients that follow half way.
fn jump(search: &mut Search, open: f64, cancel: &AtomicBool) -> Result<(), Failure> {
    for round in 1..=200 {
        search.converge(ROUGH, cancel)?;
        let mut now = coefficients(search, 1.0);
        if let Some(taken) = &search.taken {
            for (now, taken) in now.ln_gamma.iter_mut().zip(&taken.ln_gamma) {
                *now = 0.5 * (*now + taken);
            }
            now.ln_water = 0.5 * (now.ln_water + taken.ln_water);
        }
        search.take(now);
        search.evaluate();
        if round % 10 == 0 && joint(search, 1.0, cancel)? {
            return Ok(());
        }
    }
    Err(Failure::NotConverged { residual: open, iterations: search.iterations })
}

/// Back to coefficients of one.
fn forget(search: &mut Search) {
    let ln_gamma = vec![0.0; search.system().species.len()];
    search.take(Coefficients { ln_gamma, ln_water: 0.0 });
    search.evaluate();
}

/// The concentrations of all species of the system, absent ones zero.
fn molalities(search: &Search) -> Vec<f64> {
    let mut all = vec![0.0; search.system().species.len()];
    for (&species, c) in search.at.species.iter().zip(&search.point.concentrations) {
        all[species] = c.min(MOST);
    }
    all
}

/// Those of the present composition, the interactions at a part of their strength.
fn coefficients(search: &Search, strength: f64) -> Coefficients {
    let Activity::ByComposition(interaction) = &search.system().activity else {
        return Coefficients::default();
    };
    scaled(interaction.coefficients(&molalities(search)), strength)
}

fn scaled(mut found: Coefficients, strength: f64) -> Coefficients {
    found.ln_gamma.iter_mut().for_each(|ln| *ln *= strength);
    found.ln_water *= strength;
    found
}

/// What comes out less what was taken: ln γ of each species, and ln activity of water last.
fn residue(search: &Search, strength: f64) -> Vec<f64> {
    against(search, &coefficients(search, strength))
}

fn against(search: &Search, now: &Coefficients) -> Vec<f64> {
    let Some(taken) = &search.taken else { return Vec::new() };
    let pairs = now.ln_gamma.iter().zip(&taken.ln_gamma);
    pairs
        .map(|(now, taken)| now - taken)
        .chain(std::iter::once(now.ln_water - taken.ln_water))
        .collect()
}

/// How far the rows and the coefficients are from closing.
fn open(search: &Search, residue: &[f64]) -> f64 {
    let most =
        residue.iter().fold(0.0f64, |most, r| if r.is_nan() { 1.0 } else { most.max(r.abs()) });
    if search.point.ln_scale != 0.0 {
        return 1.0;
    }
    search.point.residual().max(most)
}

/// Newton on all unknowns at once; false where it makes no headway.
fn joint(search: &mut Search, strength: f64, cancel: &AtomicBool) -> Result<bool, Failure> {
    let mut now = open(search, &residue(search, strength));
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
        let Some((step, change)) = joint_step(search, strength) else { return Ok(false) };
        let longest = step.iter().chain(&change).fold(0.0f64, |most, s| most.max(s.abs()));
        let mut t = (LONGEST / longest).min(1.0);
        let u = search.point.u.clone();
        let Some(from) = search.taken.clone() else { return Ok(false) };
        let mut better = false;
        for _ in 0..BACKTRACKS {
            for (j, value) in search.point.u.iter_mut().enumerate() {
                *value = u[j] + t * step[j];
            }
            let moved = from.ln_gamma.iter().zip(&change);
            let ln_gamma = moved.map(|(ln, change)| ln + t * change).collect();
            let ln_water = from.ln_water + t * change[from.ln_gamma.len()];
            search.take(Coefficients { ln_gamma, ln_water });
            search.evaluate();
            let then = open(search, &residue(search, strength));
            if then < now {
                now = then;
                better = true;
                break;
            }
            t *= 0.4;
        }
        if !better {
            search.point.u.copy_from_slice(&u);
            search.take(from);
            search.evaluate();
            return Ok(now <= 10.0 * CLOSED);
        }
    }
    Ok(false)
}

/// The step of every unknown, and the change of every coefficient.
fn joint_step(search: &Search, strength: f64) -> Option<(Vec<f64>, Vec<f64>)> {
    let Activity::ByComposition(interaction) = &search.system().activity else { return None };
    let (at, point) = (&search.at, &search.point);
    let (now, slopes) = interaction.coefficients_and_slopes(&molalities(search));
    let residue = against(search, &scaled(now, strength));
    let feedback = Feedback::new(search, &slopes, strength)?;
    let (n, size) = (at.species.len(), at.slots.len());
    let answered = feedback.solve(&entries(search))?;
    let direct = shift_of(search, &residue);
    let direct = feedback.solve(&DMatrix::from_column_slice(n, 1, &direct))?;
    let mut matrix = DMatrix::zeros(size, size);
    let mut side = DVector::zeros(size);
    for j in 0..size {
        side[j] = (point.negative[j] / point.positive[j]).ln();
    }
    for i in 0..n {
        for &(j, value) in at.row(i) {
            let j = j as usize;
            let terms = if value > 0.0 { point.positive[j] } else { point.negative[j] };
            let weight = point.concentrations[i] * value / terms;
            side[j] -= weight * direct[i];
            for l in 0..size {
                matrix[(j, l)] += weight * answered[(i, l)];
            }
        }
    }
    if !solve_square(matrix, &mut side) {
        return None;
    }
    let moved = &answered * &side + direct.column(0);
    let mut change = residue;
    for (c, value) in change.iter_mut().enumerate() {
        for (i, &species) in at.species.iter().enumerate() {
            *value += strength * slopes.of(c, species) * moved[i];
        }
    }
    Some((side.as_slice().to_vec(), change))
}

/// The entries of the present species as a whole matrix.
pub(super) fn entries(search: &Search) -> DMatrix<f64> {
    let at = &search.at;
    let mut out = DMatrix::zeros(at.species.len(), at.slots.len());
    for i in 0..at.species.len() {
        for &(j, value) in at.row(i) {
            out[(i, j as usize)] = value;
        }
    }
    out
}

/// What changes of all ln γ, and of ln activity of water last, add to each ln c.
fn shift_of(search: &Search, change: &[f64]) -> Vec<f64> {
    let system: &System = search.system();
    let water = change.len() - 1;
    let mut shift: Vec<f64> = search
        .at
        .species
        .iter()
        .map(|&s| system.species[s].water * change[water] - change[s])
        .collect();
    for &(i, k, value) in &search.at.held {
        shift[i] += value * held_change(search, k, change);
    }
    shift
}

/// What they add to `Σ row · x` of a held phase.
fn held_change(search: &Search, k: usize, change: &[f64]) -> f64 {
    let fixed = &search.system().fixed[k];
    let own = fixed.concentration_of.map_or(0.0, |s| change[s]);
    own - fixed.water * change[change.len() - 1]
}

/// How every ln c answers when one is pushed, the coefficients moving along:
/// `(1 − S)⁻¹`, S being what coefficients give back to ln c.
pub(super) struct Feedback {
    factors: LU<f64, nalgebra::Dyn, nalgebra::Dyn>,
}

impl Feedback {
    fn new(search: &Search, slopes: &Slopes, strength: f64) -> Option<Self> {
        let at = &search.at;
        let n = at.species.len();
        let all = search.system().species.len();
        let mut matrix = DMatrix::identity(n, n);
        let mut change = vec![0.0; all + 1];
        for (j, &species) in at.species.iter().enumerate() {
            for (c, value) in change.iter_mut().enumerate() {
                *value = strength * slopes.of(c, species);
            }
            for (i, shift) in shift_of(search, &change).into_iter().enumerate() {
                matrix[(i, j)] -= shift;
            }
        }
        let factors = LU::new(matrix);
        (n == 0 || factors.is_invertible()).then_some(Self { factors })
    }

    /// At the composition of a solved state; none where coefficients do not depend on it.
    pub fn at(search: &Search) -> Option<(Self, Slopes)> {
        let Activity::ByComposition(interaction) = &search.system().activity else { return None };
        let (_, slopes) = interaction.coefficients_and_slopes(&molalities(search));
        Some((Self::new(search, &slopes, 1.0)?, slopes))
    }

    pub fn solve(&self, pushed: &DMatrix<f64>) -> Option<DMatrix<f64>> {
        if pushed.is_empty() {
            return Some(pushed.clone());
        }
        self.factors.solve(pushed)
    }
}

/// How `Σ row · x` of a held phase moves when the ln c of the present species do.
pub(super) fn held_response(search: &Search, slopes: &Slopes, k: usize, ln_c: &[f64]) -> f64 {
    let all = search.system().species.len();
    let change: Vec<f64> = (0..=all)
        .map(|c| {
            let present = search.at.species.iter().zip(ln_c);
            present.map(|(&species, moved)| slopes.of(c, species) * moved).sum()
        })
        .collect();
    held_change(search, k, &change)
}
