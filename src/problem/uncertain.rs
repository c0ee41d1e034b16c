//! Inputs that carry a `±`: how large it is in base units, where it was written, and what
//! is wrong with it.

use super::case::CaseResolver;
use super::defect::DefectKind;
use super::effective::Written;
use super::input::Input;
use super::model::Problem;
use super::quantity::Read;
use super::resolve::Resolver;
use crate::text::span::{Place, Span};
use crate::text::tree::Quantity;

/// An input with its standard uncertainty. Each is independent of all others: the language
/// has no correlations. Two `add` lines of one reagent are two of them.
#[derive(Clone, Debug, PartialEq)]
pub struct Uncertain {
    pub input: Input,
    /// One standard uncertainty in the unit of the input, above zero.
    pub standard_uncertainty: f64,
    /// The statement; none where a used set or file states it.
    pub at: Option<Place>,
    /// Such as `add NaOH` or `pKa of NH4+ <=> NH3 + H+`.
    pub words: String,
}

/// What a quantity that may carry a `±` measures.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Carries {
    /// What cannot lie below zero: an amount, a pressure, a constant K.
    Positive,
    /// A logarithm, such as a pH or a pKa: a percentage of it says nothing.
    Logarithm,
    /// A temperature: so it is in °C.
    Temperature,
    /// What may have either sign.
    Signed,
    /// A tolerance of an expectation on a logarithm, or on anything else.
    Tolerance { logarithm: bool },
    /// A quantity whose `±` goes nowhere.
    Nothing,
}

/// Past this share of a positive value the first order does not hold: within two standard
/// uncertainties the value would be nothing.
const LARGEST_SHARE: f64 = 0.5;

impl Resolver {
    /// The standard uncertainty that a quantity carries, in base units, where there is one
    /// and it has a meaning; what is wrong with it becomes a defect.
    pub fn carried(
        &mut self,
        written: &Written,
        quantity: &Quantity,
        carries: Carries,
        read: &Read,
    ) -> Option<f64> {
        let stated = quantity.uncertainty.as_ref()?;
        let size = read.uncertainty?;
        let at = place(written, quantity, stated.number.span);
        let is_tolerance = matches!(carries, Carries::Tolerance { .. });
        let degrees = carries == Carries::Temperature
            && quantity.unit.as_ref().is_some_and(|unit| unit.value != "K");
        let logarithm =
            matches!(carries, Carries::Logarithm | Carries::Tolerance { logarithm: true });
        let kind = if carries == Carries::Nothing {
            Some(DefectKind::UncertaintyNotUsed)
        } else if stated.percent && (logarithm || degrees) {
            let digits = size * if degrees { 1.0 } else { read.per_unit.recip() };
            Some(DefectKind::UncertaintyOfLogarithm { temperature: degrees, size: digits })
        } else if size == 0.0 && !is_tolerance {
            Some(DefectKind::UncertaintyOfZero)
        } else {
            None
        };
        if let Some(kind) = kind {
            self.report(at, kind);
            return None;
        }
        if carries == Carries::Positive && size > LARGEST_SHARE * read.value.abs() {
            let share = (read.value != 0.0).then(|| size / read.value.abs());
            self.report(at, DefectKind::UncertaintyTooLarge { share });
        }
        Some(size)
    }

    /// A quantity whose `±` goes nowhere, where it has one.
    pub fn carries_nothing(&mut self, written: &Written, quantity: &Quantity) {
        if let Some(stated) = &quantity.uncertainty {
            let at = place(written, quantity, stated.number.span);
            self.report(at, DefectKind::UncertaintyNotUsed);
        }
    }
}

impl CaseResolver<'_> {
    /// Keeps what an input carries: its `±`, and how it moves with the density of water
    /// where it was converted by that.
    pub fn keep_uncertainty(
        &mut self,
        problem: &mut Problem,
        (written, quantity): (&Written, &Quantity),
        (input, carries): (Input, Carries),
        read: &Read,
        words: String,
    ) {
        if read.by_ln_density != 0.0 {
            problem.by_ln_density.push((input, read.by_ln_density));
        }
        if let Some(size) = self.resolver.carried(written, quantity, carries, read) {
            let at = Some(written.whole());
            problem.uncertain.push(Uncertain { input, standard_uncertainty: size, at, words });
        }
    }
}

/// What the reactions in use carry, wherever they come from.
pub fn of_constants(problem: &Problem) -> Vec<Uncertain> {
    let mut found = Vec::new();
    for (r, reaction) in problem.scope.reactions_in_use() {
        let Some(constant) = &reaction.constant else { continue };
        let carried = [
            (Input::LogK(r), constant.uncertainty, constant.kind.to_string()),
            (Input::Enthalpy(r), reaction.enthalpy_uncertainty, "enthalpy".into()),
            (Input::HeatCapacity(r), reaction.heat_capacity_uncertainty, "heat capacity".into()),
        ];
        for (input, size, word) in carried {
            let Some(standard_uncertainty) = size.filter(|&size| size > 0.0) else { continue };
            let words = format!("{word} of {}", reaction.equation);
            let at = reaction.origin.own();
            found.push(Uncertain { input, standard_uncertainty, at, words });
        }
    }
    found
}

/// From the `±` to the end of what it states.
fn place(written: &Written, quantity: &Quantity, number: Span) -> Place {
    let text = &written.parsed.text;
    let before = text.get(quantity.span.start as usize..number.start as usize).unwrap_or_default();
    let sign = before.rfind('±').or_else(|| before.rfind("+/-"));
    let start = sign.map_or(number.start, |sign| quantity.span.start + sign as u32);
    let after = text.get(number.end as usize..).unwrap_or_default();
    let percent = after.trim_start().starts_with('%')
        && quantity.uncertainty.as_ref().is_some_and(|stated| stated.percent);
    let space = after.len() - after.trim_start().len();
    let end = number.end + if percent { space as u32 + 1 } else { 0 };
    written.place(Span { start, end })
}
