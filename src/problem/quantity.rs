//! Quantities as written, turned into base units for the place that they stand in.

use super::case::CaseResolver;
use super::defect::{DefectKind, Expected};
use super::effective::Written;
use super::resolve::Resolver;
use crate::chemistry::formula::{Formula, Groups};
use crate::chemistry::quantity::{
    Basis, CALCIUM_CARBONATE, ConversionProblem, Scale, to_amount, to_atmospheres,
    to_joules_per_mole, to_joules_per_mole_kelvin, to_kelvin, to_volts,
};
use crate::chemistry::unit::{Dimension, Unit};
use crate::chemistry::water;
use crate::text::span::Place;
use crate::text::tree::{Name, Quantity};

/// A quantity in base units.
#[derive(Clone, Debug, PartialEq)]
pub struct Read {
    pub value: f64,
    /// One standard uncertainty, or the tolerance of an expectation.
    pub uncertainty: Option<f64>,
    /// Base units in one of the written unit.
    pub per_unit: f64,
    /// The unit and basis as written.
    pub words: Option<String>,
    /// Whether it is an amount of charge, where it may be a percentage too.
    pub equivalents: bool,
    /// The derivative by the logarithm of the density of water, where that converted it.
    pub by_ln_density: f64,
}

impl Resolver {
    /// The unit of a quantity; a defect where it is missing or none.
    pub fn unit(
        &mut self,
        written: &Written,
        quantity: &Quantity,
        expected: Expected,
    ) -> Option<Unit> {
        let Some(name) = &quantity.unit else {
            self.report(written.place(quantity.span), DefectKind::MissingUnit { expected });
            return None;
        };
        self.unit_of(written, name)
    }

    fn unit_of(&mut self, written: &Written, name: &Name) -> Option<Unit> {
        match Unit::parse(&name.value) {
            Ok(unit) => Some(unit),
            Err(problem) => {
                let kind = DefectKind::UnknownUnit { text: name.value.clone(), problem };
                self.report(written.place(name.span), kind);
                None
            }
        }
    }

    pub fn wrong_dimension(
        &mut self,
        written: &Written,
        quantity: &Quantity,
        found: Dimension,
        expected: Expected,
    ) {
        let name = quantity.unit.as_ref();
        let at = name.map_or(quantity.span, |name| name.span);
        let unit = name.map_or_else(String::new, |name| name.value.clone());
        let kind = DefectKind::WrongDimension { unit, found, expected };
        self.report(written.place(at), kind);
    }

    /// A quantity of one dimension other than concentration, by its conversion.
    fn converted(
        &mut self,
        written: &Written,
        quantity: &Quantity,
        expected: Expected,
        convert: impl Fn(f64, Unit) -> Result<f64, ConversionProblem>,
    ) -> Option<Read> {
        let unit = self.unit(written, quantity, expected)?;
        if let Some(basis) = &quantity.basis {
            self.basis_misplaced(written, basis, unit);
            return None;
        }
        match convert(quantity.number.value, unit) {
            Ok(value) => Some(Read {
                value,
                uncertainty: uncertainty(quantity, |u| unit.difference_to_base(u)),
                per_unit: unit.factor,
                words: Some(unit.name.to_owned()),
                equivalents: false,
                by_ln_density: 0.0,
            }),
            Err(ConversionProblem::BelowAbsoluteZero) => {
                let why = "it lies below absolute zero, −273.15 °C";
                self.report(written.place(quantity.span), DefectKind::ImpossibleValue { why });
                None
            }
            Err(ConversionProblem::WrongDimension { found, .. }) => {
                self.wrong_dimension(written, quantity, found, expected);
                None
            }
            Err(problem) => {
                let kind = DefectKind::UnitNotApplicable {
                    unit: unit.name.to_owned(),
                    formula: String::new(),
                    problem,
                };
                self.report(written.place(quantity.span), kind);
                None
            }
        }
    }

    fn basis_misplaced(&mut self, written: &Written, basis: &Name, unit: Unit) {
        let kind = DefectKind::UnitNotApplicable {
            unit: unit.name.to_owned(),
            formula: String::new(),
            problem: ConversionProblem::BasisWithUnit { unit: unit.name },
        };
        self.report(written.place(basis.span), kind);
    }

    /// Kelvin.
    pub fn kelvin(&mut self, written: &Written, quantity: &Quantity) -> Option<f64> {
        Some(self.kelvin_read(written, quantity)?.value)
    }

    /// Kelvin.
    pub fn kelvin_read(&mut self, written: &Written, quantity: &Quantity) -> Option<Read> {
        let read = self.converted(written, quantity, Expected::Temperature, to_kelvin)?;
        if read.value > 0.0 {
            return Some(read);
        }
        let why = "it is absolute zero, where nothing is dissolved in anything";
        self.report(written.place(quantity.span), DefectKind::ImpossibleValue { why });
        None
    }

    /// J/mol.
    pub fn molar_energy(&mut self, written: &Written, quantity: &Quantity) -> Option<Read> {
        self.converted(written, quantity, Expected::MolarEnergy, to_joules_per_mole)
    }

