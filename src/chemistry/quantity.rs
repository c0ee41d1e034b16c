//! Quantities: a number with its unit and basis turned into an amount, and back.

use num_traits::{CheckedDiv, ToPrimitive, Zero};

use super::element::Element;
use super::formula::{Atom, Formula, Groups};
use super::unit::{Dimension, Unit};

/// What an amount of a dissolved substance is counted by.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Scale {
    /// Per litre of solution.
    PerLitre,
    /// Per kilogram of water.
    PerKilogram,
}

/// An amount of a dissolved substance, mol per litre or kilogram.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct AmountOnScale {
    pub value: f64,
    pub scale: Scale,
}

impl AmountOnScale {
    pub fn per_litre(value: f64) -> Self {
        Self { value, scale: Scale::PerLitre }
    }

    pub fn per_kilogram(value: f64) -> Self {
        Self { value, scale: Scale::PerKilogram }
    }

    /// The value on a scale, by the density of water in kg/L (the solution is taken to
    /// be as dense as water, and as rich in it).
    pub fn on(self, scale: Scale, density: f64) -> f64 {
        match (self.scale, scale) {
            (Scale::PerLitre, Scale::PerKilogram) => self.value / density,
            (Scale::PerKilogram, Scale::PerLitre) => self.value * density,
            _ => self.value,
        }
    }
}

/// What follows `as` in a quantity.
#[derive(Clone, Debug, PartialEq)]
pub enum Basis {
    /// `as N`, `as SiO2`: this element, group or formula is counted.
    Counted(Formula),
    /// `as CaCO3`: charge equivalents are counted, half a mole of CaCO3 each.
    CalciumCarbonate,
}

impl Basis {
    /// Reads what follows `as`.
    pub fn parse(text: &str, groups: &Groups) -> Result<Basis, super::formula::FormulaProblem> {
        let formula = Formula::parse(text, groups)?;
        Ok(if formula.name == "CaCO3" { Basis::CalciumCarbonate } else { Basis::Counted(formula) })
    }

    pub fn name(&self) -> &str {
        match self {
            Basis::Counted(formula) => &formula.name,
            Basis::CalciumCarbonate => "CaCO3",
        }
    }
}

/// Molar mass of CaCO3, g/mol, by the weights of [`super::element`]; half of it is the
/// 50.04 g per equivalent of water practice.
pub const CALCIUM_CARBONATE: f64 = 100.086;

#[derive(Clone, Debug, PartialEq)]
pub enum ConversionProblem {
    /// The unit measures something else.
    WrongDimension {
        found: Dimension,
        expected: Dimension,
    },
    /// A mass of a species of unknown molar mass.
    NoMolarMass {
        species: String,
    },
    /// Equivalents, or `as CaCO3`, of a neutral species.
    Neutral {
        species: String,
    },
    /// The species holds nothing of the basis.
    BasisAbsent {
        species: String,
        basis: String,
    },
    /// The species holds the parts of the basis in another proportion than the basis.
    BasisProportion {
        species: String,
        basis: String,
    },
    /// A basis with a unit that cannot have one.
    BasisWithUnit {
        unit: &'static str,
    },
    /// A volume of a substance of unknown density.
    NeedsDensity {
        unit: &'static str,
    },
    /// A mass fraction outside zero to one.
    FractionOutOfRange,
    BelowAbsoluteZero,
}

/// How much of a species a quantity says, mol per litre or per kilogram of water.
///
/// `% w/w` is of a solution of the substance alone: `w` in it are `w/(1 − w)` per
/// kilogram of water. `value` may be negative, as a difference or a total of protons.
pub fn to_amount(
    value: f64,
    unit: Unit,
    basis: Option<&Basis>,
    formula: &Formula,
) -> Result<AmountOnScale, ConversionProblem> {
    if unit.dimension == Dimension::MassFraction {
        let fraction = unit.to_base(value);
        if !(0.0..1.0).contains(&fraction) {
            return Err(ConversionProblem::FractionOutOfRange);
        }
        let grams = 1e3 * fraction / (1.0 - fraction);
        let value = grams / grams_per_mole(unit, basis, formula)?;
        return Ok(AmountOnScale::per_kilogram(value));
    }
    let (per_base, scale) = moles_per_base_unit(unit, basis, formula)?;
    Ok(AmountOnScale { value: unit.to_base(value) * per_base, scale })
}

