//! Formulas as they are written: what is read, what is refused, and at which place.

use lyate::chemistry::formula::{
    Atom, Formula, FormulaProblemKind as Kind, GroupProblem, Groups, Phase,
};
use num_rational::Rational64;

fn read(text: &str) -> Formula {
    Formula::parse(text, &Groups::new()).unwrap_or_else(|problem| panic!("{text}: {problem:?}"))
}

/// The composition in one line, `H4 N1`, charge behind it where there is one.
fn composition(formula: &Formula) -> String {
    let mut parts: Vec<String> =
        formula.conserved().map(|(atom, count)| format!("{atom}{count}")).collect();
    parts.sort();
    if formula.charge != 0 {
        parts.push(format!("{:+}", formula.charge));
    }
    parts.join(" ")
}

#[test]
fn reads_composition_charge_and_canonical_name() {
    for (text, name, expected) in [
        ("H+", "H+", "H1 +1"),
        ("NH4+", "NH4+", "H4 N1 +1"),
        ("OH-", "OH-", "H1 O1 -1"),
        ("SO4^2-", "SO4^2-", "O4 S1 -2"),
        ("SO₄²⁻", "SO4^2-", "O4 S1 -2"),
        ("SO4²⁻", "SO4^2-", "O4 S1 -2"),
        ("NH₄⁺", "NH4+", "H4 N1 +1"),
        ("Ca^2+", "Ca^2+", "Ca1 +2"),
        ("Na^1+", "Na+", "Na1 +1"),
        ("Na^+", "Na+", "Na1 +1"),
        ("OH\u{2212}", "OH-", "H1 O1 -1"),
        ("I3-", "I3-", "I3 -1"),
        ("Ag(NH3)2+", "Ag(NH3)2+", "Ag1 H6 N2 +1"),
        ("Fe(CN)6^3-", "Fe(CN)6^3-", "C6 Fe1 N6 -3"),
        ("(NH4)2SO4", "(NH4)2SO4", "H8 N2 O4 S1"),
        ("Al(OH)4-", "Al(OH)4-", "Al1 H4 O4 -1"),
        ("Ca2+", "Ca2+", "Ca2 +1"),
        ("HS2O4-", "HS2O4-", "H1 O4 S2 -1"),
        ("CaSO4·2H2O", "CaSO4·2H2O", "Ca1 H4 O6 S1"),
        ("CaSO4.2H2O", "CaSO4·2H2O", "Ca1 H4 O6 S1"),
        ("CaSO4·0.5H2O", "CaSO4·0.5H2O", "Ca1 H1 O9/2 S1"),
        ("CaSO4.1/2H2O", "CaSO4·1/2H2O", "Ca1 H1 O9/2 S1"),
        ("Mg5(CO3)4(OH)2·4H2O(s)", "Mg5(CO3)4(OH)2·4H2O(s)", "C4 H10 Mg5 O18"),
        ("CO2(aq)", "CO2", "C1 O2"),
        ("CO2(g)", "CO2(g)", "C1 O2"),
        ("H2CO3*", "H2CO3*", "C1 H2 O3"),
        ("H2CO3*(aq)", "H2CO3*", "C1 H2 O3"),
        ("H2O(l)", "H2O", "H2 O1"),
        ("CaCO3(s)", "CaCO3(s)", "C1 Ca1 O3"),
        ("CaCO3(s,calcite)", "CaCO3(s, calcite)", "C1 Ca1 O3"),
        ("CaCO3( s ,  calcite )", "CaCO3(s, calcite)", "C1 Ca1 O3"),
        ("  NaCl ", "NaCl", "Cl1 Na1"),
        ("NaCl1", "NaCl", "Cl1 Na1"),
        ("((CH3)3N)2", "((CH3)3N)2", "C6 H18 N2"),
        ("e-", "e-", "-1"),
        ("e⁻", "e-", "-1"),
    ] {
        let formula = read(text);
        assert_eq!(formula.name, name, "{text}");
        assert_eq!(composition(&formula), expected, "{text}");
        assert_eq!(read(&formula.name), formula, "the canonical name reads as the same");
    }
    assert_eq!(read("CaCO3(s, calcite)").phase, Phase::Solid(Some("calcite".into())));
    assert!(read("H2CO3*").composite && !read("H2CO3").composite);
    assert!(read("H2O(l)").is_water() && read("H2O").is_water() && !read("H2O(g)").is_water());
    assert!(read("e-").is_electron() && read("H+").is_proton() && read("HO-").is_hydroxide());
}

