//! Propagated uncertainties against sampled ones, against formulas in closed form, and
//! against a published budget.

mod equilibrium_support;
mod uncertainty_support;

use std::f64::consts::LN_10;
use std::sync::atomic::AtomicBool;

use equilibrium_support::Random;
use lyate::equilibrium::build::system;
use lyate::equilibrium::quantities::Solved;
use lyate::equilibrium::solve::solve;
use lyate::equilibrium::uncertainty::{Budget, Uncertainties};
use lyate::problem::model::{Problem, Sought};
use uncertainty_support::{Case, checked, moved, quantities};

/// Samples of each problem; `LYATE_SAMPLES=100000` for the long form.
fn samples() -> usize {
    std::env::var("LYATE_SAMPLES").ok().and_then(|n| n.parse().ok()).unwrap_or(1500)
}

/// A normal variable (Box and Muller, 1958).
fn normal(random: &mut Random) -> f64 {
    let radius = (-2.0 * random.uniform(1e-300, 1.0).ln()).sqrt();
    radius * (std::f64::consts::TAU * random.uniform(0.0, 1.0)).cos()
}

/// Each uncertain input drawn, and everything solved again: mean and standard deviation of
/// each quantity.
fn sampled(case: &Case, sought: &[Sought], seed: u64) -> Vec<(f64, f64)> {
    let mut random = Random::new(seed);
    let count = samples();
    let mut sums = vec![(0.0, 0.0); sought.len()];
    for _ in 0..count {
        let mut problem = case.problem.clone();
        for uncertain in &case.problem.uncertain {
            let by = uncertain.standard_uncertainty * normal(&mut random);
            problem = moved(&problem, uncertain.input, by);
        }
        let system = system(&problem);
        let answer = solve(&system, Some(&case.solved.answer), &AtomicBool::new(false)).unwrap();
        let solved = Solved { system, answer, formed: Vec::new(), others: Vec::new(), dosed: None };
        for (sum, &sought) in sums.iter_mut().zip(sought) {
            // About the value itself, so that nothing cancels.
            let off = solved.value(&problem, sought).unwrap() - value(case, sought);
            sum.0 += off;
            sum.1 += off * off;
        }
    }
    let n = count as f64;
    sums.into_iter()
        .zip(sought)
        .map(|((sum, squares), &sought)| {
            let mean = sum / n;
            (value(case, sought) + mean, ((squares - n * mean * mean) / (n - 1.0)).sqrt())
        })
        .collect()
}

fn value(case: &Case, sought: Sought) -> f64 {
    case.solved.value(&case.problem, sought).unwrap()
}

fn budget(case: &Case, sought: Sought) -> Budget {
    Uncertainties::default().budget(&case.problem, &case.solved, sought).unwrap()
}

fn species(problem: &Problem, name: &str) -> usize {
    problem.scope.find(name).unwrap()
}

/// How far curvature, which first order leaves out, may move a standard deviation, as a share
/// of it, and a mean, as a share of the standard deviation. With 25,000 samples of these
/// problems the first was within the error of sampling, and the second up to 0.07 for
/// concentrations that go as a power of what is uncertain by some percent.
const BENT: (f64, f64) = (0.02, 0.1);

/// Holds every quantity named against sampling.
fn agrees(name: &str, text: &str, sought: impl Fn(&Problem) -> Vec<Sought>) {
    let case = Case::new(text);
    let sought = sought(&case.problem);
    let found = sampled(&case, &sought, 20261201);
    for (&sought, (mean, deviation)) in sought.iter().zip(found) {
        let budget = budget(&case, sought);
        let u = budget.standard_uncertainty;
        let n = samples() as f64;
        // Four standard errors of a mean and of a standard deviation.
        let apart = (deviation / u - 1.0).abs();
        let allowed = 4.0 / (2.0 * n).sqrt() + BENT.0;
        assert!(apart <= allowed, "{name}, {sought:?}: {deviation} sampled, {u} propagated");
        let off = (mean - budget.value).abs() / u;
        let allowed = 4.0 / n.sqrt() + BENT.1;
        assert!(off <= allowed, "{name}, {sought:?}: mean {mean}, value {}", budget.value);
        if std::env::var_os("LYATE_SAMPLES").is_some() {
            println!("{name}, {sought:?}: deviation off by {apart:.4}, mean by {off:.4} u");
        }
        let percent: f64 = budget.shares.iter().map(|share| share.percent).sum();
        assert!((percent - 100.0).abs() < 1e-9, "{name}, {sought:?}: shares make {percent} %");
        assert!(budget.left_out.is_empty());
    }
}

