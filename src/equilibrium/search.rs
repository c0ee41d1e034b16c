//! A search in progress: the frame, the balances over it, the present point and the
//! activity coefficients that it is taken with.

use super::coordinates::Coordinates;
use super::frame::{Frame, Slot};
use super::point::Point;
use super::system::{Answer, Failure, System};
use crate::chemistry::activity::ActivityKind;

pub(super) struct Search<'a> {
    pub frame: Frame<'a>,
    pub at: Coordinates,
    pub point: Point,
    /// What the line search tries; swapped with `point` when taken.
    pub trial: Point,
    /// The ionic strength that activity coefficients are taken at; none while all are
    /// one.
    pub ionic_strength: Option<f64>,
    /// ln γ of each present species, and its derivative by ln I.
    pub gammas: Vec<(f64, f64)>,
    /// What activity coefficients add to ln c of each present species (its own, and
    /// those of phases held by concentration), and the derivative by ln I.
    pub shifts: Vec<f64>,
    pub shift_slopes: Vec<f64>,
    pub step: Vec<f64>,
    pub iterations: u32,
}

impl<'a> Search<'a> {
    /// Starts from guesses of ln activity of the components.
    pub fn new(mut frame: Frame<'a>, guess: impl Fn(usize) -> f64) -> Result<Self, Failure> {
        let at = frame.coordinates()?;
        let u = at.slots.iter().map(|&slot| {
            let line = frame.basis.line(slot);
            let component = line - frame.basis.unit_line(0);
            guess(component) / frame.basis.scale(component)
        });
        let point = Point { u: u.collect(), ..Point::default() };
        let mut search = Self::from_parts(frame, at, point);
        search.evaluate();
        Ok(search)
    }

    pub fn from_parts(frame: Frame<'a>, at: Coordinates, point: Point) -> Self {
        Self {
            frame,
            at,
            point,
            trial: Point::default(),
            ionic_strength: None,
            gammas: Vec::new(),
            shifts: Vec::new(),
            shift_slopes: Vec::new(),
            step: Vec::new(),
            iterations: 0,
        }
    }

    /// The state of an answer to this very system: where the counts of species differ,
    /// nothing is promised of it.
    pub fn at_answer(system: &'a System, answer: &Answer) -> Result<Self, Failure> {
        let mut frame = Frame::new(system)?;
        for (present, c) in frame.present.iter_mut().zip(&answer.concentrations) {
            *present = *c > 0.0;
        }
        let mut order: Vec<usize> =
            (0..frame.present.len()).filter(|&i| frame.present[i]).collect();
        order.sort_unstable_by(|a, b| {
            answer.concentrations[*b].total_cmp(&answer.concentrations[*a])
        });
        frame.choose(&order);
        let at = frame.coordinates()?;
        let u = at.slots.iter().map(|&slot| {
            let line = frame.basis.line(slot);
            let ln_gamma = answer.ln_gammas.get(line).copied().unwrap_or(0.0);
            answer.concentrations.get(line).map_or(0.0, |c| c.ln()) + ln_gamma
        });
        let point = Point { u: u.collect(), ..Point::default() };
        let mut search = Self::from_parts(frame, at, point);
        if system.activity.kind != ActivityKind::Ideal {
            search.set_ionic_strength(answer.ionic_strength);
        }
        search.evaluate();
        Ok(search)
    }

    /// The derivative of ln γ by ln I for a phase held by concentration.
    pub fn held_slope(&self, k: usize) -> f64 {
        let system = self.system();
        match (system.fixed[k].concentration_of, self.ionic_strength) {
            (Some((charge, size)), Some(i)) => system.activity.ln_gamma(charge, size, i).1 * i,
            _ => 0.0,
        }
    }