/// The rule for a run of digits before the last sign, at both of its sides.
#[test]
fn refuses_unclear_charges_and_offers_the_caret_form() {
    for (text, suggestion, range) in [
        ("SO4--", "SO4^2-", 3..5),
        ("SO4-2", "SO4^2-", 3..5),
        ("SO42-", "SO4^2-", 3..5),
        ("Ca+2", "Ca^2+", 2..4),
        ("Ca++", "Ca^2+", 2..4),
        ("Al+3", "Al^3+", 2..4),
        ("PO43-", "PO4^3-", 3..5),
        ("CO32-", "CO3^2-", 3..5),
        ("Fe(CN)63-", "Fe(CN)6^3-", 7..9),
        ("P3O105-", "P3O10^5-", 5..7),
        ("Hg22+", "Hg2^2+", 3..5),
        ("SO4^-2", "SO4^2-", 3..6),
        ("SO4^--", "SO4^2-", 3..6),
        ("CaCO3^0+", "CaCO3", 5..8),
        ("Na+1", "Na+", 2..4),
        ("SO42-(aq)", "SO4^2-", 3..5),
        (" SO42-", "SO4^2-", 4..6),
        ("SO₄2-", "SO4^2-", 5..7),
    ] {
        let problem = Formula::parse(text, &Groups::new()).expect_err(text);
        assert_eq!(problem.kind, Kind::AmbiguousCharge { suggestion: suggestion.into() }, "{text}");
        assert_eq!(problem.range, range, "{text}");
    }
    // Boranes, soaps and fullerenes: counts of two digits with a charge of one.
    for (text, expected) in [
        ("B10H13-", "B10 H13 -1"),
        ("B11H14-", "B11 H14 -1"),
        ("C16H33+", "C16 H33 +1"),
        ("C12H21O11-", "C12 H21 O11 -1"),
        ("C60-", "C60 -1"),
        ("C8F17-", "C8 F17 -1"),
    ] {
        assert_eq!(composition(&read(text)), expected);
    }
}

#[test]
fn offers_the_reading_with_a_caret() {
    let groups = Groups::new();
    let caret = |text: &str| Formula::caret_reading(text, &groups);
    let name = |text: &str| caret(text).map(|formula| formula.name);
    assert_eq!(name("Ca2+").as_deref(), Some("Ca^2+"));
    assert_eq!(name("CO3-").as_deref(), Some("CO^3-"));
    assert_eq!(name("Al3+(aq)").as_deref(), Some("Al^3+"));
    for text in ["Ca^2+", "SO4^2-", "OH-", "Ca+", "NaCl", "CaCO3", "SO42-", "", "+"] {
        assert_eq!(name(text), None, "{text}");
    }
    for text in ["Ca2+", "Fe3+", "S2-", "Hg2+"] {
        assert!(caret(text).unwrap().is_common_monatomic_ion(), "{text}");
    }
    for text in ["I3-", "NH4+", "N3-", "Br3-", "O2-", "H2+", "CO3-"] {
        assert!(!caret(text).unwrap().is_common_monatomic_ion(), "{text}");
    }
    assert_eq!(caret("Ag(NH3)2+"), None, "a caret behind an open count is no ion");
}

