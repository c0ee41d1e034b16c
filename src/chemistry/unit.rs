//! Units: which are read, what they measure and how large they are.

use Dimension as D;

/// 0 °C in kelvin.
pub const ZERO_CELSIUS: f64 = 273.15;

/// What a unit measures.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Dimension {
    AmountPerLitre,
    /// Per kilogram of water.
    AmountPerKilogram,
    EquivalentsPerLitre,
    /// Degrees, each so many equivalents per litre.
    Hardness,
    MassPerLitre,
    /// Per kilogram of water.
    MassPerKilogram,
    /// `% w/w`: mass of the substance per mass of its solution.
    MassFraction,
    VolumePerVolume,
    Temperature,
    Pressure,
    Potential,
    MolarEnergy,
    /// Of entropy and heat capacity.
    MolarEntropy,
    Percent,
    /// A bare number; no unit has it.
    Dimensionless,
}

impl Dimension {
    /// In words, as it stands in a sentence: "expected …".
    pub fn name(self) -> &'static str {
        match self {
            Dimension::AmountPerLitre => "amount per litre",
            Dimension::AmountPerKilogram => "amount per kilogram of water",
            Dimension::EquivalentsPerLitre => "equivalents per litre",
            Dimension::Hardness => "degrees of hardness",
            Dimension::MassPerLitre => "mass per litre",
            Dimension::MassPerKilogram => "mass per kilogram of water",
            Dimension::MassFraction => "mass fraction",
            Dimension::VolumePerVolume => "volume per volume",
            Dimension::Temperature => "temperature",
            Dimension::Pressure => "pressure",
            Dimension::Potential => "potential",
            Dimension::MolarEnergy => "energy per mole",
            Dimension::MolarEntropy => "energy per mole and kelvin",
            Dimension::Percent => "percentage",
            Dimension::Dimensionless => "plain number",
        }
    }

    /// Whether it says how much of a substance is in the water.
    pub fn is_concentration(self) -> bool {
        matches!(
            self,
            Dimension::AmountPerLitre
                | Dimension::AmountPerKilogram
                | Dimension::EquivalentsPerLitre
                | Dimension::Hardness
                | Dimension::MassPerLitre
                | Dimension::MassPerKilogram
                | Dimension::MassFraction
                | Dimension::VolumePerVolume
        )
    }

    /// Units of this dimension, the usual one first.
    pub fn units(self) -> impl Iterator<Item = Unit> {
        UNITS.iter().copied().filter(move |unit| unit.dimension == self)
    }
}

/// A unit that has been read.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Unit {
    /// Its canonical spelling.
    pub name: &'static str,
    pub dimension: Dimension,
    /// How many base units it is: mol/L, mol/kg, eq/L, g/L, g/kg, mass per mass, volume
    /// per volume, K, atm, V, J/mol, J/(mol·K), a fraction of one.
    pub factor: f64,
    /// Base value at the unit's zero; other than zero for °C alone.
    pub offset: f64,
}

#[derive(Clone, Debug, PartialEq, Eq)]
pub enum UnitProblem {
    /// No such unit; the nearest ones, the likeliest first.
    Unknown { nearest: Vec<&'static str> },
    /// A unit that means more than one thing in use (`ppm`), with what it might mean.
    Ambiguous { candidates: &'static [&'static str] },
}

impl Unit {
    /// Reads a unit. `µ` may be either of its two characters or `u`; spaces do not
    /// count; the dot of a product may be `·`, `.` or `*`.
    pub fn parse(text: &str) -> Result<Unit, UnitProblem> {
        // No unit is longer than this with every sign doubled: a megabyte is none.
        if text.len() > 64 {
            return Err(UnitProblem::Unknown { nearest: Vec::new() });
        }
        let key = normal(text);
        if let Some(unit) = UNITS.iter().find(|unit| normal(unit.name) == key) {
            return Ok(*unit);
        }
        let synonym = SYNONYMS.iter().find(|(written, _)| *written == key);
        if let Some(unit) = synonym.and_then(|(_, name)| UNITS.iter().find(|u| u.name == *name)) {
            return Ok(*unit);
        }
        if let Some((_, candidates)) = AMBIGUOUS.iter().find(|(written, _)| *written == key) {
            return Err(UnitProblem::Ambiguous { candidates });
        }
        Err(UnitProblem::Unknown { nearest: nearest(&key) })
    }

    /// The value in base units.
    pub fn to_base(self, value: f64) -> f64 {
        value * self.factor + self.offset
    }

    /// The value in this unit of a value in base units.
    pub fn from_base(self, value: f64) -> f64 {
        (value - self.offset) / self.factor
    }

    /// A difference in base units: as `to_base`, but 5 °C is 5 K.
    pub fn difference_to_base(self, value: f64) -> f64 {
        value * self.factor
    }
}

const fn unit(name: &'static str, dimension: Dimension, factor: f64) -> Unit {
    Unit { name, dimension, factor, offset: 0.0 }
}

/// Standard atmosphere, Pa: exact (10th CGPM, 1954). The bar is 10⁵ Pa exactly.
const ATMOSPHERE: f64 = 101_325.0;

/// Equivalents per litre in a German degree of hardness and in a French one. A German degree is 10 mg/L of CaO, two equivalents per mole of 56.077 g; a French degree is
/// 10 mg/L of CaCO3, of 100.086 g (CIAAW 2021 weights; the definitions by Standard Methods for
/// the Examination of Water and Wastewater, 2340, and DIN 38409-6, both recalled).
pub const GERMAN_DEGREE: f64 = 2.0 * 10e-3 / 56.077;
const FRENCH_DEGREE: f64 = 2.0 * 10e-3 / 100.086;

