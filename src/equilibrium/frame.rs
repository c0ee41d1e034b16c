//! A system over a chosen basis, with what is held or absent told apart from what is
//! to be found.
//!
//! Held phases stand in the basis for good, and their rows are dropped. A row whose
//! species all pull the same way while its total is zero has only one answer, nothing
//! at all: those species are absent and the row with them. That is how a component
//! with a total of zero disappears, and so does whatever a recipe on the very edge of
//! its components leaves out. A row that can never reach its total is proof that no
//! state exists.

use super::basis::Basis;
use super::coordinates::Coordinates;
use super::sum::Sum;
use super::system::{Failure, System};

/// What a slot of the basis means.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) enum Slot {
    /// Its row is to be met.
    Free,
    /// Held phase `k` stands here.
    Held(usize),
    /// Nothing that needs it is present.
    Empty,
}

#[derive(Clone, Debug)]
pub(super) struct Frame<'a> {
    pub system: &'a System,
    pub basis: Basis<'a>,
    pub slots: Vec<Slot>,
    /// Of each species.
    pub present: Vec<bool>,
    /// Whether what the held phases supply lies outside the span of their rows, so
    /// that dropping rows is not enough.
    pub askew: bool,
}

/// Cancellation below this many units of rounding of its terms is a total of zero.
pub(super) const ROUNDINGS: f64 = 4.0 * f64::EPSILON;

impl<'a> Frame<'a> {
    pub fn new(system: &'a System) -> Result<Self, Failure> {
        let mut frame = Self {
            system,
            basis: Basis::new(system),
            slots: vec![Slot::Free; system.totals.len()],
            present: vec![true; system.species.len()],
            askew: false,
        };
        if !system.fixed.is_empty() {
            frame.hold()?;
        }
        Ok(frame)
    }

    /// Brings the held phases into the basis.
    fn hold(&mut self) -> Result<(), Failure> {
        for k in 0..self.system.fixed.len() {
            let line = self.basis.fixed_line(k);
            let open = (0..self.slots.len())
                .filter(|&s| self.slots[s] == Slot::Free && !self.basis.is_zero(line, s));
            // Rather a component without a total of its own than the proton.
            let weight = |s: usize| if s == 0 { f64::MAX } else { self.system.totals[s].abs() };
            match open.min_by(|a, b| weight(*a).total_cmp(&weight(*b))) {
                Some(slot) => {
                    self.basis.exchange(line, slot);
                    self.slots[slot] = Slot::Held(k);
                }
                None => {
                    let fixed = (0..k)
                        .filter(|&other| {
                            let slot = self.slots.iter().position(|s| *s == Slot::Held(other));
                            slot.is_some_and(|s| !self.basis.is_zero(line, s))
                        })
                        .chain([k])
                        .collect();
                    return Err(Failure::Dependent { components: Vec::new(), fixed });
                }
            }
        }
        if self.system.fixed.iter().any(|fixed| fixed.row != fixed.supply) {
            self.check_supply()?;
        }
        Ok(())
    }

    /// The supplies must be independent, as the rows are; and says whether they span
    /// the same.
    fn check_supply(&mut self) -> Result<(), Failure> {
        let mut swapped = self.system.clone();
        swapped.species.clear();
        for fixed in &mut swapped.fixed {
            fixed.row.clone_from(&fixed.supply);
        }
        Frame::new(&swapped)?;
        self.askew = (0..self.system.fixed.len()).any(|k| {
            (0..self.slots.len()).any(|s| self.slots[s] == Slot::Free && self.supplied(k, s) != 0.0)
        });
        Ok(())
    }

    /// What one mole of held phase `k` brings to the row in `slot`.
    pub fn supplied(&self, k: usize, slot: usize) -> f64 {
        let mut sum = Sum::default();
        for (l, coefficient) in &self.system.fixed[k].supply {
            let numerator = self.basis.numerator(self.basis.unit_line(*l), slot);
            if numerator != 0.0 {
                let scaled = self.basis.scale(*l) / *coefficient.denom() as f64;
                sum.add_product(numerator * scaled, *coefficient.numer() as f64);
            }
        }
        sum.value() / self.basis.denominator()
    }

    /// The total of the row in `slot`: value, and the size of what it is the sum of.
    pub fn total(&self, slot: usize) -> Sum {
        let mut sum = Sum::default();
        for (l, total) in self.system.totals.iter().enumerate() {
            let numerator = self.basis.numerator(self.basis.unit_line(l), slot);
            if numerator != 0.0 && *total != 0.0 {
                sum.add_product(*total, numerator * self.basis.scale(l));
            }
        }
        sum.over(self.basis.denominator())
    }

