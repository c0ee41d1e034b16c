//! Stocks as a file names them, and amounts that count a stock instead of what is in it.

use std::sync::Arc;

use super::case::CaseResolver;
use super::defect::{DefectKind, Expected};
use super::effective::Written;
use super::model::carried;
use super::quantity::Read;
use crate::chemistry::formula::Formula;
use crate::chemistry::quantity::{ConversionProblem, Scale};
use crate::chemistry::stock::{Stock, StockProblem, Strength, known_range};
use crate::chemistry::unit::{Dimension, Unit};
use crate::text::span::Span;
use crate::text::tree::{self, Quantity};

impl CaseResolver<'_> {
    /// The stock of a reagent, and its strength; a defect where there can be none such.
    pub fn stock(
        &mut self,
        written: &Written,
        strength: &tree::Strength,
        formula: &Formula,
    ) -> Option<(Arc<Stock>, Strength)> {
        let quantity = &strength.value;
        let read = self.strength(written, quantity, formula)?;
        let density = match &strength.density {
            Some(density) => Some(self.density(written, density)?),
            None => None,
        };
        let words = strength_words(quantity);
        let mass = formula.molar_mass();
        let substance = formula.name.trim_end_matches("(s)");
        let why = match Stock::new(substance, mass, read, &words, density) {
            Ok(stock) => return Some((Arc::new(stock), read)),
            Err(StockProblem::NoStrength) => "a stock is stronger than nothing",
            Err(StockProblem::TooStrong) => "a stock holds at most itself, 100 %",
            Err(StockProblem::Density) => {
                let why = "a stock weighs between 0.5 and 4 kg/L";
                let at = strength.density.as_ref().map_or(quantity.span, |density| density.span);
                self.resolver.report(written.place(at), DefectKind::ImpossibleValue { why });
                return None;
            }
            Err(StockProblem::NoMolarMass) => {
                let problem = ConversionProblem::NoMolarMass { species: formula.name.clone() };
                self.not_applicable(written, quantity, formula, problem);
                return None;
            }
        };
        self.resolver.report(written.place(quantity.span), DefectKind::ImpossibleValue { why });
        None
    }

    fn strength(
        &mut self,
        written: &Written,
        quantity: &Quantity,
        formula: &Formula,
    ) -> Option<Strength> {
        let unit = self.resolver.unit(written, quantity, Expected::Strength)?;
        let value = unit.to_base(quantity.number.value);
        // More than all of it is no uncertainty of a strength.
        let uncertain = quantity.uncertainty.as_ref().is_some_and(|uncertainty| {
            let relative = if uncertainty.percent { 100.0 } else { quantity.number.value.abs() };
            uncertainty.number.value > relative
        });
        if uncertain {
            let why = "a strength is known better than to all of itself";
            self.resolver.report(written.place(quantity.span), DefectKind::ImpossibleValue { why });
            return None;
        }
        match unit.dimension {
            Dimension::Percent | Dimension::MassFraction => Some(Strength::MassFraction(value)),
            Dimension::MassPerLitre => Some(Strength::MassPerLitre(value)),
            Dimension::AmountPerLitre => Some(Strength::AmountPerLitre(value)),
            Dimension::EquivalentsPerLitre => {
                let problem = ConversionProblem::Neutral { species: formula.name.clone() };
                self.not_applicable(written, quantity, formula, problem);
                None
            }
            found => {
                self.resolver.wrong_dimension(written, quantity, found, Expected::Strength);
                None
            }
        }
    }

    /// kg/L.
    fn density(&mut self, written: &Written, quantity: &Quantity) -> Option<f64> {
        let unit = self.resolver.unit(written, quantity, Expected::Density)?;
        if unit.dimension == Dimension::MassPerLitre {
            return Some(unit.to_base(quantity.number.value) / 1e3);
        }
        self.resolver.wrong_dimension(written, quantity, unit.dimension, Expected::Density);
        None
    }

    /// How much of a reagent an amount is, mol per litre or kilogram of the water treated: with
    /// a stock, volumes and masses count that, as it is bought.
    pub fn dose(
        &mut self,
        written: &Written,
        quantity: &Quantity,
        formula: &Formula,
        stock: Option<&Stock>,
    ) -> Option<Read> {
        let unit = self.resolver.unit(written, quantity, Expected::Dose)?;
        let per_mole = match (stock, unit.dimension) {
            (Some(stock), Dimension::VolumePerVolume) => stock.litres_per_mole,
            (Some(stock), Dimension::MassPerLitre | Dimension::MassPerKilogram) => {
                stock.grams_per_mole
            }
            _ => return self.concentration(written, quantity, Some(formula), Expected::Dose),
        };
        let Some(per_mole) = per_mole else {
            let kind = DefectKind::DensityMissing {
                stock: stock.map_or_else(String::new, |stock| stock.words.clone()),
                known: known_range(&formula.name),
            };
            self.resolver.report(written.place(quantity.span), kind);
            return None;
        };
        if quantity.basis.is_some() {
            let problem = ConversionProblem::BasisWithUnit { unit: unit.name };
            self.not_applicable(written, quantity, formula, problem);
            return None;
        }
        let scale = match unit.dimension {
            Dimension::MassPerKilogram => Scale::PerKilogram,
            _ => Scale::PerLitre,
        };
        let (factor, power) = self.onto_scale(scale, written.place(quantity.span));
        let per_unit = unit.factor / per_mole * factor;
        let words = stock.map_or_else(String::new, |stock| stock.words.clone());
        let value = quantity.number.value * per_unit;
        Some(Read {
            value,
            uncertainty: super::quantity::uncertainty(quantity, |u| u * per_unit),
            per_unit,
            words: Some(format!("{} of {words}", unit.name)),
            equivalents: false,
            by_ln_density: power * value,
        })
    }

    /// What an amount of a reagent from a stock brings along, in litres or kilograms of water.
    pub fn carried(&self, stock: Option<&Stock>, amount: f64) -> f64 {
        let scale = self.scale.as_ref().map_or(Scale::PerLitre, |(scale, _)| *scale);
        amount * carried(stock, scale)
    }

    fn not_applicable(
        &mut self,
        written: &Written,
        quantity: &Quantity,
        formula: &Formula,
        problem: ConversionProblem,
    ) {
        let name = quantity.basis.as_ref().or(quantity.unit.as_ref());
        let unit = quantity.unit.as_ref().and_then(|unit| Unit::parse(&unit.value).ok());
        let kind = DefectKind::UnitNotApplicable {
            unit: unit.map_or_else(String::new, |unit| unit.name.to_owned()),
            formula: formula.name.clone(),
            problem,
        };
        let at: Span = name.map_or(quantity.span, |name| name.span);
        self.resolver.report(written.place(at), kind);
    }
}

/// `30 %`, as it was written but for its uncertainty.
fn strength_words(quantity: &Quantity) -> String {
    let unit = quantity.unit.as_ref().map_or("", |unit| unit.value.as_str());
    let name = Unit::parse(unit).map_or(unit, |unit| unit.name);
    format!("{} {name}", quantity.number.text)
}