    pub fn system(&self) -> &'a System {
        self.frame.system
    }

    pub fn evaluate(&mut self) {
        self.point.evaluate(&self.at, &self.shifts);
    }

    /// Takes activity coefficients at an ionic strength. The point is not evaluated.
    pub fn set_ionic_strength(&mut self, ionic_strength: f64) {
        self.ionic_strength = Some(ionic_strength);
        let system = self.frame.system;
        let ln_gamma = |charge, size| {
            let (ln, by_i) = system.activity.ln_gamma(charge, size, ionic_strength);
            (ln, by_i * ionic_strength)
        };
        self.gammas.clear();
        self.shifts.clear();
        self.shift_slopes.clear();
        for &i in &self.at.species {
            let species = &system.species[i];
            let (ln, slope) = ln_gamma(species.charge, species.ion_size);
            self.gammas.push((ln, slope));
            self.shifts.push(-ln);
            self.shift_slopes.push(-slope);
        }
        for &(i, k, value) in &self.at.held {
            if let Some((charge, size)) = system.fixed[k].concentration_of {
                let (ln, slope) = ln_gamma(charge, size);
                self.shifts[i] += value * ln;
                self.shift_slopes[i] += value * slope;
            }
        }
    }

    pub fn ln_gamma(&self, i: usize) -> f64 {
        self.gammas.get(i).map_or(0.0, |g| g.0)
    }

    /// ln activity of a present species.
    pub fn ln_activity(&self, i: usize) -> f64 {
        let shift = self.shifts.get(i).copied().unwrap_or(0.0);
        self.point.ln_activities[i] + shift + self.ln_gamma(i)
    }

    /// Changes to the basis of the most abundant species at the present point, which
    /// stays the same state.
    pub fn rebase(&mut self) -> Result<(), Failure> {
        let mut ranks: Vec<(f64, usize)> = (0..self.at.species.len())
            .map(|i| (self.ln_activity(i) - self.ln_gamma(i), self.at.species[i]))
            .collect();
        ranks.sort_unstable_by(|a, b| b.0.total_cmp(&a.0));
        let order: Vec<usize> = ranks.iter().map(|r| r.1).collect();
        if !self.frame.choose(&order) {
            return Ok(());
        }
        self.carry_over()
    }

    /// Leaves species out for good.
    pub fn exclude(&mut self, absent: &[usize]) -> Result<(), Failure> {
        for &i in absent {
            self.frame.present[i] = false;
        }
        let order: Vec<usize> =
            self.at.species.iter().copied().filter(|&i| self.frame.present[i]).collect();
        self.frame.choose(&order);
        self.carry_over()
    }

    /// Writes the balances over the frame's basis, the point staying the same state.
    fn carry_over(&mut self) -> Result<(), Failure> {
        let mut known = vec![0.0; self.system().species.len()];
        for (i, &species) in self.at.species.iter().enumerate() {
            known[species] = self.ln_activity(i);
        }
        let mut old = vec![0.0; self.frame.slots.len()];
        for (j, &slot) in self.at.slots.iter().enumerate() {
            old[slot] = self.point.u[j];
        }
        self.at = self.frame.coordinates()?;
        self.point.u.clear();
        for &slot in &self.at.slots {
            let line = self.frame.basis.line(slot);
            self.point.u.push(known.get(line).copied().unwrap_or(old[slot]));
        }
        if let Some(ionic_strength) = self.ionic_strength {
            self.set_ionic_strength(ionic_strength);
        }
        self.evaluate();
        Ok(())
    }

    /// Whether some species has passed one of the basis that it contains by so much
    /// that a change of basis pays.
    pub fn outgrown(&self) -> bool {
        const PASSED: f64 = 1.5;
        let basis: Vec<f64> = self
            .at
            .basis_species
            .iter()
            .map(|b| b.map_or(f64::NEG_INFINITY, |i| self.ln_activity(i) - self.ln_gamma(i)))
            .collect();
        (0..self.at.species.len()).any(|i| {
            let ln_c = self.ln_activity(i) - self.ln_gamma(i);
            self.at.row(i).iter().any(|&(j, _)| ln_c > basis[j as usize] + PASSED)
        })
    }

    /// `½ Σ z² c`.
    pub fn ionic_strength_now(&self) -> f64 {
        let system = self.system();
        let terms = self.at.species.iter().zip(&self.point.concentrations);
        0.5 * terms.map(|(&i, c)| f64::from(system.species[i].charge).powi(2) * c).sum::<f64>()
    }

    /// `ln activity` of the line in each slot, less its formation constant: `Σ row · x`.
    fn slot_values(&self) -> Vec<f64> {
        let system = self.system();
        let mut values: Vec<f64> = self
            .frame
            .slots
            .iter()
            .map(|slot| match slot {
                Slot::Free => 0.0,
                Slot::Empty => f64::NEG_INFINITY,
                Slot::Held(k) => {
                    let fixed = &system.fixed[*k];
                    let ln_gamma = match (fixed.concentration_of, self.ionic_strength) {
                        (Some((charge, size)), Some(i)) => {
                            system.activity.ln_gamma(charge, size, i).0
                        }
                        _ => 0.0,
                    };
                    fixed.ln_value + ln_gamma
                }
            })
            .collect();
        for (j, &slot) in self.at.slots.iter().enumerate() {
            values[slot] = self.point.u[j] - self.frame.offset(slot);
        }
        values
    }

    /// ln activity of each component.
    pub fn ln_components(&self) -> Vec<f64> {
        let values = self.slot_values();
        let basis = &self.frame.basis;
        (0..basis.width())
            .map(|l| {
                let line = basis.unit_line(l);
                let mut ln = 0.0;
                for (slot, value) in values.iter().enumerate() {
                    if basis.is_zero(line, slot) {
                        continue;
                    }
                    if *value == f64::NEG_INFINITY {
                        return f64::NEG_INFINITY;
                    }
                    ln += basis.value(line, slot) * value;
                }
                ln * basis.scale(l)
            })
            .collect()
    }

    /// The answer at the present point.
    pub fn answer(&self) -> Answer {
        let system = self.system();
        let mut concentrations = vec![0.0; system.species.len()];
        let mut ln_gammas = vec![0.0; system.species.len()];
        for (i, &species) in self.at.species.iter().enumerate() {
            concentrations[species] = self.point.concentrations[i];
            ln_gammas[species] = self.ln_gamma(i);
        }
        let ionic_strength = self.ionic_strength.unwrap_or_else(|| self.ionic_strength_now());
        let amounts = super::fixed::amounts(self);
        let residual = super::fixed::residual(system, &concentrations, &amounts);
        Answer {
            ln_components: self.ln_components(),
            concentrations,
            ln_gammas,
            ionic_strength,
            amounts,
            residual,
            iterations: self.iterations,
        }
    }
}
