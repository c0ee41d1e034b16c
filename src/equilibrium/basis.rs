//! The dominance basis: the problem's rows over those of the most abundant species,
//! changed exactly.
//!
//! Every row over the components (species, held phases, the components themselves) is
//! a line of one integer table. Fractional coefficients are made whole by scaling the
//! component they stand at: with `q_j` the least common multiple of the denominators
//! in column `j`, the unknown becomes `x_j / q_j` and the balance is multiplied by
//! `q_j`.

use num_bigint::BigInt;
use num_integer::Integer;
use num_rational::Rational64;
use num_traits::One;

use super::exact::{Exact, Overflow, Table};
use super::system::System;

#[derive(Clone, Debug)]
enum Numbers {
    Small(Table<i64>),
    Large(Table<BigInt>),
}

/// The rows of a system over a basis. Lines are numbered: species first, then the
/// held phases, then one unit row for each component.
#[derive(Clone, Debug)]
pub(super) struct Basis<'a> {
    system: &'a System,
    lines: Lines,
}

/// The table of a basis, without the system that it is of.
#[derive(Clone, Debug)]
pub(super) struct Lines {
    numbers: Numbers,
    /// `q_j` of each component.
    scales: Vec<f64>,
    /// The line that stands in each slot; at first the unit rows.
    pub slots: Vec<usize>,
}

impl<'a> Basis<'a> {
    pub fn new(system: &'a System) -> Self {
        let width = system.totals.len();
        let lines = system.species.len() + system.fixed.len() + width;
        let (numbers, scales) = match small_rows(system) {
            Some((entries, scales)) => (Numbers::Small(Table::new(width, entries)), scales),
            None => {
                let (entries, scales) = large_rows(system);
                (Numbers::Large(Table::new(width, entries)), scales)
            }
        };
        let first_unit = lines - width;
        let slots = (first_unit..lines).collect();
        Self { system, lines: Lines { numbers, scales, slots } }
    }

    /// The same table over another system of the same rows.
    pub fn over(system: &'a System, lines: Lines) -> Self {
        Self { system, lines }
    }

    pub fn into_lines(self) -> Lines {
        self.lines
    }

    pub fn width(&self) -> usize {
        self.lines.slots.len()
    }

    /// The line of held phase `k`.
    pub fn fixed_line(&self, k: usize) -> usize {
        self.system.species.len() + k
    }

    /// The line of the unit row of component `j`.
    pub fn unit_line(&self, j: usize) -> usize {
        self.system.species.len() + self.system.fixed.len() + j
    }

    /// The line in a slot.
    pub fn line(&self, slot: usize) -> usize {
        self.lines.slots[slot]
    }

    /// `q_j`: what component `j`'s balance is multiplied with and its unknown divided by.
    pub fn scale(&self, component: usize) -> f64 {
        self.lines.scales[component]
    }

    pub fn is_zero(&self, line: usize, slot: usize) -> bool {
        match &self.lines.numbers {
            Numbers::Small(table) => table.is_zero(line, slot),
            Numbers::Large(table) => table.is_zero(line, slot),
        }
    }

    /// The coefficient of a line at a slot, rounded once.
    pub fn value(&self, line: usize, slot: usize) -> f64 {
        match &self.lines.numbers {
            Numbers::Small(table) => table.value(line, slot),
            Numbers::Large(table) => table.value(line, slot),
        }
    }

    /// Every coefficient of a line that is not zero, with its slot.
    pub fn each(&self, line: usize, take: impl FnMut(usize, f64)) {
        match &self.lines.numbers {
            Numbers::Small(table) => table.each(line, take),
            Numbers::Large(table) => table.each(line, take),
        }
    }

    /// The coefficient times [`Self::denominator`]: whole, so that sums over it can be
    /// made without rounding.
    pub fn numerator(&self, line: usize, slot: usize) -> f64 {
        match &self.lines.numbers {
            Numbers::Small(table) => table.numerator(line, slot),
            Numbers::Large(table) => table.numerator(line, slot),
        }
    }

    pub fn denominator(&self) -> f64 {
        match &self.lines.numbers {
            Numbers::Small(table) => table.denominator(),
            Numbers::Large(table) => table.denominator(),
        }
    }

    fn is_unit(&self, line: usize, slot: usize) -> bool {
        match &self.lines.numbers {
            Numbers::Small(table) => table.is_unit(line, slot),
            Numbers::Large(table) => table.is_unit(line, slot),
        }
    }

    /// Puts a line into a slot where its coefficient is not zero.
    pub fn exchange(&mut self, line: usize, slot: usize) {
        if self.lines.slots[slot] == line {
            return;
        }
        let result = match &mut self.lines.numbers {
            Numbers::Small(table) => table.exchange(line, slot),
            Numbers::Large(table) => table.exchange(line, slot),
        };
        self.lines.slots[slot] = line;
        if result.is_err() {
            self.lines.numbers = Numbers::Large(self.rebuilt());
        }
    }

