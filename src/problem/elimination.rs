//! Gaussian elimination in exact arithmetic: rank, independence, solutions.
//!
//! Rows are sparse: (column, coefficient), by rising column. Every function works with
//! 64-bit fractions and goes over to fractions without limit when one does not fit;
//! [`TooLarge`] comes only where the result itself does not fit.

use num_rational::{BigRational, Rational64};

pub use super::exact::TooLarge;
use super::exact::{Exact, escalate};

/// A sparse row: (column, coefficient).
pub type SparseRow<'a> = &'a [(usize, Rational64)];

/// A combination of rows: (row, factor).
pub type Combination = Vec<(usize, Rational64)>;

/// What a set of linear equations has for a solution.
#[derive(Clone, Debug, PartialEq)]
pub enum Solution {
    /// The equation of this index contradicts those before it.
    None {
        equation: usize,
    },
    Unique(Vec<Rational64>),
    /// One of many: `free` unknowns may have any value, and have zero here.
    Many {
        particular: Vec<Rational64>,
        free: Vec<usize>,
    },
}

impl Solution {
    pub fn unique(self) -> Option<Vec<Rational64>> {
        match self {
            Solution::Unique(values) => Some(values),
            _ => None,
        }
    }
}

/// The indices of rows that do not depend on rows before them, taken greedily in the
/// order given. Their number is the rank.
pub fn independent_rows(rows: &[SparseRow]) -> Vec<usize> {
    fn run<E: Exact>(rows: &[SparseRow]) -> Option<Vec<usize>> {
        let mut echelon = Echelon::<E>::default();
        let mut kept = Vec::new();
        for (index, row) in rows.iter().enumerate() {
            if echelon.add(row, index)?.is_none() {
                kept.push(index);
            }
        }
        Some(kept)
    }
    // Indices always fit.
    escalate(|| run::<Rational64>(rows), || run::<BigRational>(rows)).unwrap_or_default()
}

pub fn rank(rows: &[SparseRow]) -> usize {
    independent_rows(rows).len()
}

/// The first row that depends on those before it, with the combination of them that
/// it is; none where all are independent.
pub fn dependence(rows: &[SparseRow]) -> Result<Option<(usize, Combination)>, TooLarge> {
    fn run<E: Exact>(rows: &[SparseRow]) -> Option<Option<(usize, Combination)>> {
        let mut echelon = Echelon::<E>::default();
        for (index, row) in rows.iter().enumerate() {
            if let Some(combination) = echelon.add(row, index)? {
                let exact: Option<Vec<_>> = combination
                    .iter()
                    .filter(|(_, factor)| !factor.is_zero())
                    .map(|(row, factor)| Some((*row, factor.ratio()?)))
                    .collect();
                return Some(Some((index, exact?)));
            }
        }
        Some(None)
    }
    escalate(|| run::<Rational64>(rows), || run::<BigRational>(rows))
}

/// Solves `Σ_u equation_u · x_u = right` for every equation.
pub fn solve(
    equations: &[SparseRow],
    right: &[Rational64],
    unknowns: usize,
) -> Result<Solution, TooLarge> {
    escalate(
        || run_solve::<Rational64>(equations, right, unknowns),
        || run_solve::<BigRational>(equations, right, unknowns),
    )
}

/// The combination of rows that gives the target: `Σ_r x_r row_r = target`.
pub fn express(target: SparseRow, rows: &[SparseRow]) -> Result<Solution, TooLarge> {
    let columns = rows.iter().chain([&target]).flat_map(|row| row.iter().map(|(c, _)| c + 1));
    let columns = columns.max().unwrap_or(0);
    let mut equations = vec![Vec::new(); columns];
    for (index, row) in rows.iter().enumerate() {
        for (column, coefficient) in *row {
            equations[*column].push((index, *coefficient));
        }
    }
    let mut right = vec![Rational64::default(); columns];
    for (column, coefficient) in target {
        right[*column] = *coefficient;
    }
    let equations: Vec<SparseRow> = equations.iter().map(Vec::as_slice).collect();
    solve(&equations, &right, rows.len())
}

/// A basis of the vectors that every row annuls.
pub fn null_space(rows: &[SparseRow], columns: usize) -> Result<Vec<Vec<Rational64>>, TooLarge> {
    fn run<E: Exact>(rows: &[SparseRow], columns: usize) -> Option<Vec<Vec<Rational64>>> {
        let one = Rational64::from(1);
        let mut table = Table::<E>::new(rows, &vec![Rational64::default(); rows.len()], columns)?;
        let pivots = table.reduce()?;
        let mut basis = Vec::new();
        for free in (0..columns).filter(|column| !pivots.contains(column)) {
            let mut vector = vec![Rational64::default(); columns];
            vector[free] = one;
            for (row, pivot) in pivots.iter().enumerate() {
                let entry = E::zero().minus(&table.rows[row].0[free])?;
                vector[*pivot] = entry.ratio()?;
            }
            basis.push(vector);
        }
        Some(basis)
    }
    escalate(|| run::<Rational64>(rows, columns), || run::<BigRational>(rows, columns))
}