#[test]
fn points_at_what_cannot_be_read() {
    let unknown = |symbol: &str, nearest: Option<&str>| Kind::UnknownElement {
        symbol: symbol.into(),
        nearest: nearest.map(Into::into),
    };
    for (text, range, kind) in [
        ("", 0..0, Kind::Empty),
        ("   ", 3..3, Kind::Empty),
        ("^2-", 0..0, Kind::Empty),
        ("NACl", 0..2, unknown("NA", Some("Na"))),
        ("HACl", 1..2, unknown("A", None)),
        ("Xx", 0..2, unknown("Xx", Some("Xe"))),
        ("CaCL", 2..4, unknown("CL", Some("Cl"))),
        ("cl", 0..2, unknown("cl", Some("Cl"))),
        ("NaCll", 2..5, unknown("Cll", Some("Cl"))),
        ("Ca(OH", 2..3, Kind::UnbalancedParenthesis),
        ("CaOH)2", 4..5, Kind::UnbalancedParenthesis),
        ("Ca()2", 2..4, Kind::EmptyParentheses),
        ("2H2O", 0..1, Kind::UnexpectedCharacter { found: '2' }),
        ("H2O!", 3..4, Kind::UnexpectedCharacter { found: '!' }),
        ("NH3+H+", 4..5, Kind::UnexpectedCharacter { found: 'H' }),
        ("H2CO3*2", 6..7, Kind::UnexpectedCharacter { found: '2' }),
        ("CuSO4·", 5..7, Kind::UnexpectedCharacter { found: '·' }),
        ("H0", 1..2, Kind::ZeroCount),
        ("CuSO4·0H2O", 7..8, Kind::ZeroCount),
        ("H99999999999999999999", 1..21, Kind::NumberTooLarge),
        ("Fe^99999999999999999999+", 3..23, Kind::NumberTooLarge),
        ("SO4^2", 3..5, Kind::MissingChargeSign),
        ("NaCl+-", 5..6, Kind::UnexpectedCharacter { found: '-' }),
        (
            "Fe(OH)3(am)",
            7..11,
            Kind::UnknownPhase { phase: "am".into(), suggestion: Some("Fe(OH)3(s, am)".into()) },
        ),
        (
            "CO2(gas)",
            3..8,
            Kind::UnknownPhase { phase: "gas".into(), suggestion: Some("CO2(g)".into()) },
        ),
        ("CO2(g, hot)", 3..11, Kind::UnknownPhase { phase: "g, hot".into(), suggestion: None }),
        ("CO2(g", 3..4, Kind::UnbalancedParenthesis),
    ] {
        let problem = Formula::parse(text, &Groups::new()).expect_err(text);
        assert_eq!((problem.range, problem.kind), (range, kind), "{text}");
    }
}

#[test]
fn groups_come_before_elements_longest_first() {
    let (groups, problems) = Groups::from_definitions(&[
        ("Cit", Some("C6H5O7")),
        ("Hum", None),
        ("Ac", Some("CH3COO")),
        ("A", None),
        ("Double", Some("Cit2")),
        ("Blurred", Some("Hum(CH3)")),
    ]);
    assert_eq!(problems, []);
    let read = |text: &str| Formula::parse(text, &groups).unwrap();
    let acid = read("H3Cit");
    assert_eq!(composition(&acid), "Cit1 H3");
    // C6H8O7: 6 × 12.011 + 8 × 1.008 + 7 × 15.999.
    assert!((acid.molar_mass().unwrap() - 192.123).abs() < 1e-9);
    assert_eq!(read("Cit^3-").charge, -3);
    assert_eq!(read("HHum").molar_mass(), None);
    assert_eq!(composition(&read("HHum")), "H1 Hum1");
    // A group may shadow an element, and does not reach into longer symbols.
    assert_eq!(composition(&read("HAc")), "Ac1 H1");
    assert!(matches!(read("Ac-").atoms.keys().next(), Some(Atom::Group(_))));
    assert_eq!(composition(&read("ACl")), "A1 Cl1");
    assert_eq!(composition(&read("AlA3")), "A3 Al1");
    assert!((read("HAc").molar_mass().unwrap() - 60.052).abs() < 1e-9);
    assert!((read("Double").molar_mass().unwrap() - 2.0 * (192.123 - 3.024)).abs() < 1e-9);
    assert_eq!(read("Blurred").molar_mass(), None);
    assert!(read("H3Cit").same_matter(&Formula::parse("C6H8O7", &Groups::new()).unwrap()));
}

#[test]
fn group_definitions_that_cannot_be_taken() {
    let (groups, problems) = Groups::from_definitions(&[
        ("cit", None),
        ("Aa", Some("Bb")),
        ("Bb", Some("Aa2")),
        ("Aa", Some("C")),
        ("Zz", Some("Xx")),
    ]);
    assert_eq!(problems[0], (0, GroupProblem::InvalidSymbol));
    assert_eq!(problems[1], (1, GroupProblem::Circular));
    assert_eq!(problems[2], (2, GroupProblem::Circular));
    assert_eq!(problems[3], (3, GroupProblem::Repeated));
    assert!(matches!(problems[4], (4, GroupProblem::Formula(_))));
    assert_eq!(problems.len(), 5);
    assert!(groups.contains("Zz") && !groups.contains("cit"));
}