/// The number that says this amount of a species in the unit: the inverse of
/// [`to_amount`]. `density` of water, kg/L, is used where the scales differ.
pub fn from_amount(
    amount: AmountOnScale,
    unit: Unit,
    basis: Option<&Basis>,
    formula: &Formula,
    density: f64,
) -> Result<f64, ConversionProblem> {
    if unit.dimension == Dimension::MassFraction {
        let grams = amount.on(Scale::PerKilogram, density) * grams_per_mole(unit, basis, formula)?;
        return Ok(unit.from_base(grams / (grams + 1e3)));
    }
    let (per_base, scale) = moles_per_base_unit(unit, basis, formula)?;
    Ok(unit.from_base(amount.on(scale, density) / per_base))
}

/// Moles of the species in one base unit of the quantity.
fn moles_per_base_unit(
    unit: Unit,
    basis: Option<&Basis>,
    formula: &Formula,
) -> Result<(f64, Scale), ConversionProblem> {
    let per_mole = match unit.dimension {
        Dimension::AmountPerLitre | Dimension::AmountPerKilogram => match basis {
            None => 1.0,
            Some(basis) => basis_per_mole(basis, formula)?,
        },
        Dimension::EquivalentsPerLitre | Dimension::Hardness => {
            if basis.is_some() {
                return Err(ConversionProblem::BasisWithUnit { unit: unit.name });
            }
            equivalents(formula)?
        }
        Dimension::MassPerLitre | Dimension::MassPerKilogram => {
            grams_per_mole(unit, basis, formula)?
        }
        Dimension::VolumePerVolume => {
            return Err(ConversionProblem::NeedsDensity { unit: unit.name });
        }
        found => {
            let expected = Dimension::AmountPerLitre;
            return Err(ConversionProblem::WrongDimension { found, expected });
        }
    };
    let scale = match unit.dimension {
        Dimension::AmountPerKilogram | Dimension::MassPerKilogram => Scale::PerKilogram,
        _ => Scale::PerLitre,
    };
    Ok((1.0 / per_mole, scale))
}

/// Grams that stand for one mole of the species: of it, or of its basis.
fn grams_per_mole(
    unit: Unit,
    basis: Option<&Basis>,
    formula: &Formula,
) -> Result<f64, ConversionProblem> {
    let mass = |formula: &Formula| {
        formula
            .molar_mass()
            .ok_or_else(|| ConversionProblem::NoMolarMass { species: formula.name.clone() })
    };
    match basis {
        None => mass(formula),
        Some(_) if unit.dimension == Dimension::MassFraction => {
            Err(ConversionProblem::BasisWithUnit { unit: unit.name })
        }
        Some(Basis::CalciumCarbonate) => {
            Ok(CALCIUM_CARBONATE * basis_per_mole(&Basis::CalciumCarbonate, formula)?)
        }
        Some(basis @ Basis::Counted(counted)) => {
            Ok(mass(counted)? * basis_per_mole(basis, formula)?)
        }
    }
}

fn equivalents(formula: &Formula) -> Result<f64, ConversionProblem> {
    formula
        .equivalents()
        .map(f64::from)
        .ok_or_else(|| ConversionProblem::Neutral { species: formula.name.clone() })
}

/// Moles of the basis in one mole of the species.
fn basis_per_mole(basis: &Basis, formula: &Formula) -> Result<f64, ConversionProblem> {
    match basis {
        Basis::CalciumCarbonate => Ok(equivalents(formula)? / 2.0),
        Basis::Counted(counted) => match available_chlorine(counted, formula) {
            Some(count) => Ok(count),
            None => count_of(counted, formula),
        },
    }
}