#[test]
fn a_dosed_water_agrees_with_sampling() {
    let text = "use aqueous\ntemperature 18 ± 0.5 °C\ncomponent NH3, SO4^2-, Na+\n\
         reaction NH4+ <=> NH3 + H+, pKa = 9.25 ± 0.02, enthalpy = 52.1 ± 0.5 kJ/mol, \
         source \"ours\"\n\
         add (NH4)2SO4 12 ± 2 % mmol/L\nadd NaOH 5 ± 0.05 mmol/L\nadd NaOH 4 ± 0.1 mmol/L\n";
    agrees("dosed, Davies", text, |problem| {
        vec![
            Sought::Ph,
            Sought::Concentration(species(problem, "NH3")),
            Sought::Fraction { species: species(problem, "NH3"), component: 1 },
            Sought::IonicStrength,
            Sought::BufferCapacity,
            Sought::Alkalinity,
        ]
    });
}

#[test]
fn an_open_water_agrees_with_sampling() {
    let text = "use aqueous\ntemperature 12 ± 1 °C\ncomponent CO3^2-, Na+, Cl-\n\
         add NaHCO3 2 ± 0.04 mmol/L\nadd NaCl 5 ± 0.5 mmol/L\nhold CO2(g) = 420 ± 30 µatm\n";
    agrees("open", text, |problem| {
        vec![
            Sought::Ph,
            Sought::Total(problem.scope.component("CO3^2-").unwrap()),
            Sought::Concentration(species(problem, "CO3^2-")),
            Sought::Activity(species(problem, "CO2")),
        ]
    });
}

#[test]
fn an_analysis_with_a_measured_ph_agrees_with_sampling() {
    let text = "use aqueous\ntemperature 12 ± 0.3 °C\n\
         component CO3^2-, Ca^2+, Na+, Cl-, SO4^2-\n\
         reaction CaCO3(s) <=> Ca^2+ + CO3^2-, pKsp = 8.48 ± 0.02, enthalpy = -10 ± 1 kJ/mol, \
         source \"ours\"\n\
         total CO3^2- = 62 ± 2 mg/L as C\ntotal Ca^2+ = 205 ± 5 mg/L as CaCO3\n\
         total Na+ = 62 ± 2 mg/L\ntotal Cl- = 40 ± 2 mg/L\ntotal SO4^2- = 48 ± 2 mg/L\n\
         hold pH = 7.40 ± 0.05\n";
    agrees("analysis", text, |problem| {
        vec![
            Sought::Ph,
            Sought::SaturationIndex(species(problem, "CaCO3(s)")),
            Sought::ChargeImbalance { equivalents: false },
            Sought::ChargeImbalance { equivalents: true },
            Sought::Alkalinity,
            Sought::Pressure(species(problem, "CO2(g)")),
        ]
    });
}

#[test]
fn a_medium_of_given_strength_agrees_with_sampling() {
    let text = "use aqueous\nactivity extended-debye-huckel\ntemperature 35 ± 1 °C\n\
         ionic strength 0.08 ± 0.01 mol/L\ncomponent PO4^3-, Na+, F-\n\
         reaction HF <=> F- + H+, K = 6.8e-4 ± 5 %, enthalpy = -13 ± 1 kJ/mol, source \"ours\"\n\
         add H3PO4 20 ± 0.3 mmol/L\nadd HF 2 ± 0.1 mmol/L\nadd NaOH 30 ± 0.3 mmol/L\n";
    agrees("given ionic strength", text, |problem| {
        vec![
            Sought::Ph,
            Sought::Concentration(species(problem, "HPO4^2-")),
            Sought::Activity(species(problem, "HF")),
        ]
    });
}

