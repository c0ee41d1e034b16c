//! Written balances: what is right, and where the wrong ones are wrong.

mod balance_common;

use balance_common::made::made as made_system;
use balance_common::{System, carbonate, r, sump};
use lyate::balance::Balance;
use lyate::balance::charge::charge_balance;
use lyate::balance::mass::mass_balance;
use lyate::balance::proton::proton_condition;
use lyate::balance::recipe::Recipe;
use lyate::balance::written::{
    Difference, Made, Side, TermOf, Verdict, WrittenTerm, WrittenWhat, compare,
};
use lyate::balance::{BalanceKind, Part};
use num_rational::Rational64;
use proptest::prelude::*;

/// Reads a balance: terms between ` + ` or ` - `, an amount as `24(0.5)` for 24 mmol/L
/// with half a digit of 0.5.
fn read(system: &System, text: &str) -> Vec<WrittenTerm> {
    let mut terms = Vec::new();
    let mut side = Side::Left;
    let mut sign = r(1);
    let mut coefficient = r(1);
    let words: Vec<&str> = text.split(' ').collect();
    let mut at = 0;
    let mut push = |side, what, coefficient: &mut Rational64, sign: &mut Rational64| {
        terms.push(WrittenTerm { side, coefficient: *coefficient * *sign, what });
        *coefficient = r(1);
        *sign = r(1);
    };
    while at < words.len() {
        let word = words[at];
        at += 1;
        match word {
            "+" => {}
            "-" => sign = r(-1),
            "=" => side = Side::Right,
            "0" => {
                let what = WrittenWhat::Amount { value: 0.0, half_digit: 0.5 };
                push(side, what, &mut coefficient, &mut sign);
            }
            "total" => {
                let part = Part::Total(system.component(words[at]));
                push(side, WrittenWhat::Constant(part), &mut coefficient, &mut sign);
                at += 1;
            }
            "added" => {
                let reagent = system.reagents.iter().position(|name| name == words[at]);
                let what = reagent.map_or(WrittenWhat::Foreign, |index| {
                    WrittenWhat::Constant(Part::Added(index))
                });
                push(side, what, &mut coefficient, &mut sign);
                at += 1;
            }
            word if word.starts_with('[') => {
                let name = word.trim_matches(['[', ']']);
                let species = system.stoichiometry.species.iter().position(|s| s.name == name);
                let what = species.map_or(WrittenWhat::Foreign, WrittenWhat::Species);
                push(side, what, &mut coefficient, &mut sign);
            }
            word => match word.split_once('(') {
                Some((value, half)) => {
                    let value = value.parse::<f64>().unwrap() * 1e-3;
                    let half_digit = half.trim_end_matches(')').parse::<f64>().unwrap() * 1e-3;
                    let what = WrittenWhat::Amount { value, half_digit };
                    push(side, what, &mut coefficient, &mut sign);
                }
                None => coefficient = word.parse().unwrap(),
            },
        }
    }
    terms
}

fn kind(system: &System, of: &str) -> BalanceKind {
    match of {
        "charge" => BalanceKind::Charge,
        "protons" => BalanceKind::Protons,
        component => BalanceKind::Component(system.component(component)),
    }
}

fn verdict_of(system: &System, of: &str, written: &[WrittenTerm]) -> Verdict {
    let condition = proton_condition(&system.stoichiometry, &system.recipe, &[]).unwrap();
    compare(kind(system, of), written, &system.stoichiometry, &system.recipe, Some(&condition))
        .unwrap()
}

fn verdict(system: &System, of: &str, text: &str) -> Verdict {
    verdict_of(system, of, &read(system, text))
}

