//! How the answer moves: the derivatives of the solved state by every total, constant
//! and held value, activity coefficients moving along.
//!
//! One matrix holds all of it. Its unknowns are `Σ row · x` of each free slot of the
//! dominance basis, ln I where coefficients are taken at it, and the amounts of the held
//! phases; its equations are the rows of all slots that are not empty, and that of I. Where
//! coefficients depend on the whole composition, no unknown is added: what they give back
//! is worked into how each ln c answers.

use nalgebra::{DMatrix, DVector, Dyn, LU};

use super::composition::{Feedback, entries, held_response};
use super::frame::Slot;
use super::search::Search;
use super::solve::needs_activity;
use super::system::{Activity, Answer, IonicStrength, System};
use crate::chemistry::interaction::Slopes;

const LN_10: f64 = std::f64::consts::LN_10;

/// The derivatives of the answer by one quantity.
#[derive(Clone, Debug, PartialEq)]
pub struct Response {
    /// Of ln activity of each component; zero where it is absent.
    pub ln_components: Vec<f64>,
    /// Of ln concentration of each species; zero where it is absent.
    pub ln_concentrations: Vec<f64>,
    pub ln_ionic_strength: f64,
    /// Of the amount of each held phase, mol per litre or kilogram.
    pub amounts: Vec<f64>,
}

impl Response {
    /// The derivative of the pH.
    pub fn ph(&self) -> f64 {
        -self.ln_components.first().copied().unwrap_or(0.0) / LN_10
    }
}

/// A solved state, ready to be asked how it moves.
pub struct Sensitivity<'a> {
    search: Search<'a>,
    factors: LU<f64, Dyn, Dyn>,
    /// What equations and unknowns were multiplied with before the matrix was factored.
    row_scales: Vec<f64>,
    column_scales: Vec<f64>,
    /// The slots whose rows are equations: free ones, then held ones.
    slots: Vec<usize>,
    moving: bool,
    by_composition: Option<ByComposition>,
}

/// How ln c answers where coefficients depend on all of it.
struct ByComposition {
    feedback: Feedback,
    slopes: Slopes,
    /// Of each present species by each free slot.
    answered: DMatrix<f64>,
}

impl<'a> Sensitivity<'a> {
    /// Of an answer to this very system. None where the equations leave the state
    /// undetermined to first order.
    pub fn new(system: &'a System, answer: &Answer) -> Option<Self> {
        if answer.concentrations.len() != system.species.len() {
            return None;
        }
        let search = Search::at_answer(system, answer).ok()?;
        let by_composition = match &system.activity {
            Activity::ByIonicStrength(_) => None,
            Activity::ByComposition(_) => {
                let (feedback, slopes) = Feedback::at(&search)?;
                let answered = feedback.solve(&entries(&search))?;
                Some(ByComposition { feedback, slopes, answered })
            }
        };
        let moving = needs_activity(system)
            && by_composition.is_none()
            && system.ionic_strength == IonicStrength::Computed
            && answer.ionic_strength > 0.0;
        let frame = &search.frame;
        let held: Vec<usize> =
            (0..frame.slots.len()).filter(|&s| matches!(frame.slots[s], Slot::Held(_))).collect();
        let slots: Vec<usize> = search.at.slots.iter().copied().chain(held.clone()).collect();
        let free = search.at.slots.len();
        let ions = usize::from(moving);
        let size = slots.len() + ions;
        let mut matrix = DMatrix::zeros(size, size);
        let mut weights = vec![0.0; slots.len()];
        for (i, &species) in search.at.species.iter().enumerate() {
            let c = search.point.concentrations[i];
            let charge = f64::from(system.species[species].charge);
            let ion = 0.5 * charge * charge * c;
            for (r, &slot) in slots.iter().enumerate() {
                let value = frame.basis.value(species, slot);
                if value == 0.0 {
                    continue;
                }
                weights[r] += c * value * value;
                match &by_composition {
                    None => {
                        for &(l, other) in search.at.row(i) {
                            matrix[(r, l as usize)] += c * value * other;
                        }
                    }
                    Some(by) => {
                        for l in 0..free {
                            matrix[(r, l)] += c * value * by.answered[(i, l)];
                        }
                    }
                }
                if moving {
                    matrix[(r, free)] += c * value * search.shift_slopes[i];
                    if r < free {
                        matrix[(size - 1, r)] += ion * value;
                    }
                }
            }
            if moving {
                matrix[(size - 1, free)] += ion * search.shift_slopes[i];
            }
        }
        if moving {
            matrix[(size - 1, free)] -= answer.ionic_strength;
        }
        for (r, &slot) in slots.iter().enumerate() {
            for k in 0..system.fixed.len() {
                matrix[(r, free + ions + k)] = -frame.supplied(k, slot);
            }
        }
        let mut row_scales: Vec<f64> = weights.iter().map(|w| w.sqrt().recip()).collect();
        let mut column_scales: Vec<f64> = row_scales[..free].to_vec();
        if moving {
            row_scales.push(answer.ionic_strength.recip());
            column_scales.push(1.0);
        }
        column_scales.extend(weights[free..].iter().map(|w| w.sqrt()));
        for scale in row_scales.iter_mut().chain(&mut column_scales) {
            if !scale.is_finite() || *scale == 0.0 {
                *scale = 1.0;
            }
        }
        for (c, column) in column_scales.iter().enumerate() {
            for (r, row) in row_scales.iter().enumerate() {
                matrix[(r, c)] *= row * column;
            }
        }
        let factors = LU::new(matrix);
        let solvable = size == 0 || factors.is_invertible();
        solvable.then_some(Self {
            search,
            factors,
            row_scales,
            column_scales,
            slots,
            moving,
            by_composition,
        })
    }

