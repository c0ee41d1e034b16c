//! Units and what quantities come to.

use lyate::chemistry::formula::{Formula, Groups};
use lyate::chemistry::quantity::{
    AmountOnScale, Basis, ConversionProblem as Problem, Scale, from_amount, to_amount,
    to_atmospheres, to_joules_per_mole, to_joules_per_mole_kelvin, to_kelvin,
};
use lyate::chemistry::unit::{Dimension, Unit, UnitProblem};

fn groups() -> Groups {
    Groups::from_definitions(&[("Cit", Some("C6H5O7")), ("Hum", None)]).0
}

fn formula(text: &str) -> Formula {
    Formula::parse(text, &groups()).unwrap()
}

fn unit(text: &str) -> Unit {
    Unit::parse(text).unwrap_or_else(|problem| panic!("{text}: {problem:?}"))
}

fn amount(
    value: f64,
    unit_text: &str,
    basis: Option<&str>,
    species: &str,
) -> Result<AmountOnScale, Problem> {
    let basis = basis.map(|text| Basis::parse(text, &groups()).unwrap());
    to_amount(value, unit(unit_text), basis.as_ref(), &formula(species))
}

#[test]
fn every_unit_of_the_language_is_read() {
    let units = "mol/L|mmol/L|µmol/L|umol/L|nmol/L|M|mM|µM|uM|mol/kg|mmol/kg|eq/L|meq/L|g/L|\
        mg/L|µg/L|ug/L|g/m3|g/m³|mg/m³|mg/m3|kg/m³|g/kg|mg/kg|% w/w|%w/w|% w/v|mL/L|L/m³|°C|degC|K|\
        atm|matm|µatm|uatm|bar|mbar|kPa|Pa|kJ/mol|J/mol|kJ/(mol·K)|J/(mol·K)|J/(mol.K)|\
        J/(mol K)|μmol/L|%|deg C";
    for text in units.split('|') {
        unit(text);
    }
    for (one, two) in [("umol/L", "µmol/L"), ("g/m3", "g/m³"), ("degC", "°C"), ("uM", "µM")] {
        assert_eq!(unit(one), unit(two));
        assert_eq!(unit(one).name, two);
    }
    assert_eq!(unit("mmol/L").dimension, Dimension::AmountPerLitre);
    assert_eq!(Dimension::Pressure.units().next().map(|unit| unit.name), Some("atm"));
}

#[test]
fn unknown_units_get_the_nearest() {
    let nearest = |text: &str| match Unit::parse(text) {
        Err(UnitProblem::Unknown { nearest }) => nearest,
        other => panic!("{text}: {other:?}"),
    };
    assert_eq!(nearest("mmol/l"), ["mmol/L"]);
    assert_eq!(nearest("mg/l"), ["mg/L"]);
    assert_eq!(nearest("Mg/L"), ["mg/L"]);
    assert_eq!(nearest("mmoL/L"), ["mmol/L"]);
    assert_eq!(nearest("mol/KG"), ["mol/kg"]);
    assert_eq!(nearest("kj/mol"), ["kJ/mol"]);
    assert_eq!(nearest("°F"), ["°C"]);
    assert!(nearest("furlong").is_empty());
    assert!(nearest("").is_empty());
    assert!(nearest(&"g".repeat(1 << 20)).is_empty());
    let ambiguous = |text: &str| match Unit::parse(text) {
        Err(UnitProblem::Ambiguous { candidates }) => candidates,
        other => panic!("{text}: {other:?}"),
    };
    assert_eq!(ambiguous("ppm"), ["mg/L", "mg/kg", "µatm"]);
    assert_eq!(ambiguous("N"), ["eq/L"]);
    for candidates in ["ppm", "ppb", "ppt", "N", "m", "ppmv"].map(ambiguous) {
        for candidate in candidates {
            unit(candidate);
        }
    }
}