/// The differences in short words.
fn wrong(system: &System, of: &str, text: &str) -> Vec<String> {
    let Verdict::Wrong { differences, .. } = verdict(system, of, text) else {
        panic!("{text} is said to be right: {:?}", verdict(system, of, text));
    };
    let term = |term: &TermOf| match term {
        TermOf::Species(s) => format!("[{}]", system.stoichiometry.species[*s].name),
        TermOf::Constant(Part::Total(c)) => {
            format!("total {}", system.stoichiometry.components[*c])
        }
        TermOf::Constant(Part::Added(r)) => format!("added {}", system.reagents[*r]),
        TermOf::Constant(Part::Held(h)) => format!("held {}", system.held[*h]),
        TermOf::Constant(Part::Precipitated(k)) => format!("precipitated {k}"),
    };
    differences
        .iter()
        .map(|difference| match difference {
            Difference::MissingTerm { term: t, coefficient, side } => {
                format!("missing {coefficient} {} {side:?}", term(t))
            }
            Difference::ForeignTerm { index } => format!("foreign {index}"),
            Difference::RepeatedTerm { index } => format!("repeated {index}"),
            Difference::WrongCoefficient { index, should_be } => {
                format!("coefficient {index} {should_be}")
            }
            Difference::WrongSide { index } => format!("side {index}"),
            Difference::WrongConstant { index, should_be, coefficient } => {
                format!("constant {index} {coefficient} {}", term(&TermOf::Constant(*should_be)))
            }
            Difference::WrongAmount { index, should_be } => {
                format!("amount {index} {:.4}", should_be * 1e3)
            }
        })
        .collect()
}

fn made(charge: i64, masses: &[(usize, i64)]) -> Made {
    Made { charge: r(charge), masses: masses.iter().map(|(c, n)| (*c, r(*n))).collect() }
}

#[test]
fn right_ones_of_the_sump() {
    let system = sump();
    for (of, text, expected) in [
        ("charge", "[H+] + [NH4+] + [Na+] = [OH-] + [HSO4-] + 2 [SO4^2-]", made(1, &[])),
        ("charge", "4 [SO4^2-] + 2 [OH-] + 2 [HSO4-] = 2 [H+] + 2 [NH4+] + 2 [Na+]", made(-2, &[])),
        ("charge", "[H+] + [NH4+] + [Na+] - [OH-] - [HSO4-] - 2 [SO4^2-] = 0", made(1, &[])),
        ("NH3", "[NH4+] + [NH3] = total NH3", made(0, &[(1, 1)])),
        ("NH3", "2 total NH3 = 2 [NH4+] + 2 [NH3]", made(0, &[(1, -2)])),
        ("NH3", "[NH4+] + [NH3] = 2 added (NH4)2SO4", made(0, &[(1, 1)])),
        ("NH3", "[NH4+] + [NH3] = 24(0.5)", made(0, &[(1, 1)])),
        ("NH3", "[NH4+] + [NH3] = 23.98(0.05)", made(0, &[(1, 1)])),
        ("NH3", "[NH4+] + [NH3] = 2 total SO4^2-", made(0, &[(1, 1)])),
        (
            "protons",
            "[H+] + [HSO4-] + added NaOH = [OH-] + [NH3]",
            made(1, &[(1, -1), (2, 2), (3, -1)]),
        ),
        (
            "protons",
            "[H+] + [HSO4-] + total Na+ = [OH-] + [NH3]",
            made(1, &[(1, -1), (2, 2), (3, -1)]),
        ),
        (
            "protons",
            "[H+] + [HSO4-] + 9(0.5) = [OH-] + [NH3]",
            made(1, &[(1, -1), (2, 2), (3, -1)]),
        ),
        (
            "protons",
            "2 [OH-] + 2 [NH3] = 2 [H+] + 2 [HSO4-] + 2 added NaOH",
            made(-2, &[(1, 2), (2, -4), (3, 2)]),
        ),
    ] {
        assert_eq!(verdict(&system, of, text), Verdict::Right(expected), "{text}");
    }
}

#[test]
fn right_ones_at_another_level() {
    let system = sump();
    for (text, expected) in [
        // From ammonia instead of ammonium.
        (
            "[H+] + [HSO4-] + [NH4+] + added NaOH = [OH-] + 2 added (NH4)2SO4",
            made(1, &[(2, 2), (3, -1)]),
        ),
        // The charge balance is a proton balance too, though none relative to the recipe.
        ("[H+] + [NH4+] + [Na+] = [OH-] + [HSO4-] + 2 [SO4^2-]", made(1, &[])),
        // From hydrogen sulfate.
        (
            "[H+] + added NaOH + added (NH4)2SO4 = [OH-] + [NH3] + [SO4^2-]",
            made(1, &[(1, -1), (2, 1), (3, -1)]),
        ),
    ] {
        assert_eq!(verdict(&system, "protons", text), Verdict::OtherLevel(expected), "{text}");
    }
}