    /// J/(mol·K).
    pub fn molar_entropy(&mut self, written: &Written, quantity: &Quantity) -> Option<Read> {
        let convert = to_joules_per_mole_kelvin;
        self.converted(written, quantity, Expected::MolarEntropy, convert)
    }

    /// A number without a unit, or a share that may be in percent.
    pub fn number(
        &mut self,
        written: &Written,
        quantity: &Quantity,
        expected: Expected,
    ) -> Option<Read> {
        let mut per_unit = 1.0;
        if let Some(name) = &quantity.unit {
            let unit = self.unit_of(written, name)?;
            if unit.dimension != Dimension::Percent || expected == Expected::Plain {
                self.wrong_dimension(written, quantity, unit.dimension, expected);
                return None;
            }
            per_unit = unit.factor;
        }
        Some(Read {
            value: quantity.number.value * per_unit,
            uncertainty: uncertainty(quantity, |u| u * per_unit),
            per_unit,
            words: quantity.unit.as_ref().map(|unit| unit.value.clone()),
            equivalents: false,
            by_ln_density: 0.0,
        })
    }
}

impl CaseResolver<'_> {
    pub fn plain(&mut self, written: &Written, quantity: &Quantity) -> Option<Read> {
        self.resolver.number(written, quantity, Expected::Plain)
    }

    pub fn number(
        &mut self,
        written: &Written,
        quantity: &Quantity,
        expected: Expected,
    ) -> Option<Read> {
        self.resolver.number(written, quantity, expected)
    }

    /// atm.
    pub fn pressure(&mut self, written: &Written, quantity: &Quantity) -> Option<Read> {
        self.resolver.converted(written, quantity, Expected::Pressure, to_atmospheres)
    }

    /// V.
    pub fn potential(&mut self, written: &Written, quantity: &Quantity) -> Option<Read> {
        self.resolver.converted(written, quantity, Expected::Potential, to_volts)
    }

    /// mol of alkaline earths per litre or kilogram. A mass says hardness only by what it
    /// is counted as.
    pub fn hardness(&mut self, written: &Written, quantity: &Quantity) -> Option<Read> {
        let unit = self.resolver.unit(written, quantity, Expected::Hardness)?;
        let is_mass =
            matches!(unit.dimension, Dimension::MassPerLitre | Dimension::MassPerKilogram);
        if is_mass && quantity.basis.is_none() {
            self.resolver.wrong_dimension(written, quantity, unit.dimension, Expected::Hardness);
            return None;
        }
        let calcium = Formula::parse("Ca^2+", &Groups::default()).ok()?;
        self.concentration(written, quantity, Some(&calcium), Expected::Hardness)
    }

    /// Percent as a plain number of percent, or equivalents per volume.
    pub fn imbalance(&mut self, written: &Written, quantity: &Quantity) -> Option<Read> {
        let unit = self.resolver.unit(written, quantity, Expected::Imbalance)?;
        if unit.dimension == Dimension::Percent {
            return Some(Read {
                value: quantity.number.value,
                uncertainty: uncertainty(quantity, |u| u),
                per_unit: 1.0,
                words: Some("%".into()),
                equivalents: false,
                by_ln_density: 0.0,
            });
        }
        let read = self.concentration(written, quantity, None, Expected::Imbalance)?;
        Some(Read { equivalents: true, ..read })
    }

    /// Whether a quantity is zero or more; a defect where it is not.
    pub fn not_negative(&mut self, written: &Written, quantity: &Quantity) -> bool {
        let fine = quantity.number.value >= 0.0;
        if !fine {
            let why = "an amount put in is zero or more";
            let at = written.place(quantity.span);
            self.resolver.report(at, DefectKind::ImpossibleValue { why });
        }
        fine
    }

    /// mol (or equivalents) per litre or kilogram, on the file's scale. The formula is what
    /// the amount is of; without one, only amounts and equivalents can be read.
    pub fn concentration(
        &mut self,
        written: &Written,
        quantity: &Quantity,
        formula: Option<&Formula>,
        expected: Expected,
    ) -> Option<Read> {
        let unit = self.resolver.unit(written, quantity, expected)?;
        let basis = match &quantity.basis {
            None => None,
            Some(name) => match Basis::parse(&name.value, &self.scope.groups) {
                Ok(basis) => Some(basis),
                Err(problem) => {
                    let kind =
                        DefectKind::Formula { text: name.value.clone(), problem: problem.kind };
                    self.resolver.report(written.place(name.span), kind);
                    return None;
                }
            },
        };
        if !unit.dimension.is_concentration() {
            self.resolver.wrong_dimension(written, quantity, unit.dimension, expected);
            return None;
        }
        let one = match formula {
            Some(formula) => to_amount(1.0, unit, basis.as_ref(), formula)
                .and_then(|_| to_amount(quantity.number.value, unit, basis.as_ref(), formula))
                .map(|amount| (amount.value, amount.scale)),
            None => without_formula(unit, basis.as_ref())
                .map(|(factor, scale)| (factor * quantity.number.value, scale)),
        };
        let (value, scale) = match one {
            Ok(found) => found,
            Err(problem) => {
                let name = formula.map_or_else(String::new, |formula| formula.name.clone());
                self.unit_not_applicable(written, quantity, unit, name, problem, expected);
                return None;
            }
        };
        let (factor, power) = self.onto_scale(scale, written.place(quantity.span));
        let value = value * factor;
        let per_unit = if quantity.number.value == 0.0 {
            match formula {
                Some(formula) => to_amount(1.0, unit, basis.as_ref(), formula).ok()?.value * factor,
                None => without_formula(unit, basis.as_ref()).ok()?.0 * factor,
            }
        } else {
            value / quantity.number.value
        };
        let mut words = unit.name.to_owned();
        if let Some(basis) = &basis {
            words = format!("{words} as {}", basis.name());
        }
        Some(Read {
            value,
            uncertainty: uncertainty(quantity, |u| u * per_unit),
            per_unit,
            words: Some(words),
            by_ln_density: power * value,
            equivalents: false,
        })
    }

    fn unit_not_applicable(
        &mut self,
        written: &Written,
        quantity: &Quantity,
        unit: Unit,
        formula: String,
        problem: ConversionProblem,
        expected: Expected,
    ) {
        if let ConversionProblem::WrongDimension { found, .. } = problem {
            self.resolver.wrong_dimension(written, quantity, found, expected);
            return;
        }
        let name = quantity.basis.as_ref().or(quantity.unit.as_ref());
        let at = match (&quantity.unit, &quantity.basis) {
            (Some(unit), Some(basis)) => unit.span.to(basis.span),
            _ => name.map_or(quantity.span, |name| name.span),
        };
        let unit = unit.name.to_owned();
        let kind = DefectKind::UnitNotApplicable { unit, formula, problem };
        self.resolver.report(written.place(at), kind);
    }

    /// What brings a value of this scale onto the file's, a power of the density of water, and
    /// that power. The first concentration in the file sets its scale.
    pub fn onto_scale(&mut self, scale: Scale, at: Place) -> (f64, f64) {
        let Some((own, first)) = self.scale else {
            self.scale = Some((scale, at));
            return (1.0, 0.0);
        };
        if own == scale {
            return (1.0, 0.0);
        }
        if !std::mem::replace(&mut self.mixed, true) {
            self.resolver.report(at, DefectKind::MixedScales { other: first });
        }
        let density = water::density(self.kelvin) / 1000.0;
        match own {
            Scale::PerLitre => (density, 1.0),
            Scale::PerKilogram => (1.0 / density, -1.0),
        }
    }
}