    /// The total of the row in `slot`, and whether it is none but for rounding.
    fn total_or_none(&self, slot: usize) -> (f64, bool) {
        let sum = self.total(slot);
        let total = sum.value();
        (total, total == 0.0 || (sum.count > 1 && total.abs() <= ROUNDINGS * sum.size))
    }

    /// Writes the system over the present basis, having taken out what is absent.
    pub fn coordinates(&mut self) -> Result<Coordinates, Failure> {
        loop {
            let coordinates = Coordinates::new(self);
            if !self.settle(&coordinates)? {
                return Ok(coordinates);
            }
        }
    }

    /// Whether what is present and absent by this frame still is, the system's numbers
    /// having moved, so that its rows stand as they are.
    pub fn still_fits(&self, at: &Coordinates) -> bool {
        let free = at.slots.iter().zip(&at.signs).all(|(&slot, &(up, down))| {
            (up && down) || {
                let (total, none) = self.total_or_none(slot);
                !none && if total > 0.0 { up } else { down }
            }
        });
        let empty = |s: &usize| self.slots[*s] == Slot::Empty;
        free && (0..self.slots.len()).filter(empty).all(|slot| self.total_or_none(slot).1)
    }

    /// Takes out absent species and rows; says whether it did. Fails where a row can
    /// never be met.
    fn settle(&mut self, at: &Coordinates) -> Result<bool, Failure> {
        let mut changed = false;
        for (j, &slot) in at.slots.iter().enumerate() {
            let (up, down) = at.signs[j];
            if up && down {
                continue;
            }
            let (total, none) = self.total_or_none(slot);
            if none {
                self.empty(slot, up, down)?;
                changed = true;
            } else if (total > 0.0 && !up) || (total < 0.0 && !down) {
                return Err(Failure::Infeasible { component: self.at_fault(slot, total) });
            }
        }
        Ok(changed)
    }

    fn empty(&mut self, slot: usize, up: bool, down: bool) -> Result<(), Failure> {
        let mut species = 0..self.system.species.len();
        if up || down {
            if self.basis.line(slot) == self.basis.unit_line(0) {
                // No protons at all would be no finite pH.
                return Err(Failure::Infeasible { component: 0 });
            }
            for i in species {
                if self.present[i] && !self.basis.is_zero(i, slot) {
                    self.present[i] = false;
                }
            }
        } else {
            // No species present needs it. Where none ever did, and more than one
            // component takes part, their rows say the same thing.
            let support: Vec<usize> = (0..self.slots.len())
                .filter(|&l| !self.basis.is_zero(self.basis.unit_line(l), slot))
                .collect();
            if support.len() > 1 && species.all(|i| self.basis.is_zero(i, slot)) {
                return Err(Failure::Dependent { components: support, fixed: Vec::new() });
            }
        }
        self.slots[slot] = Slot::Empty;
        Ok(())
    }

    /// The component to name for a row that cannot be met: the one whose own total
    /// pulls it furthest to the wrong side.
    pub fn at_fault(&self, slot: usize, total: f64) -> usize {
        let pull = |l: &usize| {
            let numerator = self.basis.numerator(self.basis.unit_line(*l), slot);
            numerator * self.basis.scale(*l) * self.system.totals[*l] * total.signum()
        };
        (0..self.slots.len()).max_by(|a, b| pull(a).total_cmp(&pull(b))).unwrap_or(0)
    }

    /// Brings the most abundant species into the basis, given the natural logarithm of
    /// some measure of abundance. Says whether the basis changed.
    pub fn choose(&mut self, order: &[usize]) -> bool {
        let before: Vec<usize> = (0..self.slots.len()).map(|s| self.basis.line(s)).collect();
        let open: Vec<bool> = self.slots.iter().map(|s| *s == Slot::Free).collect();
        self.basis.choose(order, &open);
        (0..self.slots.len()).any(|s| self.basis.line(s) != before[s])
    }

    /// What is taken off `u` to give `Σ row · x` for the line in a slot.
    pub fn offset(&self, slot: usize) -> f64 {
        match self.slots[slot] {
            Slot::Free => {
                let line = self.basis.line(slot);
                self.system.species.get(line).map_or(0.0, |species| species.ln_k)
            }
            Slot::Held(_) | Slot::Empty => 0.0,
        }
    }
}