fn run_solve<E: Exact>(
    equations: &[SparseRow],
    right: &[Rational64],
    unknowns: usize,
) -> Option<Solution> {
    let mut table = Table::<E>::new(equations, right, unknowns)?;
    let pivots = table.reduce()?;
    let contradiction = table.rows[pivots.len()..].iter().filter(|(_, right, _)| !right.is_zero());
    if let Some(equation) = contradiction.map(|(_, _, index)| *index).min() {
        return Some(Solution::None { equation });
    }
    let mut values = vec![Rational64::default(); unknowns];
    for (row, pivot) in pivots.iter().enumerate() {
        values[*pivot] = table.rows[row].1.ratio()?;
    }
    if pivots.len() == unknowns {
        return Some(Solution::Unique(values));
    }
    let free = (0..unknowns).filter(|column| !pivots.contains(column)).collect();
    Some(Solution::Many { particular: values, free })
}

/// Equations with their right sides and first indices, dense.
struct Table<E> {
    rows: Vec<(Vec<E>, E, usize)>,
    columns: usize,
}

impl<E: Exact> Table<E> {
    fn new(rows: &[SparseRow], right: &[Rational64], columns: usize) -> Option<Self> {
        let mut dense = Vec::with_capacity(rows.len());
        for (index, row) in rows.iter().enumerate() {
            let right = right.get(index).copied().unwrap_or_default();
            dense.push((to_dense(row, columns)?, E::of(right)?, index));
        }
        Some(Table { rows: dense, columns })
    }

    /// To reduced row echelon form; gives the pivot column of each leading row.
    fn reduce(&mut self) -> Option<Vec<usize>> {
        let mut pivots = Vec::new();
        for column in 0..self.columns {
            let top = pivots.len();
            // The equation written first leads, so that contradictions name later ones.
            let Some(found) = (top..self.rows.len())
                .filter(|row| !self.rows[*row].0[column].is_zero())
                .min_by_key(|row| self.rows[*row].2)
            else {
                continue;
            };
            self.rows.swap(top, found);
            let lead = self.rows[top].0[column].clone();
            for entry in &mut self.rows[top].0[column..] {
                if !entry.is_zero() {
                    *entry = entry.over(&lead)?;
                }
            }
            self.rows[top].1 = self.rows[top].1.over(&lead)?;
            let (leading, leading_right, _) = self.rows[top].clone();
            for (index, (row, right, _)) in self.rows.iter_mut().enumerate() {
                if index == top || row[column].is_zero() {
                    continue;
                }
                let factor = row[column].clone();
                for (entry, above) in row[column..].iter_mut().zip(&leading[column..]) {
                    if !above.is_zero() {
                        *entry = entry.minus(&factor.times(above)?)?;
                    }
                }
                *right = right.minus(&factor.times(&leading_right)?)?;
            }
            pivots.push(column);
        }
        Some(pivots)
    }
}

fn to_dense<E: Exact>(row: SparseRow, columns: usize) -> Option<Vec<E>> {
    let mut dense = vec![E::zero(); columns];
    for (column, coefficient) in row {
        if let Some(entry) = dense.get_mut(*column) {
            *entry = entry.plus(&E::of(*coefficient)?)?;
        }
    }
    Some(dense)
}

/// Independent rows so far, each with the combination of given rows that it is.
struct Echelon<E> {
    rows: Vec<Reduced<E>>,
}

struct Reduced<E> {
    pivot: usize,
    entries: Vec<(usize, E)>,
    made_of: Vec<(usize, E)>,
}

impl<E> Default for Echelon<E> {
    fn default() -> Self {
        Echelon { rows: Vec::new() }
    }
}

impl<E: Exact> Echelon<E> {
    /// Takes a row in where it is independent. Where it is not, gives the combination
    /// of rows taken before that it is. The outer none: a number did not fit.
    fn add(&mut self, row: SparseRow, index: usize) -> Option<Option<Vec<(usize, E)>>> {
        let mut entries: Vec<(usize, E)> = Vec::with_capacity(row.len());
        for (column, coefficient) in row {
            add_multiple(&mut entries, &[(*column, E::of(*coefficient)?)], &E::of(1.into())?)?;
        }
        let mut combination: Vec<(usize, E)> = Vec::new();
        for reduced in &self.rows {
            let Ok(at) = entries.binary_search_by_key(&reduced.pivot, |(column, _)| *column) else {
                continue;
            };
            let factor = E::zero().minus(&entries[at].1)?;
            add_multiple(&mut entries, &reduced.entries, &factor)?;
            add_multiple(&mut combination, &reduced.made_of, &E::zero().minus(&factor)?)?;
        }
        let Some((pivot, lead)) = entries.first().cloned() else {
            return Some(Some(combination));
        };
        // What is left is the row less the combination; scaled to lead with one.
        let scale = E::of(1.into())?.over(&lead)?;
        let mut made_of = Vec::new();
        add_multiple(&mut made_of, &[(index, scale.clone())], &E::of(1.into())?)?;
        add_multiple(&mut made_of, &combination, &E::zero().minus(&scale)?)?;
        for (_, entry) in &mut entries {
            *entry = entry.times(&scale)?;
        }
        self.rows.push(Reduced { pivot, entries, made_of });
        Some(None)
    }
}

/// `sum += factor · row`, both sorted by column and without zeros.
fn add_multiple<E: Exact>(sum: &mut Vec<(usize, E)>, row: &[(usize, E)], factor: &E) -> Option<()> {
    for (column, entry) in row {
        let more = entry.times(factor)?;
        match sum.binary_search_by_key(column, |(c, _)| *c) {
            Ok(at) => {
                let total = sum[at].1.plus(&more)?;
                if total.is_zero() {
                    sum.remove(at);
                } else {
                    sum[at].1 = total;
                }
            }
            Err(at) if !more.is_zero() => sum.insert(at, (*column, more)),
            Err(_) => {}
        }
    }
    Some(())
}
