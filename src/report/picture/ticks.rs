//! Round numbers along an axis.

use super::chart::Axis;
use crate::rules::figures::decimals;

/// Values inside the axis that are whole multiples of 1, 2 or 5 times a power of ten, at most
/// so many, with their words.
pub fn ticks(axis: &Axis, most: usize) -> Vec<(f64, String)> {
    let span = axis.to - axis.from;
    if !span.is_finite() || span <= 0.0 {
        return Vec::new();
    }
    let scale = if axis.percent { 100.0 } else { 1.0 };
    let step = step_between(scale * axis.from, scale * axis.to, most);
    let places = (-(step * 1.0001).log10().floor()).clamp(0.0, 12.0) as usize;
    let (first, last) = (scale * axis.from / step, scale * axis.to / step);
    let (first, last) = ((first - 1e-9).ceil(), (last + 1e-9).floor());
    let count = (last - first) as usize;
    (0..=count)
        .map(|n| (first + n as f64) * step)
        .map(|value| (value / scale, decimals(value, places)))
        .collect()
}

/// The least of 1, 2 and 5 times a power of ten of which so many multiples at most lie between
/// two values.
fn step_between(from: f64, to: f64, most: usize) -> f64 {
    let few = |step: &f64| {
        let (first, last) = ((from / step - 1e-9).ceil(), (to / step + 1e-9).floor());
        last - first + 1.0 <= most.max(2) as f64
    };
    let widest = step(to - from, most);
    let unit = 10f64.powf(widest.log10().floor() - 1.0);
    let steps = [1.0, 2.0, 5.0, 10.0, 20.0, 50.0].map(|digit| digit * unit);
    steps.into_iter().find(few).unwrap_or(widest)
}

/// The least of 1, 2 and 5 times a power of ten that cuts a span into fewer than `most` parts.
fn step(span: f64, most: usize) -> f64 {
    let parts = most.max(2) as f64 - 1.0;
    let unit = 10f64.powf((span / parts).log10().floor());
    let fits = |step: &f64| span / step <= parts + 1e-9;
    [1.0, 2.0, 5.0].map(|digit| digit * unit).into_iter().find(fits).unwrap_or(10.0 * unit)
}

/// Ends of an axis at round numbers that hold all values.
pub fn round_ends(values: impl Iterator<Item = f64>) -> (f64, f64) {
    let finite = values.filter(|value| value.is_finite());
    let (low, high) = finite.fold((f64::INFINITY, f64::NEG_INFINITY), |(low, high), value| {
        (low.min(value), high.max(value))
    });
    if low > high {
        return (0.0, 1.0);
    }
    let wide = if high > low { high - low } else { high.abs().max(1e-3) };
    let step = step(wide, 9);
    let ends = ((low / step + 1e-9).floor() * step, (high / step - 1e-9).ceil() * step);
    if ends.0 < ends.1 { ends } else { (ends.0 - step, ends.1 + step) }
}

#[cfg(test)]
mod tests {
    use super::super::words::Words;
    use super::*;

    #[test]
    fn ticks_are_round_inside_and_few_enough() {
        for (from, to) in [(0.0, 14.0), (-9.0, -1.0), (0.0, 0.013), (2.5, 2.75), (0.0, 1e-9)] {
            for most in 3..15 {
                let axis = Axis::new(Words::default(), from, to);
                let ticks = ticks(&axis, most);
                assert!((2..=most).contains(&ticks.len()) || most < 4, "{from} {to} {most}");
                for (value, words) in &ticks {
                    assert!(*value >= from - 1e-12 && *value <= to + 1e-12);
                    let read: f64 = words.replace('−', "-").parse().unwrap();
                    assert!((read - value).abs() < 1e-9 * (to - from).max(1e-3), "{words}");
                }
            }
        }
        let words: Vec<String> =
            ticks(&Axis::new(Words::default(), -9.0, -1.0), 10).into_iter().map(|t| t.1).collect();
        assert_eq!(words, ["−9", "−8", "−7", "−6", "−5", "−4", "−3", "−2", "−1"]);
    }
}
