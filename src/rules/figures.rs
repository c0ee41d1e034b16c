//! Numbers as a chemist reads them.

use std::f64::consts::LN_10;

use crate::chemistry::quantity::Scale;
use crate::chemistry::unit::ZERO_CELSIUS;

/// `mol/L` or `mol/kg`.
pub fn scale_unit(scale: Scale) -> &'static str {
    match scale {
        Scale::PerLitre => "mol/L",
        Scale::PerKilogram => "mol/kg",
    }
}

/// A concentration in the unit that leaves one to three digits before the point.
pub fn concentration(value: f64, scale: Scale) -> String {
    let per = match scale {
        Scale::PerLitre => "L",
        Scale::PerKilogram => "kg",
    };
    let size = value.abs();
    let (factor, unit) = match size {
        0.0 => return format!("0 mol/{per}"),
        s if s >= 0.1 => (1.0, "mol"),
        s if s >= 1e-4 => (1e3, "mmol"),
        s if s >= 1e-7 => (1e6, "µmol"),
        s if s >= 1e-10 => (1e9, "nmol"),
        _ => return format!("{} mol/{per}", significant(value, 3)),
    };
    format!("{} {unit}/{per}", significant(value * factor, 3))
}

/// Charge per litre or kilogram, in meq.
pub fn equivalents(value: f64, scale: Scale) -> String {
    let per = match scale {
        Scale::PerLitre => "L",
        Scale::PerKilogram => "kg",
    };
    format!("{} meq/{per}", significant(value * 1e3, 3))
}

/// A number with so many significant digits; with a power of ten where it is very large or
/// very small. Minus is the true minus sign.
pub fn significant(value: f64, digits: usize) -> String {
    if value == 0.0 || !value.is_finite() {
        return if value == 0.0 { "0".into() } else { minus(&value.to_string()) };
    }
    // Rounded first, so that 9.9996 is 10.00 and not 10.000.
    let rounded = format!("{:.*e}", digits.saturating_sub(1), value.abs());
    let size: i32 = rounded.split_once('e').and_then(|(_, e)| e.parse().ok()).unwrap_or(0);
    if !(-4..6).contains(&size) {
        let text = format!("{value:.*e}", digits.saturating_sub(1));
        return match text.split_once('e') {
            Some((number, power)) => format!("{}e{power}", minus(number)),
            None => text,
        };
    }
    let places = (digits as i32 - 1 - size).max(0) as usize;
    minus(&format!("{value:.places$}"))
}

/// A number with so many significant digits, always with its power of ten, so that a column
/// of them compares.
pub fn scientific(value: f64, digits: usize) -> String {
    if value == 0.0 {
        return "0".into();
    }
    let text = format!("{value:.*e}", digits.saturating_sub(1));
    match text.split_once('e') {
        Some((number, power)) => format!("{}e{power}", minus(number)),
        None => minus(&text),
    }
}

/// With so many decimals.
pub fn decimals(value: f64, places: usize) -> String {
    let text = format!("{value:.places$}");
    // A rounded minus zero is zero.
    if text.trim_start_matches('-').bytes().all(|b| matches!(b, b'0' | b'.')) {
        return text.trim_start_matches('-').to_owned();
    }
    minus(&text)
}

fn minus(text: &str) -> String {
    text.replace('-', "−")
}

/// A share in percent: `62.3 %`, `0.0041 %`, `<0.0001 %`.
pub fn percent(share: f64) -> String {
    let value = 100.0 * share;
    if value > 0.0 && value < 1e-4 {
        return "<0.0001 %".into();
    }
    if (99.95..=100.0).contains(&value) {
        return "100 %".into();
    }
    if value.abs() >= 10.0 {
        format!("{} %", decimals(value, 1))
    } else {
        format!("{} %", significant(value, 2))
    }
}

/// `18 °C`, `4.5 °C`.
pub fn celsius(kelvin: f64) -> String {
    let text = decimals(kelvin - ZERO_CELSIUS, 2);
    let text = text.trim_end_matches('0').trim_end_matches('.');
    format!("{text} °C")
}

/// `+2`, `−1`, `0`.
pub fn charge(charge: i32) -> String {
    match charge {
        0 => "0".into(),
        z if z > 0 => format!("+{z}"),
        z => format!("−{}", z.unsigned_abs()),
    }
}

/// The decadic logarithm of e to this power.
pub fn log10_of_exp(ln: f64) -> f64 {
    ln / LN_10
}
