//! A table of rows over a basis in exact integers, and the exchange of one basis row
//! for another.
//!
//! The table holds `D·α`, where row `i` is `Σ_j α_ij · basis_j` and `D > 0` is common
//! to the whole table. An exchange keeps all of it in integers (every entry is a minor
//! of the first table), so that no rounding ever enters the change of basis.

use num_bigint::BigInt;
use num_integer::Integer;
use num_traits::{CheckedMul, CheckedSub, Signed, ToPrimitive};

/// The integers a table can be made of: machine words, or big ones when those overflow.
pub(super) trait Exact:
    Clone + PartialEq + Integer + Signed + CheckedMul + CheckedSub + ToPrimitive + From<i64>
{
    /// The nearest `f64`; infinite past its range.
    fn approximate(&self) -> f64;

    /// Whether negation and magnitude are safe.
    fn fits(&self) -> bool;

    fn less(&self, product: &Self) -> Result<Self, Overflow> {
        self.checked_sub(product).filter(Exact::fits).ok_or(Overflow)
    }

    fn times(&self, factor: &Self) -> Result<Self, Overflow> {
        self.checked_mul(factor).filter(Exact::fits).ok_or(Overflow)
    }
}

impl Exact for i64 {
    fn approximate(&self) -> f64 {
        *self as f64
    }

    fn fits(&self) -> bool {
        *self != i64::MIN
    }
}

impl Exact for BigInt {
    fn approximate(&self) -> f64 {
        self.to_f64().unwrap_or(f64::INFINITY)
    }

    fn fits(&self) -> bool {
        true
    }
}

/// An entry no longer fits the integers of the table. The table is then in pieces and
/// must be made anew with bigger ones.
#[derive(Debug)]
pub(super) struct Overflow;

#[derive(Clone, Debug)]
pub(super) struct Table<I> {
    width: usize,
    entries: Vec<I>,
    denominator: I,
    /// The pivot row's non-zero slots, kept between exchanges.
    scratch: Vec<(usize, I)>,
}

impl<I: Exact> Table<I> {
    /// Rows of `width` integers, over the basis of unit rows.
    pub fn new(width: usize, entries: Vec<I>) -> Self {
        Self { width, entries, denominator: I::one(), scratch: Vec::new() }
    }

    pub fn is_zero(&self, row: usize, slot: usize) -> bool {
        self.entries[row * self.width + slot].is_zero()
    }

    /// Whether a coefficient is one or minus one.
    pub fn is_unit(&self, row: usize, slot: usize) -> bool {
        self.entries[row * self.width + slot].abs() == self.denominator
    }

    /// The coefficient as the nearest `f64`.
    pub fn value(&self, row: usize, slot: usize) -> f64 {
        let entry = self.entries[row * self.width + slot].approximate();
        if self.denominator.is_one() { entry } else { entry / self.denominator.approximate() }
    }

    /// Every coefficient of a row that is not zero, with its slot.
    pub fn each(&self, row: usize, mut take: impl FnMut(usize, f64)) {
        let whole = self.denominator.is_one();
        let denominator = self.denominator.approximate();
        let row = &self.entries[row * self.width..(row + 1) * self.width];
        for (slot, entry) in row.iter().enumerate() {
            if !entry.is_zero() {
                let entry = entry.approximate();
                take(slot, if whole { entry } else { entry / denominator });
            }
        }
    }

    /// The coefficient times [`Self::denominator`].
    pub fn numerator(&self, row: usize, slot: usize) -> f64 {
        self.entries[row * self.width + slot].approximate()
    }

    pub fn denominator(&self) -> f64 {
        self.denominator.approximate()
    }

    /// Puts the columns in another order: slot `s` becomes what `columns[s]` was.
    pub fn reorder(&mut self, columns: &[usize]) {
        let width = self.width;
        let mut line = Vec::with_capacity(width);
        for row in self.entries.chunks_exact_mut(width) {
            line.clear();
            line.extend(columns.iter().map(|&from| row[from].clone()));
            row.clone_from_slice(&line);
        }
    }

    /// Puts `row` into the basis at `slot`, where its coefficient must not be zero.
    pub fn exchange(&mut self, row: usize, slot: usize) -> Result<(), Overflow> {
        let width = self.width;
        let pivot = self.entries[row * width + slot].clone();
        debug_assert!(!pivot.is_zero());
        let negative = pivot.is_negative();
        let size = pivot.abs();
        let mut scratch = std::mem::take(&mut self.scratch);
        scratch.clear();
        for (j, entry) in self.entries[row * width..(row + 1) * width].iter().enumerate() {
            if j != slot && !entry.is_zero() {
                scratch.push((j, entry.clone()));
            }
        }
        let plain = size == self.denominator;
        let old = std::mem::replace(&mut self.denominator, size.clone());
        for (i, target) in self.entries.chunks_exact_mut(width).enumerate() {
            if i == row {
                continue;
            }
            let factor = target[slot].clone();
            if plain {
                // |pivot| = D: the row changes only where the pivot row is not zero.
                if factor.is_zero() {
                    continue;
                }
                let factor = if negative { -factor } else { factor };
                for (j, entry) in &scratch {
                    let product = factor.times(entry)?;
                    let product = if old.is_one() { product } else { product / old.clone() };
                    target[*j] = target[*j].less(&product)?;
                }
                target[slot] = factor;
                continue;
            }
            for (j, entry) in target.iter_mut().enumerate() {
                if j != slot && !entry.is_zero() {
                    *entry = entry.times(&size)?;
                }
            }
            let factor = if negative { -factor } else { factor };
            if !factor.is_zero() {
                for (j, entry) in &scratch {
                    let product = factor.times(entry)?;
                    target[*j] = target[*j].less(&product)?;
                }
            }
            if !old.is_one() {
                for (j, entry) in target.iter_mut().enumerate() {
                    if j != slot && !entry.is_zero() {
                        *entry = entry.clone() / old.clone();
                    }
                }
            }
            target[slot] = factor;
        }
        for (j, entry) in self.entries[row * width..(row + 1) * width].iter_mut().enumerate() {
            *entry = if j == slot { size.clone() } else { I::zero() };
        }
        self.scratch = scratch;
        Ok(())
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn an_exchanged_table_still_gives_every_row() {
        let rows: Vec<Vec<i64>> = vec![
            vec![1, 0, 0],
            vec![-1, 2, 0],
            vec![2, 1, -3],
            vec![0, 4, 1],
            vec![1, 0, 0],
            vec![0, 1, 0],
            vec![0, 0, 1],
        ];
        let mut table = Table::new(3, rows.concat());
        let mut basis = [4, 5, 6];
        for (row, slot) in [(2, 2), (3, 1), (1, 0), (0, 1), (4, 2)] {
            if table.is_zero(row, slot) {
                continue;
            }
            assert!(table.exchange(row, slot).is_ok());
            basis[slot] = row;
            for (i, row) in rows.iter().enumerate() {
                for l in 0..3 {
                    let sum: f64 =
                        (0..3).map(|s| table.numerator(i, s) * rows[basis[s]][l] as f64).sum();
                    assert_eq!(sum, row[l] as f64 * table.denominator());
                }
            }
        }
    }
}