#[test]
fn one_slip_is_one_finding() {
    let system = sump();
    for (of, text, expected) in [
        ("charge", "[H+] + [NH4+] + [Na+] = [OH-] + [HSO4-] + [SO4^2-]", "coefficient 5 2"),
        ("charge", "[H+] + [NH4+] + [Na+] = [OH-] + 2 [SO4^2-]", "missing 1 [HSO4-] Right"),
        ("charge", "[H+] + [NH4+] + [Na+] + [NH3] = [OH-] + [HSO4-] + 2 [SO4^2-]", "foreign 3"),
        ("charge", "[H+] + [NH4+] = [OH-] + [HSO4-] + 2 [SO4^2-] + [Na+]", "side 5"),
        ("charge", "[H+] + [NH4+] + [Na+] + [Na+] = [OH-] + [HSO4-] + 2 [SO4^2-]", "repeated 3"),
        (
            "charge",
            "[H+] + [NH4+] + [Na+] = [OH-] + [HSO4-] + 2 [SO4^2-] + added NaOH",
            "foreign 6",
        ),
        ("charge", "[H+] + [NH4+] + [Na+] = [OH-] + [HSO4-] + 2 [SO4^2-] + 9(0.5)", "foreign 6"),
        ("charge", "[H+] + [NH4+] + [Na+] + [K+] = [OH-] + [HSO4-] + 2 [SO4^2-]", "foreign 3"),
        ("NH3", "[NH4+] + 2 [NH3] = total NH3", "coefficient 1 1"),
        ("NH3", "[NH4+] = total NH3", "missing 1 [NH3] Left"),
        ("NH3", "[NH4+] + [NH3]", "missing 1 total NH3 Right"),
        ("NH3", "[NH4+] + [NH3] = 0", "missing 1 total NH3 Right"),
        ("NH3", "[NH4+] + [NH3] = 2 total NH3", "coefficient 2 1"),
        ("NH3", "[NH4+] + [NH3] = added (NH4)2SO4", "coefficient 2 2"),
        ("NH3", "[NH4+] + [NH3] = total Na+", "constant 2 1 total NH3"),
        ("NH3", "[NH4+] + [NH3] = total NH3 + added NaOH", "foreign 3"),
        ("NH3", "[NH4+] + [NH3] = 12(0.5)", "amount 2 24.0000"),
        ("NH3", "[NH4+] + [NH3] = 24.1(0.05)", "amount 2 24.0000"),
        ("NH3", "[NH4+] + [NH3] + [Na+] = total NH3", "foreign 2"),
        ("protons", "[H+] + [HSO4-] + added NaOH = [OH-]", "missing 1 [NH3] Right"),
        ("protons", "[H+] + added NaOH = [OH-] + [NH3]", "missing 1 [HSO4-] Left"),
        ("protons", "[H+] + 2 [HSO4-] + added NaOH = [OH-] + [NH3]", "coefficient 1 1"),
        ("protons", "[H+] + [HSO4-] = [OH-] + [NH3]", "missing 1 added NaOH Left"),
        ("protons", "[H+] + [HSO4-] = [OH-] + [NH3] + added NaOH", "side 4"),
        ("protons", "[H+] + [HSO4-] + 2 added NaOH = [OH-] + [NH3]", "coefficient 2 1"),
        ("protons", "[H+] + [HSO4-] + added (NH4)2SO4 = [OH-] + [NH3]", "constant 2 1 added NaOH"),
        ("protons", "[H+] + [HSO4-] + 8(0.5) = [OH-] + [NH3]", "amount 2 9.0000"),
        ("protons", "[HSO4-] + added NaOH = [OH-] + [NH3]", "missing 1 [H+] Left"),
        ("protons", "[H+] + [HSO4-] + added NaOH = [NH3]", "missing 1 [OH-] Right"),
        ("protons", "[H+] + [HSO4-] + added NaOH + [Na+] = [OH-] + [NH3]", "foreign 3"),
        ("protons", "[H+] + [HSO4-] + added NaOH + [NH3] = [OH-]", "side 3"),
    ] {
        assert_eq!(wrong(&system, of, text), [expected], "{text}");
    }
}