/// A held ion, its total as it comes, over water converted from one scale to the other.
#[test]
fn a_held_ion_agrees_with_sampling() {
    let text = "use aqueous\ntemperature 40 ± 2 °C\ncomponent F-, Na+, Cl-\n\
         reaction HF <=> F- + H+, pKa = 3.17 ± 0.03, enthalpy = -13 kJ/mol, source \"ours\"\n\
         add NaCl 20 ± 0.4 mmol/L\nadd HCl 2 ± 0.05 mmol/kg\nhold [HF] = 1 ± 0.05 mmol/L\n";
    agrees("held", text, |problem| {
        vec![Sought::Ph, Sought::Total(problem.scope.component("F-").unwrap())]
    });
}

/// Next to its equivalence point the pH of an unbuffered water jumps over what first order
/// takes for a straight line: the propagated ± is many times the sampled one there. This is a
/// limit of the method, and is told so in the reference.
#[test]
fn next_to_an_equivalence_point_first_order_does_not_hold() {
    let text = "activity ideal\ncomponent Na+, Cl-\n\
                add HCl 10 ± 0.05 mmol/L\nadd NaOH 10 ± 0.05 mmol/L\n";
    let case = Case::new(text);
    let (_, deviation) = sampled(&case, &[Sought::Ph], 7)[0];
    let u = budget(&case, Sought::Ph).standard_uncertainty;
    assert!(deviation > 2.0 && deviation < 4.0, "{deviation}");
    assert!(u > 30.0 * deviation, "{u} propagated, {deviation} sampled");
}

/// Henderson's and Hasselbalch's equation holds exactly for the concentrations that are
/// there, so pKa, acid and base come together in quadrature while water plays no part.
#[test]
fn a_buffer_is_uncertain_by_its_ratio_and_its_constant() {
    let text = "activity ideal\ngroup Ac = CH3COO\ncomponent HAc, Na+\n\
         reaction HAc <=> Ac- + H+, pKa = 4.756 ± 0.01, source \"ours\"\n\
         total HAc = 100 ± 1 mmol/L\nadd NaOH 40 ± 1 mmol/L\n";
    let case = Case::new(text);
    let (ac, hac) = (species(&case.problem, "Ac-"), species(&case.problem, "HAc"));
    let (base, acid) =
        (value(&case, Sought::Concentration(ac)), value(&case, Sought::Concentration(hac)));
    // [Ac-] = NaOH, [HAc] = total − NaOH, but for [H+] of 2e-5.
    let by_base = 1e-3 * (1.0 / base + 1.0 / acid) / LN_10;
    let by_total = 1e-3 / acid / LN_10;
    let wanted = (0.01f64.powi(2) + by_base.powi(2) + by_total.powi(2)).sqrt();
    let found = budget(&case, Sought::Ph);
    assert!((found.standard_uncertainty / wanted - 1.0).abs() < 2e-3, "{found:?}, {wanted}");
    let share = |words: &str| {
        let of = |source: usize| case.problem.uncertain[source].words.starts_with(words);
        found.shares.iter().find(|share| of(share.source)).unwrap().percent
    };
    assert!((share("add NaOH") / 100.0 - (by_base / wanted).powi(2)).abs() < 2e-3);
    assert!((share("pKa") / 100.0 - (0.01 / wanted).powi(2)).abs() < 2e-3);
}

