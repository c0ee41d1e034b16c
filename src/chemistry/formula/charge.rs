//! The charge at the end of a formula, and the writings of it that are not clear.
//!
//! Told apart here: `NH4+` is an ion of charge one, and so is `I3-`; `SO4--`, `SO4-2`,
//! `Ca+2` and `SO42-` are refused, with the caret form offered. Two or more digits
//! before the last sign (`SO42-`) count as unclear where the last digit may be a
//! charge (2 to 8) and what is left is a count that one would write (2 or more: no one
//! writes `O1`). So `B10H13-` and `B11H14-` are read as they stand. Hydrogen of an
//! organic ion (`C16H33+`) is left alone too: its counts run high, and no such ion is
//! taken for one of charge three.

/// A charge sign, in the shapes that are read.
pub(super) fn sign(c: char) -> Option<i32> {
    match c {
        '+' => Some(1),
        // Hyphen-minus, and the minus sign of typography.
        '-' | '\u{2212}' => Some(-1),
        _ => None,
    }
}

/// The caret form of a charge: nothing, `+`, `^2-`.
pub(super) fn written(charge: i64) -> String {
    let sign = if charge < 0 { '-' } else { '+' };
    match charge.unsigned_abs() {
        0 => String::new(),
        1 => sign.to_string(),
        amount => format!("^{amount}{sign}"),
    }
}

/// What the formula says of the digits before its sign: see the head of this file.
/// `digits` stand just before the sign, and `hydrogen_of_carbon` says that they count
/// hydrogen in a formula with carbon. Gives how many of the digits are the count.
pub(super) fn unclear_digits(digits: &str, hydrogen_of_carbon: bool) -> Option<usize> {
    if digits.len() < 2 || hydrogen_of_carbon {
        return None;
    }
    let (count, charge) = digits.split_at(digits.len() - 1);
    let plausible_charge = matches!(charge.as_bytes(), [b'2'..=b'8']);
    let plausible_count =
        !count.starts_with('0') && count.parse::<u32>().is_ok_and(|n| (2..=60).contains(&n));
    (plausible_charge && plausible_count).then_some(count.len())
}

/// `Ca2+` rewritten as `Ca^2+`; none where there is no such rewriting.
pub(super) fn with_caret(text: &str) -> Option<String> {
    let trimmed = text.trim();
    // The phase and the composite mark stay behind the charge.
    let end = trimmed.find(|c: char| sign(c).is_some())?;
    let (body, rest) = trimmed.split_at(end);
    let digit = body.chars().next_back()?;
    if !('2'..='8').contains(&digit) {
        return None;
    }
    let body = &body[..body.len() - 1];
    let last = body.chars().next_back()?;
    // Nobody writes a parenthesis for one of its content: the digit is its count.
    if last.is_ascii_digit() || matches!(last, '^' | ')') {
        return None;
    }
    Some(format!("{body}^{digit}{rest}"))
}
