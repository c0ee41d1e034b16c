//! A balance in data: the terms of both sides, and those that it rests on.

use num_rational::Rational64;
use num_traits::ToPrimitive;
use serde::Serialize;

use super::sheet::{Entry, Sheet};

#[derive(Serialize)]
pub struct SheetJson {
    kind: String,
    left: Vec<TermJson>,
    right: Vec<TermJson>,
    #[serde(skip_serializing_if = "Option::is_none")]
    error: Option<f64>,
    dominant: Vec<String>,
}

#[derive(Serialize)]
struct TermJson {
    term: String,
    coefficient: serde_json::Number,
    /// Coefficient included, mol per litre or kilogram.
    #[serde(skip_serializing_if = "Option::is_none")]
    value: Option<f64>,
}

impl Sheet {
    pub fn json(&self) -> SheetJson {
        let terms = |side: &[Entry]| {
            let terms = side.iter().map(|entry| TermJson {
                term: entry.words.clone(),
                coefficient: number(entry.coefficient),
                value: entry.value,
            });
            terms.collect()
        };
        let entries = self.left.iter().chain(&self.right);
        SheetJson {
            kind: self.name.clone(),
            left: terms(&self.left),
            right: terms(&self.right),
            error: self.error(),
            dominant: entries.filter(|e| e.dominant).map(|e| e.words.clone()).collect(),
        }
    }
}

/// A whole number where it is one.
pub fn number(value: Rational64) -> serde_json::Number {
    let whole = value.is_integer().then(|| serde_json::Number::from(value.to_integer()));
    let fraction = || serde_json::Number::from_f64(value.to_f64()?);
    whole.or_else(fraction).unwrap_or_else(|| 0.into())
}
