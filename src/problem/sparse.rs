//! Sparse exact rows and the two things done with them.

use num_rational::Rational64;
use num_traits::{CheckedAdd, CheckedMul, Zero};

/// (index, coefficient) by rising index, no zeros.
pub type Row = Vec<(usize, Rational64)>;

/// `row + factor · other`; none where the numbers grow past 64 bits.
pub fn add_scaled(row: &Row, factor: Rational64, other: &Row) -> Option<Row> {
    let mut sum = Row::with_capacity(row.len() + other.len());
    let (mut a, mut b) = (row.iter().peekable(), other.iter().peekable());
    loop {
        let (index, value) = match (a.peek(), b.peek()) {
            (Some(&&(i, x)), Some(&&(j, y))) if i == j => {
                a.next();
                b.next();
                (i, x.checked_add(&factor.checked_mul(&y)?)?)
            }
            (Some(&&(i, x)), other) if other.is_none_or(|&&(j, _)| i < j) => {
                a.next();
                (i, x)
            }
            (_, Some(&&(j, y))) => {
                b.next();
                (j, factor.checked_mul(&y)?)
            }
            (_, None) => return Some(sum),
        };
        if !value.is_zero() {
            sum.push((index, value));
        }
    }
}

pub fn scale(row: &Row, factor: Rational64) -> Option<Row> {
    add_scaled(&Row::new(), factor, row)
}

pub fn coefficient(row: &Row, index: usize) -> Rational64 {
    row.binary_search_by_key(&index, |&(i, _)| i).map_or(Rational64::zero(), |at| row[at].1)
}