#[test]
fn several_slips_are_each_found() {
    let system = sump();
    assert_eq!(
        wrong(&system, "charge", "[H+] + [NH4+] + [NH3] = [OH-] + [HSO4-] + [SO4^2-]"),
        ["foreign 2", "coefficient 5 2", "missing 1 [Na+] Left"]
    );
    let carbonated = carbonate(System::new(&[("CO3^2-", -2), ("Na+", 1), ("Cl-", -1)]))
        .add("Na2CO3", &[("Na+", 2), ("CO3^2-", 1)], 2e-3)
        .add("HCl", &[("H+", 1), ("Cl-", 1)], 1e-3)
        .add("NaOH", &[("Na+", 1), ("H+", -1)], 0.5e-3);
    let right = "[H+] + [HCO3-] + 2 [H2CO3*] + added NaOH = [OH-] + added HCl";
    assert!(matches!(verdict(&carbonated, "protons", right), Verdict::Right(_)));
    assert_eq!(
        wrong(&carbonated, "protons", "[H+] + [HCO3-] + [H2CO3*] + added NaOH = [OH-]"),
        ["coefficient 2 2", "missing 1 added HCl Right"]
    );
    // Two amounts: the one that is off is named, a forgotten one is missing.
    let text = "[H+] + [HCO3-] + 2 [H2CO3*] + 0.5(0.05) = [OH-] + 1.2(0.05)";
    assert_eq!(wrong(&carbonated, "protons", text), ["amount 5 1.0000"]);
    let text = "[H+] + [HCO3-] + 2 [H2CO3*] + 0.5(0.05) = [OH-]";
    assert_eq!(wrong(&carbonated, "protons", text), ["missing 1 added HCl Right"]);
    let text = "[H+] + [HCO3-] + 2 [H2CO3*] + 0.5(0.05) + 7.0(0.05) = [OH-] + 1.0(0.05)";
    assert_eq!(wrong(&carbonated, "protons", text), ["foreign 4"]);
}

#[test]
fn what_is_absent_or_unknown_is_not_held_against_it() {
    // Without sulfate its species need not be written, and may be.
    let system = sump();
    let mut none = system.clone();
    none.recipe.reagents[0].amount = Some(0.0);
    none.recipe.reagents.push(none.recipe.reagents[0].clone());
    for text in ["[H+] + [Na+] = [OH-]", "[H+] + [NH4+] + [Na+] = [OH-] + [HSO4-] + 2 [SO4^2-]"] {
        assert!(matches!(verdict(&none, "charge", text), Verdict::Right(_)), "{text}");
    }
    // A strong acid of which nothing is added may be left out of the constant.
    let mut zero = system.clone();
    zero.recipe.reagents[1].amount = Some(0.0);
    let text = "[H+] + [HSO4-] = [OH-] + [NH3]";
    assert!(matches!(verdict(&zero, "protons", text), Verdict::Right(_)));
    // Under a held gas the total is not known: it may be named, and no number is judged.
    let open = carbonate(System::new(&[("CO3^2-", -2), ("Na+", 1)]))
        .add("NaHCO3", &[("Na+", 1), ("CO3^2-", 1), ("H+", 1)], 2e-3)
        .hold("CO2(g)", &[("CO3^2-", 1), ("H+", 2)], 0);
    for text in ["total CO3^2-", "7(0.5)"] {
        let text = format!("[CO3^2-] + [HCO3-] + [H2CO3*] = {text}");
        assert!(matches!(verdict(&open, "CO3^2-", &text), Verdict::Right(_)), "{text}");
    }
    let text = "[H+] + added NaHCO3 = [OH-] + [HCO3-] + 2 [CO3^2-]";
    assert!(matches!(verdict(&open, "protons", text), Verdict::Right(_)));
}

