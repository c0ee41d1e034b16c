//! Numbers and lists as words in a message.

use num_rational::Rational64;
use num_traits::Signed;

/// A count with its sign, `+2`, `−1`, `0`.
pub fn signed(value: Rational64) -> String {
    match (value.is_positive(), value.is_negative()) {
        (true, _) => format!("+{value}"),
        (_, true) => format!("−{}", -value),
        _ => "0".into(),
    }
}

/// `a`, `a and b`, `a, b and c`.
pub fn list(items: &[String], last: &str) -> String {
    match items {
        [] => String::new(),
        [one] => one.clone(),
        [most @ .., end] => format!("{} {last} {end}", most.join(", ")),
    }
}

/// `a`, `b` or `c` from names, each in backquotes.
pub fn names<S: AsRef<str>>(names: &[S], last: &str) -> String {
    let quoted: Vec<String> = names.iter().map(|name| format!("`{}`", name.as_ref())).collect();
    list(&quoted, last)
}