    /// By the total of a component, others as they are; per mol per litre or kilogram.
    /// None where the component is absent: no derivative is two-sided there.
    pub fn by_total(&self, component: usize) -> Option<Response> {
        let frame = &self.search.frame;
        let line = frame.basis.unit_line(component);
        let absent = |s: usize| matches!(frame.slots[s], Slot::Empty);
        if (0..frame.slots.len()).any(|s| absent(s) && !frame.basis.is_zero(line, s)) {
            return None;
        }
        let scale = frame.basis.scale(component);
        let rows = self.slots.iter().map(|&s| frame.basis.value(line, s) * scale);
        self.respond(rows.collect(), vec![0.0; self.search.at.species.len()], |_| 0.0)
    }

    /// By ln of the formation constant of a species; zero where it is absent.
    pub fn by_ln_k(&self, species: usize) -> Option<Response> {
        let mut direct = vec![0.0; self.search.at.species.len()];
        if let Some(i) = self.search.at.species.iter().position(|&s| s == species) {
            direct[i] = 1.0;
        }
        self.respond(vec![0.0; self.slots.len()], direct, |_| 0.0)
    }

    /// By the value of a held phase, `ln_value` of [`super::system::Fixed`].
    pub fn by_fixed(&self, phase: usize) -> Option<Response> {
        let (frame, at) = (&self.search.frame, &self.search.at);
        let slot = frame.slots.iter().position(|s| *s == Slot::Held(phase))?;
        let direct = at.species.iter().map(|&species| frame.basis.value(species, slot)).collect();
        let own = |s| if s == slot { 1.0 } else { 0.0 };
        self.respond(vec![0.0; self.slots.len()], direct, own)
    }