/// Molar masses by the 2021 abridged weights; the arithmetic is shown.
#[test]
fn concentrations_become_amounts() {
    for (value, unit, basis, species, expected, scale) in [
        (12.0, "mmol/L", None, "(NH4)2SO4", 0.012, Scale::PerLitre),
        (9.0, "µmol/L", None, "NaOH", 9e-6, Scale::PerLitre),
        (0.1, "mol/kg", None, "NaCl", 0.1, Scale::PerKilogram),
        // 14.007 mg/L as N is one millimole of any species with one nitrogen.
        (14.007, "mg/L", Some("N"), "NH3", 1e-3, Scale::PerLitre),
        (14.007, "mg/L", Some("N"), "NH4+", 1e-3, Scale::PerLitre),
        (14.007, "mg/L", Some("N"), "(NH4)2SO4", 0.5e-3, Scale::PerLitre),
        (17.031, "mg/L", None, "NH3", 1e-3, Scale::PerLitre),
        // SiO2 28.085 + 2 × 15.999 = 60.083.
        (60.083, "mg/L", Some("SiO2"), "H4SiO4", 1e-3, Scale::PerLitre),
        // NO3 14.007 + 3 × 15.999 = 62.004.
        (62.004, "mg/L", Some("NO3"), "NO3-", 1e-3, Scale::PerLitre),
        (12.011, "mg/L", Some("C"), "Cit^3-", 1e-3 / 6.0, Scale::PerLitre),
        (189.099, "mg/L", Some("Cit"), "H3Cit", 1e-3, Scale::PerLitre),
        (1.0, "mmol/L", Some("N"), "(NH4)2SO4", 0.5e-3, Scale::PerLitre),
        // 100.086 mg/L as CaCO3 are 2 meq/L.
        (100.086, "mg/L", Some("CaCO3"), "Ca^2+", 1e-3, Scale::PerLitre),
        (100.086, "mg/L", Some("CaCO3"), "HCO3-", 2e-3, Scale::PerLitre),
        (1.0, "mmol/L", Some("CaCO3"), "HCO3-", 2e-3, Scale::PerLitre),
        (2.0, "meq/L", None, "SO4^2-", 1e-3, Scale::PerLitre),
        (3.0, "eq/L", None, "Fe^3+", 1.0, Scale::PerLitre),
        (40.078, "g/m³", None, "Ca^2+", 1e-3, Scale::PerLitre),
        (40.078, "kg/m3", None, "Ca^2+", 1.0, Scale::PerLitre),
        (40.078, "mg/kg", None, "Ca^2+", 1e-3, Scale::PerKilogram),
        // 4 % NaOH: 40 g in 960 g of water; NaOH 39.997.
        (4.0, "% w/w", None, "NaOH", 40.0 / 39.997 / 0.96, Scale::PerKilogram),
    ] {
        let found = amount(value, unit, basis, species).unwrap();
        assert_eq!(found.scale, scale, "{value} {unit} {species}");
        let far = (found.value / expected - 1.0).abs();
        assert!(far < 1e-12, "{value} {unit} as {basis:?} of {species}: {}", found.value);
    }
}

/// 50.04 g per equivalent of CaCO3: common practice. Ca as CaCO3 2.497 and Mg 4.118 mg
/// per mg: "Standard Methods" 2340, recalled from memory. Sulfate as CaCO3 1.04 and
/// chloride 1.41: read in a glossary of the Office of Water Programs, Sacramento.
#[test]
fn factors_of_the_water_trade() {
    let as_calcium_carbonate = |species: &str| {
        let one = amount(1.0, "mg/L", None, species).unwrap();
        let basis = Basis::parse("CaCO3", &groups()).unwrap();
        from_amount(one, unit("mg/L"), Some(&basis), &formula(species), 1.0).unwrap()
    };
    assert!((as_calcium_carbonate("Ca^2+") - 2.497).abs() < 5e-4);
    assert!((as_calcium_carbonate("Mg^2+") - 4.118).abs() < 5e-4);
    assert!((as_calcium_carbonate("SO4^2-") - 1.04).abs() < 5e-3);
    assert!((as_calcium_carbonate("Cl-") - 1.41).abs() < 5e-3);
    let one = amount(1.0, "meq/L", None, "HCO3-").unwrap();
    let basis = Basis::parse("CaCO3", &groups()).unwrap();
    let milligrams = from_amount(one, unit("mg/L"), Some(&basis), &formula("HCO3-"), 1.0);
    assert!((milligrams.unwrap() - 50.04).abs() < 0.005);
}

#[test]
fn what_cannot_be_converted() {
    let problem = |value, unit, basis, species| amount(value, unit, basis, species).unwrap_err();
    let neutral = Problem::Neutral { species: "NH3".into() };
    assert_eq!(problem(1.0, "mg/L", Some("CaCO3"), "NH3"), neutral);
    assert_eq!(problem(1.0, "meq/L", None, "NH3"), neutral);
    let no_mass = Problem::NoMolarMass { species: "HHum".into() };
    assert_eq!(problem(1.0, "mg/L", None, "HHum"), no_mass);
    let no_weight = Problem::NoMolarMass { species: "TcO4-".into() };
    assert_eq!(problem(1.0, "mg/L", None, "TcO4-"), no_weight);
    let absent = Problem::BasisAbsent { species: "NH3".into(), basis: "P".into() };
    assert_eq!(problem(1.0, "mg/L", Some("P"), "NH3"), absent);
    assert_eq!(
        problem(1.0, "mg/L", Some("CaCl2"), "NaCl"),
        Problem::BasisAbsent { species: "NaCl".into(), basis: "CaCl2".into() }
    );
    assert_eq!(
        problem(1.0, "mg/L", Some("NaCl2"), "NaCl"),
        Problem::BasisProportion { species: "NaCl".into(), basis: "NaCl2".into() }
    );
    assert_eq!(
        problem(1.0, "meq/L", Some("Ca"), "Ca^2+"),
        Problem::BasisWithUnit { unit: "meq/L" }
    );
    assert_eq!(problem(1.0, "mL/L", None, "NaOH"), Problem::NeedsDensity { unit: "mL/L" });
    assert_eq!(problem(100.0, "% w/w", None, "NaOH"), Problem::FractionOutOfRange);
    assert_eq!(
        problem(1.0, "°C", None, "NaOH"),
        Problem::WrongDimension {
            found: Dimension::Temperature,
            expected: Dimension::AmountPerLitre
        }
    );
    // Counts beyond all sense are answered too.
    let (groups, _) = Groups::from_definitions(&[
        ("Big", Some("(C999999)1000")),
        ("Bigger", Some("(Big999983)999")),
    ]);
    let giant = Formula::parse("(Bigger999979)997N·0.123457NH3", &groups);
    let basis = Basis::parse("N999983·0.765431N", &groups).unwrap();
    if let Ok(giant) = giant {
        let _ = to_amount(1.0, unit("mg/L"), Some(&basis), &giant);
    }
    // A group of unknown composition may still be counted in moles.
    assert!(amount(1.0, "mmol/L", None, "HHum").is_ok());
    assert!(amount(1.0, "meq/L", None, "Hum-").is_ok());
}

