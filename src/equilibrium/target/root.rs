//! A change of sign along an amount, closed in on to the last digits.

use crate::equilibrium::system::Failure;

/// An amount and the value there.
pub(super) type Mark = (f64, f64);

/// Steps shorter than this share of the amount end the search.
const SHORT: f64 = 1e-14;

/// Where between two marks of unlike sign a function changes it: secants, the end that stays
/// put losing weight, and halves where they are slow. None where the function has no value on
/// the way.
pub(super) fn close_in(
    mut function: impl FnMut(f64) -> Result<Option<f64>, Failure>,
    from: Mark,
    to: Mark,
) -> Result<Option<f64>, Failure> {
    let (mut a, mut b) = if from.1.abs() < to.1.abs() { (to, from) } else { (from, to) };
    if b.1 == 0.0 {
        return Ok(Some(b.0));
    }
    let mut weight = a.1;
    let mut before = [f64::INFINITY; 2];
    for look in 0..120 {
        let apart = (a.0 - b.0).abs();
        if apart <= SHORT * a.0.abs().max(b.0.abs()) {
            break;
        }
        let slow = apart > 0.5 * before[look % 2];
        before[look % 2] = apart;
        let secant = b.0 - b.1 * (b.0 - a.0) / (b.1 - weight);
        let (low, high) = (a.0.min(b.0), a.0.max(b.0));
        let at = if secant > low && secant < high && !(slow && look > 3) {
            secant
        } else if low > 0.0 {
            (low * high).sqrt()
        } else {
            0.5 * (low + high)
        };
        let Some(value) = function(at)? else { return Ok(None) };
        let step = (at - b.0).abs();
        if value == 0.0 {
            return Ok(Some(at));
        }
        if value.signum() == b.1.signum() {
            let keep = 1.0 - value / b.1;
            weight *= if keep > 0.0 { keep } else { 0.5 };
        } else {
            a = b;
            weight = a.1;
        }
        b = (at, value);
        if step <= SHORT * at.abs() {
            break;
        }
    }
    Ok(Some(b.0))
}

#[cfg(test)]
mod tests {
    use super::close_in;

    #[test]
    fn closes_in_on_straight_bent_and_steep_functions() {
        for (function, root, most) in [
            ((|x| 3.0 - 7.0 * x) as fn(f64) -> f64, 3.0 / 7.0, 4),
            (|x| x * x - 1e-8, 1e-4, 30),
            (|x| (x / 1.3).ln(), 1.3, 30),
            (|x| (40.0 * (x - 0.7)).exp() - 1.0, 0.7, 40),
        ] {
            let mut looks = 0;
            let (low, high) = (1e-9, 3.0);
            let found = close_in(
                |x| {
                    looks += 1;
                    Ok(Some(function(x)))
                },
                (low, function(low)),
                (high, function(high)),
            );
            let found = found.ok().flatten().unwrap_or(f64::NAN);
            assert!((found / root - 1.0).abs() < 1e-12, "{found} {root}");
            assert!(looks <= most, "{looks}");
        }
    }
}