/// Example A1 of the EURACHEM/CITAC Guide CG 4, a calibration standard c = 1000 m P / V with
/// m = 100.28 ± 0.05 mg, P = 0.9999 ± 0.000058 and V = 100.0 ± 0.07 mL: c = 1002.7 mg/L with
/// a standard uncertainty of 0.9 mg/L (figures recalled, not read). The same product stands
/// here as a gas held over two constants.
#[test]
fn a_product_has_the_published_uncertainty() {
    let text = "activity ideal\ngroup Aa\ncomponent Aa\n\
         reaction Aa(g) <=> Aa, K = 0.9999 ± 0.000058, source \"CG 4, A1\"\n\
         reaction Aa <=> Aa*, K = 0.01 ± 0.07 %, source \"CG 4, A1\"\n\
         hold Aa(g) = 100.28 ± 0.05 atm\n";
    let case = Case::new(text);
    let found = budget(&case, Sought::Concentration(species(&case.problem, "Aa*")));
    assert!((found.value - 1.0027).abs() < 5e-5, "{found:?}");
    assert!((found.standard_uncertainty - 0.9e-3).abs() < 0.05e-3, "{found:?}");
    // "The contributions from volume and mass are approximately the same", that of the purity
    // nearly nothing.
    assert!(found.shares[0].percent > 60.0 && found.shares[1].percent > 30.0, "{found:?}");
    assert!(found.shares[2].percent < 1.0, "{found:?}");
}

/// Two lines of one reagent are weighed apart: their uncertainties come together in
/// quadrature, not as a sum.
#[test]
fn lines_of_one_reagent_are_independent() {
    let of = |lines: &str| {
        let case = Case::new(&format!("activity ideal\ncomponent Na+, Cl-\n{lines}"));
        budget(&case, Sought::IonicStrength).standard_uncertainty
    };
    let apart = of("add NaCl 3 ± 0.3 mmol/L\nadd NaCl 4 ± 0.4 mmol/L\n");
    assert!((apart / 0.5e-3 - 1.0).abs() < 1e-9, "{apart}");
    let together = of("add NaCl 7 ± 0.7 mmol/L\n");
    assert!((together / 0.7e-3 - 1.0).abs() < 1e-9, "{together}");
}

/// What a unit, a basis and a percentage make of a `±`.
#[test]
fn uncertainties_are_converted_as_their_values_are() {
    let of = |line: &str| {
        let text = format!("use aqueous\nactivity ideal\ncomponent NH3\n{line}\nhold pH = 7\n");
        let checked = checked(&text);
        checked.outcomes[0].problem.uncertain[0].standard_uncertainty
    };
    let near = |found: f64, wanted: f64| {
        assert!((found / wanted - 1.0).abs() < 1e-4, "{found} against {wanted}");
    };
    near(of("total NH3 = 14.007 ± 0.14007 mg/L as N"), 1e-5);
    near(of("total NH3 = 17.031 ± 1 % mg/L"), 1e-5);
    near(of("total NH3 = 1 mmol/L ± 0.02 mmol/L"), 2e-5);
    near(of("total NH3 = 1 ± 0.02 mmol/kg"), 2e-5);
    // An activity of H+ is held as its pH.
    let text = "component Na+, Cl-\nadd NaCl 1 mmol/L\nhold {H+} = 1e-7 ± 10 %\n";
    let uncertain = checked(text).outcomes[0].problem.uncertain.clone();
    near(uncertain[0].standard_uncertainty, 0.1 / LN_10);
}

/// Every quantity of a problem in which everything is uncertain has a budget that adds up.
#[test]
fn the_shares_of_every_budget_make_a_hundred_percent() {
    let text = "use aqueous\ntemperature 18 ± 0.5 °C\ncomponent NH3, SO4^2-, Na+, CO3^2-\n\
         add (NH4)2SO4 12 ± 2 % mmol/L\nadd NaOH 9 ± 0.1 mmol/L\nadd NaHCO3 3 ± 0.1 mmol/L\n";
    let case = Case::new(text);
    let mut seen = 0;
    for sought in quantities(&case.problem) {
        let budget = budget(&case, sought);
        if budget.standard_uncertainty > 0.0 {
            seen += 1;
            let sum: f64 = budget.shares.iter().map(|share| share.percent).sum();
            assert!((sum - 100.0).abs() < 1e-9, "{sought:?}: {sum}");
            let squares: f64 = budget.shares.iter().map(|s| s.contribution.powi(2)).sum();
            let u = budget.standard_uncertainty;
            assert!((squares.sqrt() / u - 1.0).abs() < 1e-12, "{sought:?}");
        }
    }
    assert!(seen > 30, "{seen}");
}

