//! Where a continuous function of one number changes sign.

/// A place and the value there.
pub(super) type Mark = (f64, f64);

/// Closes in on a change of sign between two marks, by secants in which an end that
/// stays put loses weight, so that both ends move. Stops when the marks are `width`
/// apart, the value is zero, or after 200 looks. The last place looked at is the answer.
///
/// # Errors
/// Those of the function.
pub(super) fn narrow<E>(
    mut function: impl FnMut(f64) -> Result<f64, E>,
    from: Mark,
    to: Mark,
    width: f64,
) -> Result<f64, E> {
    let (mut a, mut b) = (from, to);
    // The distance of the marks two looks ago.
    let mut before = [f64::INFINITY; 2];
    for look in 0..200 {
        let apart = (b.0 - a.0).abs();
        let slow = apart > 0.5 * before[look % 2];
        before[look % 2] = apart;
        let middle = 0.5 * (a.0 + b.0);
        // A secant that lands on an end goes a little beyond it, so that the ends meet.
        let secant = (a.0 * b.1 - b.0 * a.1) / (b.1 - a.1);
        let (low, high) = (a.0.min(b.0) + 0.25 * width, a.0.max(b.0) - 0.25 * width);
        let at =
            if slow || low > high || secant.is_nan() { middle } else { secant.clamp(low, high) };
        let value = function(at)?;
        if value == 0.0 {
            return Ok(at);
        }
        if value.signum() == b.1.signum() {
            let keep = 1.0 - value / b.1;
            a.1 *= if keep > 0.0 { keep } else { 0.5 };
        } else {
            a = b;
        }
        b = (at, value);
        if (b.0 - a.0).abs() <= width {
            return Ok(at);
        }
    }
    Ok(b.0)
}

#[cfg(test)]
mod tests {
    use super::narrow;

    #[test]
    fn finds_the_change_of_sign_of_steep_and_flat_functions() {
        for (function, root) in [
            ((|x| x * x - 2.0) as fn(f64) -> f64, 2f64.sqrt()),
            (|x| (x - 1.0).powi(3), 1.0),
            (|x| (50.0 * (x - 1.3)).exp() - 1.0, 1.3),
            (|x| if x < 0.7 { -1.0 } else { 1e9 }, 0.7),
        ] {
            let mut looks = 0;
            let found: Result<f64, ()> = narrow(
                |x| {
                    looks += 1;
                    Ok(function(x))
                },
                (0.0, function(0.0)),
                (3.0, function(3.0)),
                1e-12,
            );
            let found = found.unwrap_or(f64::NAN);
            assert!((found - root).abs() < 1e-11, "{found} {root}");
            assert!(looks < 130, "{looks}");
        }
    }
}
