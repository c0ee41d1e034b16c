//! A reaction's constant in the word of its trade, at a temperature, with what keeps it
//! from being trusted there.

use num_traits::Zero;

use crate::chemistry::formula::Phase;
use crate::problem::reaction::{LogK, Reaction, TemperatureIssue};
use crate::problem::sort::Sort;
use crate::rules::figures::{celsius, decimals, significant};
use crate::text::tree::ConstantKind;

/// A constant as it is told.
pub struct Told {
    /// `pKa`, `pKsp`, `log β`, …
    pub word: &'static str,
    pub figure: String,
    pub moved: Moved,
}

/// Whether a constant reaches a temperature.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Moved {
    Fine,
    /// Kelvin.
    Outside {
        low: f64,
        high: f64,
    },
    /// It is for this temperature, in kelvin, and nothing says how it moves.
    Fixed {
        given: f64,
    },
    /// Its expression has no finite value there.
    NoValue,
}

impl Told {
    /// At a temperature in kelvin; none for a reaction without a constant.
    pub fn new(reaction: &Reaction, kelvin: f64) -> Option<Told> {
        let (log_k, issue) = reaction.log_k(kelvin)?;
        let moved = match issue {
            None => Moved::Fine,
            Some(TemperatureIssue::OutsideValid { low, high }) => Moved::Outside { low, high },
            Some(TemperatureIssue::NoEnthalpy { given }) => Moved::Fixed { given },
            Some(TemperatureIssue::NoValue) => Moved::NoValue,
        };
        let (word, negative) = word(reaction);
        let figure = match moved {
            Moved::NoValue => "none".into(),
            _ => decimals(if negative { -log_k } else { log_k }, 3),
        };
        Some(Told { word, figure, moved })
    }
}

/// The word for a constant, and whether its figure is −log K.
pub fn word(reaction: &Reaction) -> (&'static str, bool) {
    match (reaction.constant.as_ref().map(|constant| constant.kind), reaction.sort()) {
        (Some(ConstantKind::PKa), _) | (Some(ConstantKind::LogKOfT), Sort::Acid) => ("pKa", true),
        (Some(ConstantKind::PKsp), _) => ("pKsp", true),
        (Some(ConstantKind::PK), _) => ("pK", true),
        (Some(ConstantKind::LogBeta), _) => ("log β", false),
        (Some(ConstantKind::LogKOfT), Sort::Complex) => ("log β", false),
        (Some(ConstantKind::LogKOfT), Sort::Solid) if is_product(reaction) => ("pKsp", true),
        _ => ("log K", false),
    }
}

/// Whether the constant is a solubility product: a solid falls apart into ions.
fn is_product(reaction: &Reaction) -> bool {
    let side = |left: bool| {
        let parts = reaction.participants.iter();
        parts.filter(move |p| (p.coefficient < Zero::zero()) == left && !p.formula.is_water())
    };
    let solids = side(true).filter(|p| matches!(p.formula.phase, Phase::Solid(_))).count();
    side(true).count() == 1 && solids == 1 && side(false).count() > 1
}

impl Moved {
    /// What to think of the constant at a temperature in kelvin, as a plain sentence.
    pub fn note(self, kelvin: f64) -> Option<String> {
        let at = celsius(kelvin);
        Some(match self {
            Moved::Fine => return None,
            Moved::Outside { low, high } => format!(
                "{at} lies outside {}, the range that the constant is known for; the figure is \
                 carried on from there",
                between(low, high)
            ),
            Moved::Fixed { given } => format!(
                "the constant is for {} and no enthalpy is known, so the figure is that of {0}",
                celsius(given)
            ),
            Moved::NoValue => format!("the equation has no value at {at}"),
        })
    }
}

fn between(low: f64, high: f64) -> String {
    format!("{} to {}", celsius(low).trim_end_matches(" °C"), celsius(high))
}

/// Where a constant can be used, in a few words for a column.
pub fn range(reaction: &Reaction) -> String {
    match (reaction.valid, given(reaction)) {
        (Some((low, high)), _) => between(low, high),
        (None, Some(given)) if reaction.enthalpy.is_none() => format!("{} only", celsius(given)),
        (None, Some(_)) => "by enthalpy".into(),
        (None, None) => "by equation".into(),
    }
}

/// How a constant moves with temperature, in full.
pub fn words(reaction: &Reaction) -> String {
    let mut words = match (given(reaction), reaction.enthalpy, reaction.heat_capacity) {
        (None, ..) => "an equation in T".into(),
        (Some(given), None, _) => format!("for {} only", celsius(given)),
        (Some(_), Some(enthalpy), heat_capacity) => {
            let mut words = format!("enthalpy {} kJ/mol", significant(enthalpy / 1000.0, 4));
            if let Some(heat_capacity) = heat_capacity {
                words += &format!(", heat capacity {} J/(mol·K)", significant(heat_capacity, 4));
            }
            words
        }
    };
    if let Some((low, high)) = reaction.valid {
        words += &format!(", valid {}", between(low, high));
    }
    words
}

/// The one temperature that a constant was given for, in kelvin; none for an equation.
fn given(reaction: &Reaction) -> Option<f64> {
    match reaction.constant.as_ref()?.value {
        LogK::At { kelvin, .. } => Some(kelvin),
        _ => None,
    }
}