/// The lower of two quantities with the upper one's unit, where it has none of its own:
/// `between 6 and 9 mg/L`, `from 0 to 20 mmol/L`.
pub fn with_unit_of(low: &Quantity, high: &Quantity) -> Quantity {
    match low.unit {
        Some(_) => low.clone(),
        None => Quantity { unit: high.unit.clone(), basis: high.basis.clone(), ..low.clone() },
    }
}

/// Base units in one of a unit that needs no formula: amounts, equivalents, and mass as
/// CaCO3, which counts equivalents.
fn without_formula(unit: Unit, basis: Option<&Basis>) -> Result<(f64, Scale), ConversionProblem> {
    let scale = match unit.dimension {
        Dimension::AmountPerKilogram | Dimension::MassPerKilogram => Scale::PerKilogram,
        _ => Scale::PerLitre,
    };
    match (unit.dimension, basis) {
        (
            Dimension::AmountPerLitre
            | Dimension::AmountPerKilogram
            | Dimension::EquivalentsPerLitre
            | Dimension::Hardness,
            None,
        ) => Ok((unit.factor, scale)),
        (Dimension::MassPerLitre | Dimension::MassPerKilogram, Some(Basis::CalciumCarbonate)) => {
            Ok((unit.factor * 2.0 / CALCIUM_CARBONATE, scale))
        }
        (found, None) => {
            Err(ConversionProblem::WrongDimension { found, expected: Dimension::AmountPerLitre })
        }
        (_, Some(_)) => Err(ConversionProblem::BasisWithUnit { unit: unit.name }),
    }
}

/// The uncertainty in base units, from an absolute one in the written unit or a percentage.
pub fn uncertainty(quantity: &Quantity, to_base: impl Fn(f64) -> f64) -> Option<f64> {
    let uncertainty = quantity.uncertainty.as_ref()?;
    // Of a quantity in percent it is in percent too: 62 % ± 2 % is 60 to 64 %.
    let in_percent = quantity.unit.as_ref().is_some_and(|unit| unit.value == "%");
    let size = if uncertainty.percent && !in_percent {
        quantity.number.value.abs() * uncertainty.number.value / 100.0
    } else {
        uncertainty.number.value
    };
    Some(to_base(size).abs())
}