    /// The table over the present basis in big integers, from the beginning.
    fn rebuilt(&self) -> Table<BigInt> {
        let (entries, _) = large_rows(self.system);
        let mut table = Table::new(self.width(), entries);
        // The lines to bring in are independent; each finds a slot not yet taken.
        let mut order = vec![usize::MAX; self.width()];
        let mut taken = vec![false; self.width()];
        for &line in &self.lines.slots {
            let slot = (0..self.width()).find(|&s| !taken[s] && !table.is_zero(line, s));
            if let Some(slot) = slot {
                let done: Result<(), Overflow> = table.exchange(line, slot);
                debug_assert!(done.is_ok());
                taken[slot] = true;
                order[slot] = line;
            }
        }
        // The slots came out in another order: put the columns where they were.
        let columns: Vec<usize> = self
            .lines
            .slots
            .iter()
            .map(|line| order.iter().position(|l| l == line).unwrap_or(0))
            .collect();
        table.reorder(&columns);
        table
    }

    /// Brings the lines of `order` in, first come first served, as far as they are
    /// independent, into the slots that `open` allows. Gives back the slots that no
    /// line could take.
    pub fn choose(&mut self, order: &[usize], open: &[bool]) -> Vec<usize> {
        let mut left: Vec<usize> = (0..self.width()).filter(|&s| open[s]).collect();
        for &line in order {
            if left.is_empty() {
                break;
            }
            if let Some(at) = left.iter().position(|&s| self.lines.slots[s] == line) {
                left.swap_remove(at);
                continue;
            }
            // A unit pivot keeps the integers small.
            let mut found = None;
            for (at, &slot) in left.iter().enumerate() {
                if !self.is_zero(line, slot) {
                    if self.is_unit(line, slot) {
                        found = Some(at);
                        break;
                    }
                    found = found.or(Some(at));
                }
            }
            if let Some(at) = found {
                let slot = left.swap_remove(at);
                self.exchange(line, slot);
            }
        }
        left
    }
}

/// The numerator of `coefficient · scale`, where the scale clears the denominator.
fn whole<I: Exact>(coefficient: &Rational64, scale: &I) -> Option<I> {
    let numerator = I::from(*coefficient.numer());
    if !numerator.fits() {
        return None;
    }
    if scale.is_one() {
        return Some(numerator);
    }
    let by = scale.clone() / I::from(*coefficient.denom());
    numerator.times(&by).ok()
}

fn rows<I: Exact>(system: &System, scales: &[I]) -> Option<Vec<I>> {
    let width = system.totals.len();
    let lines = system.species.len() + system.fixed.len() + width;
    let mut entries = vec![I::zero(); lines * width];
    let given =
        system.species.iter().map(|s| &s.row).chain(system.fixed.iter().map(|fixed| &fixed.row));
    for (line, row) in given.enumerate() {
        for (j, coefficient) in row {
            entries[line * width + j] = whole(coefficient, &scales[*j])?;
        }
    }
    for j in 0..width {
        let line = lines - width + j;
        // The unit row counts `x_j / q_j`, so that it starts as one.
        entries[line * width + j] = I::one();
    }
    Some(entries)
}

fn every_row(system: &System) -> impl Iterator<Item = &(usize, Rational64)> {
    system
        .species
        .iter()
        .flat_map(|s| &s.row)
        .chain(system.fixed.iter().flat_map(|fixed| fixed.row.iter().chain(&fixed.supply)))
}

fn small_rows(system: &System) -> Option<(Vec<i64>, Vec<f64>)> {
    let mut scales = vec![1i64; system.totals.len()];
    for (j, coefficient) in every_row(system) {
        let denominator = *coefficient.denom();
        if denominator != 1 {
            let gcd = scales[*j].gcd(&denominator);
            scales[*j] = scales[*j].checked_mul(denominator / gcd)?;
        }
    }
    let entries = rows(system, &scales)?;
    Some((entries, scales.iter().map(|s| *s as f64).collect()))
}

fn large_rows(system: &System) -> (Vec<BigInt>, Vec<f64>) {
    let mut scales = vec![BigInt::one(); system.totals.len()];
    for (j, coefficient) in every_row(system) {
        if !coefficient.denom().is_one() {
            scales[*j] = scales[*j].lcm(&BigInt::from(*coefficient.denom()));
        }
    }
    // Big integers never overflow, so that this is always some.
    let entries = rows(system, &scales).unwrap_or_default();
    (entries, scales.iter().map(Exact::approximate).collect())
}