/// Moles of chlorine that oxidise as much as one of a hypochlorite or a chloramine does, where it
/// is counted `as Cl2`: one for each of its chlorine atoms, as the trade reports available
/// chlorine (common practice), and not the half that the atoms alone would make.
fn available_chlorine(counted: &Formula, species: &Formula) -> Option<f64> {
    if counted.name != "Cl2" || species.elements().is_none() {
        return None;
    }
    let count = |symbol: &str| {
        let element = Element::from_symbol(symbol)?;
        species.element_count(element).unwrap_or_default().to_f64()
    };
    let chlorine = count("Cl").filter(|&n| n > 0.0)?;
    let (oxygen, nitrogen, hydrogen) = (count("O")?, count("N")?, count("H")?);
    if count("C")? > 0.0 {
        return None;
    }
    let hypochlorite = nitrogen == 0.0 && oxygen == chlorine;
    // Ammonium chloride has one hydrogen too many.
    let chloramine = nitrogen == 1.0 && oxygen == 0.0 && hydrogen + chlorine <= 4.0;
    (hypochlorite || chloramine).then_some(chlorine)
}

/// How many of a counted formula are in one of a species. Hydrogen and oxygen count
/// only where the counted formula has nothing else: `SiO2` in `H4SiO4` is one, and so
/// are `NH3` in `NH4+` and `N` in either.
fn count_of(counted: &Formula, species: &Formula) -> Result<f64, ConversionProblem> {
    let names = || (species.name.clone(), counted.name.clone());
    let is_water_atom = |atom: &Atom| {
        [Element::HYDROGEN, Element::OXYGEN].iter().any(|e| *atom == Atom::Element(*e))
    };
    let all_water = counted.atoms.keys().all(is_water_atom);
    let mut found = None;
    for (atom, wanted) in counted.conserved() {
        if !all_water && is_water_atom(atom) {
            continue;
        }
        let held = match atom {
            // Inside groups of known composition too.
            Atom::Element(element) if species.elements().is_some() => {
                species.element_count(*element).unwrap_or_default()
            }
            _ => species.atoms.get(atom).copied().unwrap_or_default(),
        };
        let Some(count) = held.checked_div(&wanted) else {
            let (species, basis) = names();
            return Err(ConversionProblem::BasisProportion { species, basis });
        };
        if count.is_zero() {
            let (species, basis) = names();
            return Err(ConversionProblem::BasisAbsent { species, basis });
        }
        if found.is_some_and(|found| found != count) {
            let (species, basis) = names();
            return Err(ConversionProblem::BasisProportion { species, basis });
        }
        found = Some(count);
    }
    match found.and_then(|count| count.to_f64()) {
        Some(count) => Ok(count),
        None => {
            let (species, basis) = names();
            Err(ConversionProblem::BasisAbsent { species, basis })
        }
    }
}

/// A temperature in kelvin.
pub fn to_kelvin(value: f64, unit: Unit) -> Result<f64, ConversionProblem> {
    let kelvin = of_dimension(value, unit, Dimension::Temperature)?;
    if kelvin < 0.0 { Err(ConversionProblem::BelowAbsoluteZero) } else { Ok(kelvin) }
}

/// A pressure in standard atmospheres (101 325 Pa).
pub fn to_atmospheres(value: f64, unit: Unit) -> Result<f64, ConversionProblem> {
    of_dimension(value, unit, Dimension::Pressure)
}

/// A potential in volts.
pub fn to_volts(value: f64, unit: Unit) -> Result<f64, ConversionProblem> {
    of_dimension(value, unit, Dimension::Potential)
}

/// An enthalpy in J/mol.
pub fn to_joules_per_mole(value: f64, unit: Unit) -> Result<f64, ConversionProblem> {
    of_dimension(value, unit, Dimension::MolarEnergy)
}

/// A heat capacity in J/(mol·K).
pub fn to_joules_per_mole_kelvin(value: f64, unit: Unit) -> Result<f64, ConversionProblem> {
    of_dimension(value, unit, Dimension::MolarEntropy)
}

/// A value in base units, where the unit has the dimension.
fn of_dimension(value: f64, unit: Unit, expected: Dimension) -> Result<f64, ConversionProblem> {
    if unit.dimension == expected {
        Ok(unit.to_base(value))
    } else {
        Err(ConversionProblem::WrongDimension { found: unit.dimension, expected })
    }
}
