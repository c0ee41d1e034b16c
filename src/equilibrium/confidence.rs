//! How surely a limit holds: the probability that the true value meets it, taken as normal
//! about the computed one with its standard uncertainty (JCGM 106:2012, clause 7).

use crate::problem::model::Limit;

/// The probability that a normal variable lies below `z` standard deviations.
fn below(z: f64) -> f64 {
    0.5 * libm::erfc(-z / std::f64::consts::SQRT_2)
}

/// The probability that a limit is met. Without any uncertainty it is met or it is not.
pub fn probability(limit: Limit, value: f64, standard_uncertainty: f64) -> f64 {
    if standard_uncertainty <= 0.0 {
        return f64::from(limit.is_met_by(value));
    }
    let to = |limit: f64| (limit - value) / standard_uncertainty;
    let between = |low: f64, high: f64| {
        // From the side where the numbers are small, so that neither is rounded away.
        let (low, high) = if low > 0.0 { (-high, -low) } else { (low, high) };
        below(high) - below(low)
    };
    match limit {
        Limit::Below { value: limit, .. } => below(to(limit)),
        Limit::Above { value: limit, .. } => below(-to(limit)),
        Limit::Between { low, high } => between(to(low), to(high)),
        Limit::Within { value: wanted, tolerance } => {
            between(to(wanted - tolerance), to(wanted + tolerance))
        }
    }
}

/// What would make a limit hold with a stated confidence, for a value that meets it.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Needed {
    /// The value nearest to the present one that would do at the present uncertainty; none
    /// where the range is too narrow for that.
    pub value: Option<f64>,
    /// The standard uncertainty that would do at the present value; none where it would have
    /// to be zero.
    pub standard_uncertainty: Option<f64>,
}

/// `value` meets the limit with less than the confidence, a probability above a half.
pub fn needed(limit: Limit, value: f64, standard_uncertainty: f64, confidence: f64) -> Needed {
    let enough = |value: f64, u: f64| probability(limit, value, u) >= confidence;
    // Where the probability is largest: the middle of a range, or far from a one-sided limit.
    let best = match limit {
        Limit::Below { value: limit, .. } => limit - 40.0 * standard_uncertainty,
        Limit::Above { value: limit, .. } => limit + 40.0 * standard_uncertainty,
        Limit::Between { low, high } => 0.5 * (low + high),
        Limit::Within { value: wanted, .. } => wanted,
    };
    let towards = |t: f64| value + t * (best - value);
    Needed {
        value: enough(best, standard_uncertainty)
            .then(|| towards(least(|t| enough(towards(t), standard_uncertainty)))),
        standard_uncertainty: Some(least(|t| enough(value, (1.0 - t) * standard_uncertainty)))
            .map(|t| (1.0 - t) * standard_uncertainty)
            .filter(|&u| u > 1e-12 * standard_uncertainty),
    }
}

/// The least number from zero to one that fits, where all above it fit too.
fn least(fits: impl Fn(f64) -> bool) -> f64 {
    let (mut low, mut high) = (0.0, 1.0);
    for _ in 0..60 {
        let middle = 0.5 * (low + high);
        if fits(middle) { high = middle } else { low = middle }
    }
    high
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Quantiles of the normal distribution, as every table has them (recalled).
    #[test]
    fn probabilities_are_those_of_the_tables() {
        let below = |limit| Limit::Below { value: limit, or_equal: false };
        let above = |limit| Limit::Above { value: limit, or_equal: false };
        let within = |tolerance| Limit::Within { value: 0.0, tolerance };
        for (limit, wanted) in [
            (below(1.644_853_627), 0.95),
            (above(-2.326_347_874), 0.99),
            (below(0.0), 0.5),
            (within(1.0), 0.682_689_492),
            (within(1.959_963_985), 0.95),
            (Limit::Between { low: -1.959_963_985, high: 50.0 }, 0.975),
            (Limit::Between { low: 1.0, high: 2.0 }, 0.135_905_122),
            (below(-6.0), 9.865_876_5e-10),
        ] {
            let found = probability(limit, 0.0, 1.0);
            assert!((found / wanted - 1.0).abs() < 1e-8, "{limit:?}: {found}");
        }
        assert_eq!(probability(below(1.0), 0.5, 0.0), 1.0);
        assert_eq!(probability(below(1.0), 1.5, 0.0), 0.0);
    }

    #[test]
    fn what_is_needed_is_just_enough() {
        let limit = Limit::Below { value: 9.0, or_equal: false };
        let needed_now = needed(limit, 8.9, 0.1, 0.95);
        assert!((needed_now.value.unwrap() - (9.0 - 0.1 * 1.644_853_627)).abs() < 1e-9);
        assert!((needed_now.standard_uncertainty.unwrap() - 0.1 / 1.644_853_627).abs() < 1e-9);
        // A range of one standard uncertainty to each side holds 68 % at the very best.
        let narrow = Limit::Between { low: 8.0, high: 10.0 };
        let needed_now = needed(narrow, 9.5, 1.0, 0.95);
        assert_eq!(needed_now.value, None);
        let u = needed_now.standard_uncertainty.unwrap();
        assert!((probability(narrow, 9.5, u) - 0.95).abs() < 1e-9);
        // A value on its limit is met with one half, however small the uncertainty is.
        let on_it = Limit::Above { value: 7.0, or_equal: true };
        assert_eq!(needed(on_it, 7.0, 0.2, 0.9).standard_uncertainty, None);
        assert!((needed(on_it, 7.0, 0.2, 0.9).value.unwrap() - 7.256_310_313).abs() < 1e-8);
    }
}