#[test]
fn amounts_come_back_as_the_number_written() {
    let density = 0.998;
    for unit_text in ["mmol/L", "mg/L", "mol/kg", "mg/kg", "g/m³", "% w/w", "nmol/L"] {
        for species in ["NH3", "SO4^2-", "NaOH"] {
            let value = 0.37;
            let there = amount(value, unit_text, None, species).unwrap();
            let back = from_amount(there, unit(unit_text), None, &formula(species), density);
            assert!((back.unwrap() / value - 1.0).abs() < 1e-12, "{unit_text} {species}");
        }
    }
    let basis = Basis::parse("N", &groups()).unwrap();
    let shown = from_amount(
        AmountOnScale::per_kilogram(1e-3),
        unit("mg/L"),
        Some(&basis),
        &formula("NH3"),
        density,
    );
    assert!((shown.unwrap() - 14.007 * 0.998).abs() < 1e-12);
}

/// 1 atm = 101 325 Pa and 0 °C = 273.15 K by definition.
#[test]
fn temperatures_pressures_and_energies() {
    assert_eq!(to_kelvin(25.0, unit("°C")), Ok(298.15));
    assert_eq!(to_kelvin(300.0, unit("K")), Ok(300.0));
    assert_eq!(to_kelvin(-273.15, unit("degC")), Ok(0.0));
    assert_eq!(to_kelvin(-274.0, unit("°C")), Err(Problem::BelowAbsoluteZero));
    assert_eq!(to_kelvin(-1.0, unit("K")), Err(Problem::BelowAbsoluteZero));
    assert_eq!(unit("°C").difference_to_base(5.0), 5.0);
    assert_eq!(to_atmospheres(101_325.0, unit("Pa")), Ok(1.0));
    assert!((to_atmospheres(101.325, unit("kPa")).unwrap() - 1.0).abs() < 1e-15);
    assert!((to_atmospheres(1.01325, unit("bar")).unwrap() - 1.0).abs() < 1e-15);
    assert!((to_atmospheres(420.0, unit("µatm")).unwrap() - 420e-6).abs() < 1e-18);
    assert_eq!(to_joules_per_mole(52.1, unit("kJ/mol")), Ok(52_100.0));
    assert_eq!(to_joules_per_mole_kelvin(-215.0, unit("J/(mol·K)")), Ok(-215.0));
    assert_eq!(
        to_atmospheres(1.0, unit("mg/L")),
        Err(Problem::WrongDimension {
            found: Dimension::MassPerLitre,
            expected: Dimension::Pressure
        })
    );
}

/// Available chlorine is what oxidises as much, 70.906 g to the hypochlorite: common practice,
/// such as 125 g/L as Cl2 for trade hypochlorite of 12.5 %, 1.763 mol/L.
#[test]
fn available_chlorine_counts_one_molecule_for_each_active_atom() {
    for (species, count) in [
        ("OCl-", 1.0),
        ("NaOCl", 1.0),
        ("Ca(OCl)2", 2.0),
        ("NH2Cl", 1.0),
        ("NHCl2", 2.0),
        ("Cl2", 1.0),
    ] {
        let found = amount(70.906, "g/L", Some("Cl2"), species).unwrap().value;
        assert!((found * count - 1.0).abs() < 1e-4, "{species}: {found}");
    }
    let trade = amount(125.0, "g/L", Some("Cl2"), "NaOCl").unwrap().value;
    assert!((trade - 1.763).abs() < 5e-4, "{trade}");
    // Atoms are counted in all else.
    for species in ["NH4Cl", "Cl-", "ClO2-", "Cl2CHCOO-"] {
        let found = amount(35.453, "g/L", Some("Cl2"), species).unwrap().value;
        let atoms = if species == "Cl2CHCOO-" { 2.0 } else { 1.0 };
        assert!((found * atoms - 1.0).abs() < 1e-4, "{species}: {found}");
    }
}