#[test]
fn nonsense_is_answered() {
    let system = sump();
    for of in ["charge", "NH3", "protons"] {
        for text in ["0 = 0", "[K+] = 0", "9(0.5) = 9(0.5)", "[NH3] = [NH3]", "added X = total Na+"]
        {
            assert!(!wrong(&system, of, text).is_empty(), "{text}");
        }
        assert!(matches!(verdict_of(&system, of, &[]), Verdict::Wrong { .. }));
    }
    // Coefficients at the edge of what fits.
    let mut terms = read(&system, "[H+] + [NH4+] + [Na+] = [OH-] + [HSO4-] + 2 [SO4^2-]");
    terms[0].coefficient = Rational64::new(i64::MAX, 2);
    terms[1].coefficient = Rational64::new(i64::MIN + 1, i64::MAX);
    let condition = proton_condition(&system.stoichiometry, &system.recipe, &[]).unwrap();
    for of in ["charge", "NH3", "protons"] {
        let kind = kind(&system, of);
        let _ = compare(kind, &terms, &system.stoichiometry, &system.recipe, Some(&condition));
        let _ = compare(kind, &terms, &system.stoichiometry, &system.recipe, None);
    }
    let mut terms = read(&system, "[NH4+] + [NH3] = 24(0.5)");
    terms[2].what = WrittenWhat::Amount { value: f64::NAN, half_digit: 0.1 };
    assert!(matches!(verdict_of(&system, "NH3", &terms), Verdict::Wrong { .. }));
    terms[2].coefficient = r(0);
    let _ = verdict_of(&system, "NH3", &terms);
}

/// A balance as it would be written, in the order of the species, terms above zero on
/// the left.
fn write(balance: &Balance, factor: Rational64) -> Vec<WrittenTerm> {
    let species = balance.terms.iter().map(|(s, n)| (WrittenWhat::Species(*s), *n));
    let parts = balance.parts.iter().map(|(p, n)| (WrittenWhat::Constant(*p), -*n));
    species
        .chain(parts)
        .map(|(what, n)| {
            let n = n * factor;
            let side = if n > r(0) { Side::Left } else { Side::Right };
            WrittenTerm { side, coefficient: if n > r(0) { n } else { -n }, what }
        })
        .collect()
}

/// Makes one slip; says what the finding must be, unless the slip leads to another
/// balance that is right.
fn slip(terms: &mut Vec<WrittenTerm>, at: usize, how: u8, species: usize) {
    match how % 5 {
        0 => drop(terms.remove(at)),
        1 => terms[at].coefficient += r(1),
        2 => {
            terms[at].side = if terms[at].side == Side::Left { Side::Right } else { Side::Left };
        }
        3 => terms.push(terms[at].clone()),
        _ => terms.push(WrittenTerm {
            side: Side::Left,
            coefficient: r(1),
            what: WrittenWhat::Species(species),
        }),
    }
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(1500))]

    /// Proton balances at any reference level, and component and charge balances, times
    /// any factor, are right; after one slip there is one finding at most.
    #[test]
    fn right_balances_are_right_and_one_slip_is_one_finding(
        made in made_system(),
        chosen in prop::collection::vec(any::<prop::sample::Index>(), 0..4),
        factor in prop_oneof![Just(r(1)), Just(r(-1)), Just(r(2)), Just(Rational64::new(1, 2))],
        which in any::<prop::sample::Index>(),
        at in any::<prop::sample::Index>(),
        how in any::<u8>(),
    ) {
        let system = &made.system;
        let count = system.stoichiometry.species.len();
        let chosen: Vec<usize> = chosen.iter().map(|index| index.index(count)).collect();
        let condition = proton_condition(&system.stoichiometry, &system.recipe, &chosen).unwrap();
        let mut balances = vec![("protons", condition.balance.clone()), ("charge", charge_balance(&system.stoichiometry))];
        for (component, name) in system.stoichiometry.components.iter().enumerate().skip(1) {
            balances.push((name, mass_balance(&system.stoichiometry, &Recipe::default(), component)));
        }
        let (of, balance) = which.get(&balances);
        let of = if which.index(2) == 0 { "protons" } else { of };
        let balance = if of == "protons" { &condition.balance } else { balance };
        let mut terms = write(balance, factor);
        let right = verdict_of(system, of, &terms);
        let own = proton_condition(&system.stoichiometry, &system.recipe, &[]).unwrap();
        let same = own.balance == condition.balance;
        match &right {
            Verdict::Right(_) => prop_assert!(of != "protons" || same),
            Verdict::OtherLevel(_) => prop_assert!(of == "protons" && !same),
            Verdict::Wrong { .. } => prop_assert!(false, "{:?}", right),
        }
        let place = at.index(terms.len());
        slip(&mut terms, place, how, at.index(count));
        if let Verdict::Wrong { differences, .. } = verdict_of(system, of, &terms) {
            prop_assert_eq!(differences.len(), 1, "{:?}", differences);
        }
    }
}