/// Against published molar masses. CaCO3: 40.078 + 12.011 + 3 × 15.999 = 100.086 by
/// the 2021 abridged weights (100.0869 by the IUPAC 1995 table, Pure Appl. Chem. 68,
/// 2339); the others summed by hand from the same weights.
#[test]
fn molar_masses() {
    for (text, mass) in [
        ("CaCO3", 100.086),
        ("NH3", 17.031),
        ("H2O", 18.015),
        ("(NH4)2SO4", 132.134),
        ("CaSO4·2H2O", 172.164),
        ("SO4^2-", 96.056),
    ] {
        let found = read(text).molar_mass().unwrap();
        assert!((found - mass).abs() < 1e-9, "{text}: {found}");
    }
    assert_eq!(read("TcO4-").molar_mass(), None, "technetium has no standard weight");
    assert_eq!(read("e-").molar_mass(), None);
}

#[test]
fn counts_elements_inside_groups() {
    let (groups, _) = Groups::from_definitions(&[("Cit", Some("C6H5O7")), ("Hum", None)]);
    let carbon = lyate::chemistry::element::Element::CARBON;
    let count = |text: &str| Formula::parse(text, &groups).unwrap().element_count(carbon);
    assert_eq!(count("H3Cit"), Some(Rational64::from(6)));
    assert_eq!(count("NH3"), Some(Rational64::from(0)));
    assert_eq!(count("Hum-"), None);
}

#[test]
fn long_and_deep_input_is_answered_at_once() {
    let groups = Groups::new();
    let problem = Formula::parse(&"(".repeat(100_000), &groups).unwrap_err();
    assert_eq!(problem.kind, Kind::NestingTooDeep { limit: 64 });
    assert_eq!(problem.range, 64..65);
    let deep = format!("{}H{}", "(".repeat(64), ")".repeat(64));
    assert_eq!(composition(&read(&deep)), "H1");
    let many = format!("{}H{}", "(".repeat(64), ")9".repeat(64));
    assert_eq!(Formula::parse(&many, &groups).unwrap_err().kind, Kind::NumberTooLarge);
    assert_eq!(composition(&read(&"H".repeat(1 << 20))), format!("H{}", 1 << 20));
    for text in
        [")", "+", "-", "*", "·", "H·", "(s)", "NaCl(", "NaCl(s", "H^", "H^^2+", "µ", "水", "\0"]
    {
        assert!(Formula::parse(text, &groups).is_err(), "{text}");
    }
    for giant in ["x", "+", "9", "·H", "Ca(", "^", "H2O·0.", "⁺", "水"] {
        let text = giant.repeat(100_000);
        assert!(Formula::parse(&text, &groups).is_err() || giant == "·H");
        let text = format!("H{text}");
        let _ = Formula::parse(&text, &groups);
    }
}

mod random {
    use super::*;
    use proptest::prelude::*;

    proptest! {
        /// No text panics, and every range lies inside the text on character borders.
        #[test]
        fn any_text_is_answered(text in "[A-Za-z0-9()+^*.·²⁻₄ ,s-]{0,40}|\\PC{0,40}") {
            let groups = Groups::from_definitions(&[("Cit", Some("C6H5O7"))]).0;
            match Formula::parse(&text, &groups) {
                Ok(formula) => {
                    let again = Formula::parse(&formula.name, &groups);
                    prop_assert_eq!(again.as_ref(), Ok(&formula));
                    prop_assert!(formula.atoms.values().all(|count| *count.numer() > 0));
                }
                Err(problem) => {
                    prop_assert!(text.get(problem.range.clone()).is_some(), "{:?}", problem);
                    if let Kind::AmbiguousCharge { suggestion } = problem.kind {
                        prop_assert!(Formula::parse(&suggestion, &groups).is_ok(), "{}", suggestion);
                    }
                }
            }
            let _ = Formula::caret_reading(&text, &groups);
        }
    }
}
