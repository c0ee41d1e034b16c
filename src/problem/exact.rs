//! Exact numbers of two sizes: 64-bit fractions, and fractions without limit for what
//! does not fit. Work is tried with the first and done again with the second.

use num_bigint::BigInt;
use num_rational::{BigRational, Rational64};
use num_traits::{CheckedAdd, CheckedDiv, CheckedMul, CheckedSub, ToPrimitive, Zero};

/// An exact result whose coefficients do not fit 64-bit fractions.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct TooLarge;

/// Arithmetic that says so, by none, when a number does not fit.
pub(crate) trait Exact: Clone + PartialEq + Zero {
    fn of(ratio: Rational64) -> Option<Self>;
    fn plus(&self, other: &Self) -> Option<Self>;
    fn minus(&self, other: &Self) -> Option<Self>;
    fn times(&self, other: &Self) -> Option<Self>;
    /// None for a divisor of zero too.
    fn over(&self, other: &Self) -> Option<Self>;
    fn ratio(&self) -> Option<Rational64>;
}

/// Halves the range of 64 bits, so that the library's own steps on numbers that passed
/// cannot overflow where it does not check (the magnitude of the least integer).
fn small(ratio: Rational64) -> Option<Rational64> {
    const LIMIT: u64 = 1 << 62;
    let fits = ratio.numer().unsigned_abs() <= LIMIT && ratio.denom().unsigned_abs() <= LIMIT;
    fits.then_some(ratio)
}

impl Exact for Rational64 {
    fn of(ratio: Rational64) -> Option<Self> {
        small(ratio)
    }

    fn plus(&self, other: &Self) -> Option<Self> {
        small(self.checked_add(other)?)
    }

    fn minus(&self, other: &Self) -> Option<Self> {
        small(self.checked_sub(other)?)
    }

    fn times(&self, other: &Self) -> Option<Self> {
        small(self.checked_mul(other)?)
    }

    fn over(&self, other: &Self) -> Option<Self> {
        small(self.checked_div(other)?)
    }

    fn ratio(&self) -> Option<Rational64> {
        Some(*self)
    }
}

impl Exact for BigRational {
    fn of(ratio: Rational64) -> Option<Self> {
        Some(BigRational::new(BigInt::from(*ratio.numer()), BigInt::from(*ratio.denom())))
    }

    fn plus(&self, other: &Self) -> Option<Self> {
        Some(self + other)
    }

    fn minus(&self, other: &Self) -> Option<Self> {
        Some(self - other)
    }

    fn times(&self, other: &Self) -> Option<Self> {
        Some(self * other)
    }

    fn over(&self, other: &Self) -> Option<Self> {
        (!other.is_zero()).then(|| self / other)
    }

    fn ratio(&self) -> Option<Rational64> {
        small(Rational64::new_raw(self.numer().to_i64()?, self.denom().to_i64()?))
    }
}

/// The result with small numbers, or else with large ones. Both closures do the same.
pub(crate) fn escalate<T>(
    with_small: impl FnOnce() -> Option<T>,
    with_large: impl FnOnce() -> Option<T>,
) -> Result<T, TooLarge> {
    with_small().or_else(with_large).ok_or(TooLarge)
}
