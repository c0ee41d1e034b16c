//! A reaction in scope: its species and exact coefficients, its constant and how that
//! moves with temperature, and where it comes from.

use std::path::PathBuf;
use std::sync::Arc;

use num_rational::Rational64;

use crate::chemistry::constant::{ReactionHeat, log_k_at};
use crate::chemistry::formula::Formula;
use crate::text::span::{Place, Span};
use crate::text::tree::{ConstantKind, Expression, Operator};

/// 25 °C in kelvin, the temperature of a constant that names none.
pub const STANDARD: f64 = 298.15;

#[derive(Clone, Debug)]
pub struct Reaction {
    /// Left side first, with negative coefficients; in the order written.
    pub participants: Vec<Participant>,
    /// The equation in canonical form, `NH4+ <=> NH3 + H+`.
    pub equation: String,
    pub constant: Option<Constant>,
    /// J/mol, for the reaction as written.
    pub enthalpy: Option<f64>,
    /// J/(mol·K).
    pub heat_capacity: Option<f64>,
    /// Kelvin.
    pub valid: Option<(f64, f64)>,
    pub source: Option<String>,
    pub origin: Origin,
    /// Whether elements, groups and charge are conserved; only then is it used.
    pub conserved: bool,
}

#[derive(Clone, Debug)]
pub struct Participant {
    pub formula: Arc<Formula>,
    pub coefficient: Rational64,
    /// Where its name stands in the statement.
    pub span: Span,
}

#[derive(Clone, Debug)]
pub struct Constant {
    pub kind: ConstantKind,
    pub value: LogK,
    /// One standard uncertainty in log10 K.
    pub uncertainty: Option<f64>,
    pub span: Span,
}

/// log10 K of the reaction as written, left to right.
#[derive(Clone, Debug)]
pub enum LogK {
    /// At one temperature, in kelvin.
    At {
        log_k: f64,
        kelvin: f64,
    },
    OfT(Expression),
    /// The ion product of water, IAPWS R11-07(2019).
    Water,
}

/// Where a reaction was written.
#[derive(Clone, Debug, PartialEq)]
pub enum Origin {
    /// In the file itself; the whole statement.
    Own(Place),
    Set {
        name: &'static str,
        edition: u32,
    },
    File(PathBuf),
}

impl Origin {
    /// In a few words, such as `aqueous 1`.
    pub fn words(&self) -> String {
        match self {
            Origin::Own(_) => "this file".into(),
            Origin::Set { name, edition } => format!("{name} {edition}"),
            Origin::File(path) => path.file_name().map_or_else(
                || path.display().to_string(),
                |name| name.to_string_lossy().into_owned(),
            ),
        }
    }

    pub fn own(&self) -> Option<Place> {
        match self {
            Origin::Own(place) => Some(*place),
            _ => None,
        }
    }
}

/// What keeps a constant from being trusted at a temperature.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum TemperatureIssue {
    /// It is for this temperature, and no enthalpy leads from there.
    NoEnthalpy {
        given: f64,
    },
    OutsideValid {
        low: f64,
        high: f64,
    },
    /// The expression has no finite value there.
    NoValue,
}

/// Half a kelvin: closer than this, a constant counts as being for the temperature.
const SAME_TEMPERATURE: f64 = 0.5;

impl Reaction {
    /// log10 K at a temperature in kelvin, and what is doubtful about it. None without a
    /// constant.
    pub fn log_k(&self, kelvin: f64) -> Option<(f64, Option<TemperatureIssue>)> {
        let constant = self.constant.as_ref()?;
        let mut issue = match self.valid {
            Some((low, high)) if kelvin < low - 0.01 || kelvin > high + 0.01 => {
                Some(TemperatureIssue::OutsideValid { low, high })
            }
            _ => None,
        };
        let value = match &constant.value {
            LogK::OfT(expression) => evaluate(expression, kelvin),
            LogK::Water => -crate::chemistry::water::pkw(kelvin),
            LogK::At { log_k, kelvin: given } => match self.enthalpy {
                Some(enthalpy) => {
                    let heat_capacity = self.heat_capacity.unwrap_or(0.0);
                    log_k_at(*log_k, *given, ReactionHeat { enthalpy, heat_capacity }, kelvin)
                }
                None => {
                    if (kelvin - given).abs() > SAME_TEMPERATURE {
                        issue = Some(TemperatureIssue::NoEnthalpy { given: *given });
                    }
                    *log_k
                }
            },
        };
        if value.is_finite() {
            Some((value, issue))
        } else {
            Some((0.0, Some(TemperatureIssue::NoValue)))
        }
    }

    /// Whether its constant is the ion product of water.
    pub fn is_ion_product(&self) -> bool {
        matches!(self.constant.as_ref().map(|constant| &constant.value), Some(LogK::Water))
    }

    /// Species of the reaction, water left out, sorted: the same for the same equilibrium.
    pub fn key(&self) -> Vec<&str> {
        let mut key: Vec<_> = self
            .participants
            .iter()
            .map(|p| p.formula.name.as_str())
            .filter(|&name| name != "H2O")
            .collect();
        key.sort_unstable();
        key
    }
}

/// The value of an expression in T, in kelvin. The parser limits how deep it nests.
pub fn evaluate(expression: &Expression, kelvin: f64) -> f64 {
    match expression {
        Expression::Number(value) => *value,
        Expression::T => kelvin,
        Expression::Negative(inner) => -evaluate(inner, kelvin),
        Expression::Log(inner) => evaluate(inner, kelvin).log10(),
        Expression::Ln(inner) => evaluate(inner, kelvin).ln(),
        Expression::Binary(left, operator, right) => {
            let (left, right) = (evaluate(left, kelvin), evaluate(right, kelvin));
            match operator {
                Operator::Add => left + right,
                Operator::Subtract => left - right,
                Operator::Multiply => left * right,
                Operator::Divide => left / right,
                Operator::Power => left.powf(right),
            }
        }
    }
}
