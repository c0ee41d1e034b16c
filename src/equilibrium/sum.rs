//! Sums of products without loss to cancellation: the totals of a new basis are
//! differences of given totals, and their small remainders matter.

/// A sum kept as an unevaluated pair of `f64`, about 32 digits.
#[derive(Clone, Copy, Debug, Default)]
pub(super) struct Sum {
    high: f64,
    low: f64,
    /// Sum of the magnitudes of all that was added.
    pub size: f64,
    pub count: u32,
}

impl Sum {
    /// Adds `a · b`, the product taken exactly.
    pub fn add_product(&mut self, a: f64, b: f64) {
        let product = a * b;
        // A factor of ±1 is by far the most common and needs no second half.
        let rest = if a.abs() == 1.0 || b.abs() == 1.0 { 0.0 } else { a.mul_add(b, -product) };
        let sum = self.high + product;
        let shadow = sum - self.high;
        let error = (self.high - (sum - shadow)) + (product - shadow);
        self.high = sum;
        self.low += error + rest;
        self.size += product.abs();
        self.count += 1;
    }

    /// The whole sum over a divisor.
    pub fn over(mut self, divisor: f64) -> Self {
        if divisor != 1.0 {
            let value = self.value();
            self.high = value / divisor;
            self.low = 0.0;
            self.size /= divisor.abs();
        }
        self
    }

    pub fn value(&self) -> f64 {
        self.high + self.low
    }
}

#[cfg(test)]
mod tests {
    use super::Sum;

    #[test]
    fn keeps_what_cancellation_leaves() {
        let mut sum = Sum::default();
        sum.add_product(0.1, 3.0);
        sum.add_product(-0.3, 1.0);
        // 3·fl(0.1) − fl(0.3) in exact binary arithmetic.
        assert_eq!(sum.value(), 2.7755575615628914e-17);
        assert_eq!(sum.count, 2);
    }
}