/// Where nothing carries a `±` nothing is looked for; a total of zero is told as left out.
#[test]
fn what_is_not_known_is_not_made_up() {
    let none = Case::new("component Na+, Cl-\nadd NaCl 1 mmol/L\n");
    let (problem, solved) = (&none.problem, &none.solved);
    assert_eq!(Uncertainties::default().budget(problem, solved, Sought::Ph), None);
    let zero = Case::new(
        "use aqueous\ncomponent Na+, Cl-, NH3\nadd NaCl 1 ± 0.1 mmol/L\n\
         total NH3 = 0 ± 0.1 mmol/L\n",
    );
    let found = budget(&zero, Sought::IonicStrength);
    assert_eq!(found.left_out.len(), 1);
    // But for water's own ions.
    assert!((found.standard_uncertainty / 1e-4 - 1.0).abs() < 1e-4);
}

/// Budgets against `tests/reference/uncertainty.py`, which writes every `±` of a file and of
/// the library a little higher and lower and solves all again in 40 digits: equal to what the
/// published formulas for water differ by, and its own differences.
#[test]
fn uncertainties_are_those_of_an_independent_program() {
    let here = std::path::Path::new(env!("CARGO_MANIFEST_DIR")).join("tests");
    let stored = std::fs::read_to_string(here.join("reference/uncertainty.json")).unwrap();
    let stored: serde_json::Value = serde_json::from_str(&stored).unwrap();
    let mut compared = 0;
    for (name, quantities) in stored.as_object().unwrap() {
        let text = std::fs::read_to_string(here.join("problems").join(name)).unwrap();
        let case = Case::new(&text);
        for (words, wanted) in quantities.as_object().unwrap() {
            let expected = case.problem.expectations.iter().find(|e| e.words == *words);
            let sought = expected.map_or(Sought::Ph, |e| e.sought);
            let number = |key: &str| wanted[key].as_str().unwrap().parse::<f64>().unwrap();
            // There it is a share, here in percent.
            let times = if words == "charge imbalance" { 100.0 } else { 1.0 };
            let found = budget(&case, sought);
            for (found, wanted) in [
                (found.value, times * number("value")),
                (found.standard_uncertainty, times * number("standard_uncertainty")),
            ] {
                let apart = (found / wanted - 1.0).abs();
                assert!(apart < 1e-4, "{name}, {words}: {found} against {wanted}");
            }
            compared += 1;
        }
    }
    assert_eq!(compared, 7);
}

/// A stock's `±` against the same file with another strength or density written in it: the
/// density of the table goes along with the strength.
#[test]
fn the_strength_of_a_stock_counts_by_what_it_brings() {
    let moles = |line: &str| {
        let text = format!("component Na+, Cl-\nadd {line}\nexpect pH > 7\n");
        Case::new(&text).problem.reagents[0].amount
    };
    for (before, value, after) in [
        ("1 mL/L of ", 30.0, " % NaOH"),
        ("80 mg/L of ", 95.0, " % NaOH"),
        ("2 mL/L of ", 10.0, " mol/L NaOH"),
        ("80 mg/L of ", 10.0, " mol/L NaOH, density = 1.3 kg/L"),
        ("1 mL/L of 30 % NaOH, density = ", 1.32, " kg/L"),
        ("90 mg/L of 10 mol/L NaOH, density = ", 1.32, " kg/L"),
    ] {
        let by = 1e-3 * value;
        let at = |value: f64| moles(&format!("{before}{value}{after}"));
        let wanted = (at(value + by) - at(value - by)).abs() / 2.0;
        let text =
            format!("component Na+, Cl-\nadd {before}{value} ± {by}{after}\nexpect pH > 7\n");
        let case = Case::new(&text);
        let [uncertain] = &case.problem.uncertain[..] else {
            panic!("{:?}", case.problem.uncertain)
        };
        let found = uncertain.standard_uncertainty;
        assert!((found - wanted).abs() < 1e-4 * wanted, "{text}{found} for {wanted}");
    }
}