    /// Solves for right-hand sides of the rows. `direct` is what the ln concentration of
    /// each present species gains with all unknowns and coefficients as they are, and
    /// `slot` what `Σ row · x` of a slot that is not free gains.
    fn respond(
        &self,
        mut rows: Vec<f64>,
        mut direct: Vec<f64>,
        slot: impl Fn(usize) -> f64,
    ) -> Option<Response> {
        let search = &self.search;
        let pushed = direct.iter().any(|d| *d != 0.0);
        if let Some(by) = self.by_composition.as_ref().filter(|_| pushed) {
            let column = DMatrix::from_column_slice(direct.len(), 1, &direct);
            direct.copy_from_slice(by.feedback.solve(&column)?.as_slice());
        }
        let mut ions = 0.0;
        for (i, &species) in search.at.species.iter().enumerate() {
            let moved = search.point.concentrations[i] * direct[i];
            if moved == 0.0 {
                continue;
            }
            let charge = f64::from(search.system().species[species].charge);
            ions -= 0.5 * charge * charge * moved;
            for (row, &s) in rows.iter_mut().zip(&self.slots) {
                *row -= moved * search.frame.basis.value(species, s);
            }
        }
        let system = search.system();
        let free = search.at.slots.len();
        let mut side = DVector::from_vec(rows);
        if self.moving {
            side = side.push(ions);
        }
        for (value, scale) in side.iter_mut().zip(&self.row_scales) {
            *value *= scale;
        }
        if !side.is_empty() && !self.factors.solve_mut(&mut side) {
            return None;
        }
        for (value, scale) in side.iter_mut().zip(&self.column_scales) {
            *value *= scale;
        }
        if side.iter().any(|v| !v.is_finite()) {
            return None;
        }
        let mut ln_i = if self.moving { side[free] } else { 0.0 };
        let mut present = direct;
        for (i, ln_c) in present.iter_mut().enumerate() {
            match &self.by_composition {
                None => {
                    for &(j, value) in search.at.row(i) {
                        *ln_c += value * side[j as usize];
                    }
                }
                Some(by) => {
                    for j in 0..free {
                        *ln_c += by.answered[(i, j)] * side[j];
                    }
                }
            }
            if self.moving {
                *ln_c += search.shift_slopes[i] * ln_i;
            }
        }
        let mut moves: Vec<f64> = (0..search.frame.slots.len()).map(&slot).collect();
        for (j, &s) in search.at.slots.iter().enumerate() {
            moves[s] = side[j];
        }
        for (s, kind) in search.frame.slots.iter().enumerate() {
            if let Slot::Held(k) = kind {
                moves[s] += match &self.by_composition {
                    None => search.held_gamma(*k).1 * ln_i,
                    Some(by) => held_response(search, &by.slopes, *k, &present),
                };
            }
        }
        if self.by_composition.is_some() {
            let (mut sum, mut change) = (0.0, 0.0);
            for (i, &species) in search.at.species.iter().enumerate() {
                let charge = f64::from(system.species[species].charge);
                sum += charge * charge * search.point.concentrations[i];
                change += charge * charge * search.point.concentrations[i] * present[i];
            }
            ln_i = if sum > 0.0 { change / sum } else { 0.0 };
        }
        let basis = &search.frame.basis;
        let ln_components = (0..basis.width())
            .map(|l| {
                let line = basis.unit_line(l);
                let sum: f64 =
                    moves.iter().enumerate().map(|(s, m)| m * basis.value(line, s)).sum();
                sum * basis.scale(l)
            })
            .collect();
        let mut ln_concentrations = vec![0.0; system.species.len()];
        for (&species, ln_c) in search.at.species.iter().zip(present) {
            ln_concentrations[species] = ln_c;
        }
        let amounts = side.as_slice()[free + usize::from(self.moving)..].to_vec();
        Some(Response { ln_components, ln_concentrations, ln_ionic_strength: ln_i, amounts })
    }
}

/// Strong base that raises the pH by one, to first order, in mol per litre or kilogram:
/// `−d total_H / d pH`, all other totals and held values as they are. Where the pH itself
/// is held, its own balance is put back for this. None where the pH cannot move.
pub fn buffer_capacity(system: &System, answer: &Answer) -> Option<f64> {
    let held = system.fixed.iter().position(|fixed| fixed.row.len() == 1 && fixed.row[0].0 == 0);
    let Some(k) = held else {
        return capacity(system, answer);
    };
    let mut system = system.clone();
    let mut answer = answer.clone();
    let fixed = system.fixed.remove(k);
    if k >= answer.amounts.len() {
        return None;
    }
    let amount = answer.amounts.remove(k);
    for (j, n) in &fixed.supply {
        system.totals[*j] += amount * *n.numer() as f64 / *n.denom() as f64;
    }
    capacity(&system, &answer)
}

fn capacity(system: &System, answer: &Answer) -> Option<f64> {
    let by_ph = Sensitivity::new(system, answer)?.by_total(0)?.ph();
    let capacity = -by_ph.recip();
    capacity.is_finite().then_some(capacity)
}
