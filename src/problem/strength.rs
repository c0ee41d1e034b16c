//! What the `±` of a stock's strength and of its density brings to the amount of a reagent that
//! is counted by the volume or the mass of that stock.

use super::case::CaseResolver;
use super::defect::Expected;
use super::effective::Written;
use super::input::Input;
use super::model::Problem;
use super::quantity::{Read, uncertainty};
use super::uncertain::{Carries, Uncertain};
use crate::chemistry::formula::Formula;
use crate::chemistry::stock::{Stock, Strength};
use crate::chemistry::unit::Dimension;
use crate::text::tree::{self, Quantity};

/// A relative step to either side, small against the curvature of the table of densities and
/// large against the rounding of its splines.
const STEP: f64 = 1e-4;
/// Below this an amount does not follow: what the differences leave of nothing.
const STILL: f64 = 1e-6;

/// A stock as it was written, and as it was read.
pub struct StockRead<'a> {
    pub written: &'a tree::Strength,
    pub strength: Strength,
    pub stock: &'a Stock,
}

impl CaseResolver<'_> {
    /// Keeps the `±` of a stock of which an amount is put in, each as an input of its own; one
    /// that the amount does not follow is reported.
    pub fn keep_stock_uncertainty(
        &mut self,
        problem: &mut Problem,
        (written, amount, formula): (&Written, &Quantity, &Formula),
        stock: &StockRead,
        (reagent, moles): (usize, f64),
    ) {
        let counted = self.resolver.unit(written, amount, Expected::Dose).map(|u| u.dimension);
        let follows = |by: Option<f64>| by.filter(|by| by.abs() > STILL);
        let by_strength = follows(counted.and_then(|by| stock.by_strength(formula, by)));
        let by_density = follows(counted.and_then(|by| stock.by_density(formula, by)));
        let density = stock.written.density.as_ref();
        let parts = [
            ("strength", Some(&stock.written.value), by_strength),
            ("density", density, by_density),
        ];
        for (word, quantity, by) in parts {
            let Some(quantity) = quantity.filter(|quantity| quantity.uncertainty.is_some()) else {
                continue;
            };
            let Some(by) = by else {
                self.resolver.carries_nothing(written, quantity);
                continue;
            };
            // The share of the value is all that counts, so that any unit will do.
            let value = quantity.number.value;
            let read = Read {
                value,
                uncertainty: uncertainty(quantity, |size| size),
                per_unit: 1.0,
                words: None,
                equivalents: false,
                by_ln_density: 0.0,
            };
            let size = self.resolver.carried(written, quantity, Carries::Positive, &read);
            let Some(size) = size.filter(|_| moles > 0.0) else { continue };
            problem.uncertain.push(Uncertain {
                input: Input::Reagent(reagent),
                standard_uncertainty: (moles * by * size / value).abs(),
                at: Some(written.whole()),
                words: format!("{word} of {}", stock.stock.words),
            });
        }
    }
}

impl StockRead<'_> {
    /// d ln (moles in a fixed amount of stock) / d ln strength, the density going along where it
    /// is from the table. None where the amount counts the pure substance.
    fn by_strength(&self, formula: &Formula, counted: Dimension) -> Option<f64> {
        let own = self.written.density.is_some().then_some(self.stock.density).flatten();
        let moles = |times: f64, density: Option<f64>| {
            self.moles(formula, counted, scaled(self.strength, times), density)
        };
        let slope =
            |density: Option<f64>| Some(moles(1.0 + STEP, density)? - moles(1.0 - STEP, density)?);
        // At an end of the table the density stays as it is.
        Some(slope(own).or_else(|| slope(self.stock.density))? / (2.0 * STEP))
    }

    /// The same by ln density.
    fn by_density(&self, formula: &Formula, counted: Dimension) -> Option<f64> {
        let density = self.stock.density?;
        let moles = |times| self.moles(formula, counted, self.strength, Some(density * times));
        Some((moles(1.0 + STEP)? - moles(1.0 - STEP)?) / (2.0 * STEP))
    }

    /// ln of the moles in one litre or gram of a stock such as this one.
    fn moles(
        &self,
        formula: &Formula,
        counted: Dimension,
        strength: Strength,
        density: Option<f64>,
    ) -> Option<f64> {
        let substance = formula.name.trim_end_matches("(s)");
        let stock = Stock::new(substance, formula.molar_mass(), strength, "", density).ok()?;
        let per_mole = match counted {
            Dimension::VolumePerVolume => stock.litres_per_mole,
            Dimension::MassPerLitre | Dimension::MassPerKilogram => stock.grams_per_mole,
            _ => None,
        };
        Some(-per_mole?.ln())
    }
}

fn scaled(strength: Strength, times: f64) -> Strength {
    match strength {
        Strength::MassFraction(value) => Strength::MassFraction(value * times),
        Strength::MassPerLitre(value) => Strength::MassPerLitre(value * times),
        Strength::AmountPerLitre(value) => Strength::AmountPerLitre(value * times),
    }
}
