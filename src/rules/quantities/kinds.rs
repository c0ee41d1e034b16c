//! Kinds of quantities in words, with units that suit them.

use crate::chemistry::unit::Dimension;
use crate::problem::defect::Expected;

/// What a place takes, with its article.
pub fn needed(expected: Expected) -> &'static str {
    match expected {
        Expected::Concentration => "a concentration",
        Expected::Dose => "an amount to be put in",
        Expected::Strength => "a strength",
        Expected::Density => "a density",
        Expected::Equivalents => "a concentration of charge or of matter",
        Expected::Hardness => "a hardness",
        Expected::Temperature => "a temperature",
        Expected::Pressure => "a pressure",
        Expected::Potential => "a potential",
        Expected::MolarEnergy => "an energy per mole",
        Expected::MolarEntropy => "an energy per mole and kelvin",
        Expected::Plain => "a plain number",
        Expected::Share => "a plain number or a percentage",
        Expected::Imbalance => "a percentage or a concentration of charge",
    }
}

/// Units that suit a place, the usual one first; none where it takes a plain number.
pub fn units(expected: Expected) -> &'static [&'static str] {
    match expected {
        Expected::Concentration => &["mmol/L", "mol/L", "mg/L"],
        Expected::Dose => &["mmol/L", "mg/L"],
        Expected::Strength => &["%", "g/L", "mol/L"],
        Expected::Density => &["kg/L"],
        Expected::Equivalents => &["meq/L", "mmol/L", "mg/L as CaCO3"],
        Expected::Hardness => &["mmol/L", "°dH", "mg/L as CaCO3"],
        Expected::Temperature => &["°C", "K"],
        Expected::Pressure => &["atm", "µatm", "kPa"],
        Expected::Potential => &["V", "mV"],
        Expected::MolarEnergy => &["kJ/mol"],
        Expected::MolarEntropy => &["J/(mol·K)"],
        Expected::Plain => &[],
        Expected::Share => &["%"],
        Expected::Imbalance => &["%", "meq/L"],
    }
}

/// What a unit measures, with its article.
pub fn measured(dimension: Dimension) -> &'static str {
    match dimension {
        Dimension::AmountPerLitre => "an amount per litre",
        Dimension::AmountPerKilogram => "an amount per kilogram of water",
        Dimension::EquivalentsPerLitre => "an amount of charge per litre",
        Dimension::Hardness => "a hardness",
        Dimension::MassPerLitre => "a mass per litre",
        Dimension::MassPerKilogram => "a mass per kilogram of water",
        Dimension::MassFraction => "a mass fraction",
        Dimension::VolumePerVolume => "a volume per volume",
        Dimension::Temperature => "a temperature",
        Dimension::Pressure => "a pressure",
        Dimension::Potential => "a potential",
        Dimension::MolarEnergy => "an energy per mole",
        Dimension::MolarEntropy => "an energy per mole and kelvin",
        Dimension::Percent => "a percentage",
        Dimension::Dimensionless => "a plain number",
    }
}
