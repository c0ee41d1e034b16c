//! Numbers as they are written: `0.01`, `1e-2`, `10^-2`, `3×10^-4`, `3×10⁻⁴`.

/// The value of a written number without sign, and half a unit of its last written
/// digit. `None` where it is no number, is not finite, or is too small to be told
/// from zero although it is not zero.
pub fn read(text: &str) -> Option<(f64, f64)> {
    let (mantissa, exponent) = parts(text)?;
    let decimals = mantissa.split_once('.').map_or(0, |(_, decimals)| decimals.len());
    let (value, half_digit) = match &exponent {
        None => (mantissa.parse().ok()?, half_digit(decimals, 0)),
        Some(exponent) => (
            format!("{mantissa}e{exponent}").parse::<f64>().ok()?,
            half_digit(decimals, exponent.parse().ok()?),
        ),
    };
    let lost = value == 0.0 && mantissa.bytes().any(|b| matches!(b, b'1'..=b'9'));
    (value.is_finite() && !lost).then_some((value, half_digit))
}

fn half_digit(decimals: usize, exponent: i64) -> f64 {
    const HALVES: [f64; 9] = [0.5, 0.05, 5e-3, 5e-4, 5e-5, 5e-6, 5e-7, 5e-8, 5e-9];
    match (HALVES.get(decimals), exponent) {
        (Some(half), 0) => *half,
        _ => {
            let power = exponent.saturating_sub(decimals as i64).saturating_sub(1);
            format!("5e{power}").parse().unwrap_or(0.0)
        }
    }
}

/// Mantissa, and the exponent in plain digits.
fn parts(text: &str) -> Option<(&str, Option<String>)> {
    let end = text.find(|c: char| !c.is_ascii_digit() && c != '.').unwrap_or(text.len());
    let (mantissa, rest) = text.split_at(end);
    if rest.is_empty() {
        return Some((mantissa, None));
    }
    if let Some(exponent) = rest.strip_prefix(['e', 'E']) {
        return Some((mantissa, Some(plain(exponent))));
    }
    if mantissa == "10" && rest.starts_with(|c| c == '^' || is_superscript(c)) {
        return Some(("1", Some(plain(rest.trim_start_matches('^')))));
    }
    let blank = [' ', '\t'];
    let power = rest.trim_start_matches(blank).strip_prefix(['×', 'x', 'X', '·', '⋅', '*'])?;
    let power = power.trim_start_matches(blank).strip_prefix("10")?;
    Some((mantissa, Some(plain(power.trim_start_matches('^')))))
}

fn is_superscript(c: char) -> bool {
    "⁺⁻⁰¹²³⁴⁵⁶⁷⁸⁹".contains(c)
}

fn plain(exponent: &str) -> String {
    exponent
        .chars()
        .map(|c| match c {
            '−' | '⁻' => '-',
            '⁺' => '+',
            '⁰' => '0',
            '¹' => '1',
            '²' => '2',
            '³' => '3',
            '⁴'..='⁹' => char::from(b'4' + (c as u32 - '⁴' as u32) as u8),
            c => c,
        })
        .collect()
}

/// A long text cut for a message.
pub(super) fn shortened(text: &str) -> String {
    const LONGEST: usize = 40;
    match text.char_indices().nth(LONGEST) {
        None => text.to_owned(),
        Some((end, _)) => format!("{}…", &text[..end]),
    }
}

#[cfg(test)]
mod tests {
    use super::read;

    #[test]
    fn every_form_of_a_number_is_read() {
        assert_eq!(read("0.01"), Some((0.01, 0.005)));
        assert_eq!(read("12"), Some((12.0, 0.5)));
        assert_eq!(read("1e-2"), Some((0.01, 0.005)));
        assert_eq!(read("10^-2"), Some((0.01, 0.005)));
        assert_eq!(read("10⁻²"), Some((0.01, 0.005)));
        assert_eq!(read("3×10^-4"), Some((3e-4, 5e-5)));
        assert_eq!(read("3.5 x 10^4"), Some((3.5e4, 500.0)));
        assert_eq!(read("3×10⁻¹⁴"), Some((3e-14, 5e-15)));
        assert_eq!(read("1.80e−5"), Some((1.80e-5, 5e-8)));
        assert_eq!(read("0e-999"), Some((0.0, 0.0)));
    }

    #[test]
    fn what_is_not_finite_or_vanishes_is_no_number() {
        for text in ["1e999", "1e-999", "10^99999999999999999999", "x", "", "1e"] {
            assert_eq!(read(text), None, "{text}");
        }
    }
}