const UNITS: [Unit; 44] = [
    unit("mol/L", D::AmountPerLitre, 1.0),
    unit("mmol/L", D::AmountPerLitre, 1e-3),
    unit("µmol/L", D::AmountPerLitre, 1e-6),
    unit("nmol/L", D::AmountPerLitre, 1e-9),
    unit("M", D::AmountPerLitre, 1.0),
    unit("mM", D::AmountPerLitre, 1e-3),
    unit("µM", D::AmountPerLitre, 1e-6),
    unit("mol/kg", D::AmountPerKilogram, 1.0),
    unit("mmol/kg", D::AmountPerKilogram, 1e-3),
    unit("eq/L", D::EquivalentsPerLitre, 1.0),
    unit("meq/L", D::EquivalentsPerLitre, 1e-3),
    unit("°dH", D::Hardness, GERMAN_DEGREE),
    unit("°fH", D::Hardness, FRENCH_DEGREE),
    unit("mg/L", D::MassPerLitre, 1e-3),
    unit("g/L", D::MassPerLitre, 1.0),
    unit("µg/L", D::MassPerLitre, 1e-6),
    unit("g/m³", D::MassPerLitre, 1e-3),
    unit("mg/m³", D::MassPerLitre, 1e-6),
    unit("kg/L", D::MassPerLitre, 1e3),
    unit("g/mL", D::MassPerLitre, 1e3),
    unit("kg/m³", D::MassPerLitre, 1.0),
    unit("g/kg", D::MassPerKilogram, 1.0),
    unit("mg/kg", D::MassPerKilogram, 1e-3),
    unit("% w/w", D::MassFraction, 1e-2),
    // Grams in a hundred millilitres, as medicine and the laboratory have it.
    unit("% w/v", D::MassPerLitre, 10.0),
    unit("mL/L", D::VolumePerVolume, 1e-3),
    unit("L/m³", D::VolumePerVolume, 1e-3),
    Unit { name: "°C", dimension: D::Temperature, factor: 1.0, offset: ZERO_CELSIUS },
    unit("K", D::Temperature, 1.0),
    unit("atm", D::Pressure, 1.0),
    unit("matm", D::Pressure, 1e-3),
    unit("µatm", D::Pressure, 1e-6),
    unit("bar", D::Pressure, 1e5 / ATMOSPHERE),
    unit("mbar", D::Pressure, 1e2 / ATMOSPHERE),
    unit("kPa", D::Pressure, 1e3 / ATMOSPHERE),
    unit("Pa", D::Pressure, 1.0 / ATMOSPHERE),
    unit("V", D::Potential, 1.0),
    unit("mV", D::Potential, 1e-3),
    unit("kJ/mol", D::MolarEnergy, 1e3),
    unit("J/mol", D::MolarEnergy, 1.0),
    unit("J/(mol·K)", D::MolarEntropy, 1.0),
    unit("kJ/(mol·K)", D::MolarEntropy, 1e3),
    unit("%", D::Percent, 1e-2),
    unit("ng/L", D::MassPerLitre, 1e-9),
];

/// Other spellings, in normal form.
const SYNONYMS: [(&str, &str); 5] = [
    ("degC", "°C"),
    // The single character U+2103, and the masculine ordinal taken for a degree sign.
    ("\u{2103}", "°C"),
    ("ºC", "°C"),
    ("J/(molK)", "J/(mol·K)"),
    ("kJ/(molK)", "kJ/(mol·K)"),
];

const AMBIGUOUS: [(&str, &[&str]); 7] = [
    ("ppm", &["mg/L", "mg/kg", "µatm"]),
    ("ppmv", &["µatm"]),
    ("ppb", &["µg/L"]),
    ("ppt", &["ng/L", "g/kg"]),
    ("N", &["eq/L"]),
    ("mN", &["meq/L"]),
    ("m", &["mol/kg"]),
];

/// One spelling for what is written in several.
fn normal(text: &str) -> String {
    let mut key = String::with_capacity(text.len());
    for c in text.chars() {
        match c {
            'µ' | 'μ' => key.push('u'),
            '³' => key.push('3'),
            '·' | '\u{22c5}' | '\u{2219}' | '*' | '.' => key.push('·'),
            '\u{2215}' | '\u{2044}' => key.push('/'),
            c if c.is_whitespace() => {}
            c => key.push(c),
        }
    }
    key
}

/// Units near to a text that is none, three at most.
fn nearest(key: &str) -> Vec<&'static str> {
    // `mmol` lacks what it is counted per.
    let begun: Vec<&'static str> = UNITS
        .iter()
        .filter(|unit| {
            normal(unit.name).strip_prefix(key).is_some_and(|rest| rest.starts_with('/'))
        })
        .map(|unit| unit.name)
        .take(3)
        .collect();
    if !begun.is_empty() {
        return begun;
    }
    let mut near: Vec<(usize, &'static str)> = UNITS
        .iter()
        .filter_map(|unit| {
            let name = normal(unit.name);
            if name.eq_ignore_ascii_case(key) {
                return Some((0, unit.name));
            }
            let far = strsim::damerau_levenshtein(&name, key);
            // A text that shares nothing with a unit is not near to it.
            (far <= 2 && far < name.chars().count().min(key.chars().count()))
                .then_some((far, unit.name))
        })
        .collect();
    near.sort_by_key(|(far, _)| *far);
    let best = near.first().map_or(0, |(far, _)| *far);
    near.into_iter().filter(|(far, _)| *far == best).take(3).map(|(_, name)| name).collect()
}
