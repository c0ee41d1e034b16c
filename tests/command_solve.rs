//! `lyate solve`: what it says, in each form, and how it ends.

mod command_support;

use command_support::{FAULTY, RINSE, code, folder, run, session, stderr, stdout};
use serde_json::Value;

#[test]
fn an_answer_for_people() {
    insta::assert_snapshot!(session(&[("rinse.lyate", RINSE)], &["solve", "rinse.lyate"]));
}

#[test]
fn an_answer_for_programs() {
    let arguments = ["solve", "rinse.lyate", "--case", "warm", "--output", "json"];
    insta::assert_snapshot!(session(&[("rinse.lyate", RINSE)], &arguments));
}

/// Everything held at once: pH, a gas, a solid near saturation, another scale.
#[test]
fn measured_and_held_values() {
    let text = "\
# Tank under a gas blanket, pH from the meter. Invented figures.
problem \"Blanketed tank\"
use aqueous
component CO3^2-, Ca^2+, Cl-
reaction CaCO3(s) <=> Ca^2+ + CO3^2-, pKsp = 8.48, source \"plant constants\"
activity guntelberg
total Ca^2+ = 2.0 mmol/kg
total Cl-   = 1.0 mmol/kg
hold CO2(g) = 0.01 atm
hold pH = 7.2
expect saturation index CaCO3(s) < 0
expect charge imbalance between -5 % and 5 %
";
    insta::assert_snapshot!(session(&[("tank.lyate", text)], &["solve", "tank.lyate"]));
    let arguments = ["solve", "tank.lyate", "--output", "json"];
    insta::assert_snapshot!(session(&[("tank.lyate", text)], &arguments));
}

/// One solid forms, one stays away, one is not asked about; and one is there in excess.
#[test]
fn solids_that_form_and_dissolve() {
    let text = "\
# Lime dosing by invented figures.
problem \"Softener, second stage\"
use aqueous
component CO3^2-, Ca^2+, Mg^2+, Na+, Cl-
reaction CaCO3(s) <=> Ca^2+ + CO3^2-, pKsp = 8.48, source \"plant constants\"
reaction Mg(OH)2(s) <=> Mg^2+ + 2 OH-, pKsp = 11.15, source \"plant constants\"
reaction MgCO3·3H2O(s) <=> Mg^2+ + CO3^2- + 3 H2O, pKsp = 4.67, source \"plant constants\"
add CaCl2 1.5 mmol/L
add MgCl2 0.3 mmol/L
add NaHCO3 3 mmol/L
add NaOH 1.5 mmol/L
precipitate CaCO3(s)
precipitate Mg(OH)2(s)
balance Ca^2+
    [Ca^2+] + precipitated CaCO3(s) = added CaCl2
expect precipitated CaCO3(s) > 100 mg/L

case \"marble filter\"
    add CaCl2 0.1 mmol/L
    saturate with CaCO3(s)
    without balance Ca^2+
    hold CO2(g) = 0.01 atm
    expect precipitated CaCO3(s) < 0 mg/L
";
    insta::assert_snapshot!(session(&[("softener.lyate", text)], &["solve", "softener.lyate"]));
    let arguments = ["solve", "softener.lyate", "--case", "marble filter", "--output", "json"];
    insta::assert_snapshot!(session(&[("softener.lyate", text)], &arguments));
    let arguments = ["derive", "softener.lyate", "--output", "latex"];
    insta::assert_snapshot!(session(&[("softener.lyate", text)], &arguments));
}

/// A few rows of each curve for people, every point for programs.
#[test]
fn curves() {
    let text = "\
# Make-up water of a cooling loop, softened with caustic. Invented figures.
problem \"Loop make-up\"
use aqueous
temperature 15 °C
component CO3^2-, Ca^2+, Cl-, Na+
reaction CaCO3(s) <=> Ca^2+ + CO3^2-, pKsp = 8.48, enthalpy = -9.6 kJ/mol, source \"plant sheet\"
add CaCl2  1 mmol/L
add NaHCO3 2 mmol/L
curve over NaOH from 0 to 4 mmol/L
curve over pH from 6 to 10, 3 points
curve over temperature from 5 to 45 °C, 5 points
case \"short\"
    curve over NaOH from 80 to 0 mg/L, 3 points
";
    insta::assert_snapshot!(session(&[("loop.lyate", text)], &["solve", "loop.lyate"]));
    let arguments = ["solve", "loop.lyate", "--case", "short", "--output", "json"];
    insta::assert_snapshot!(session(&[("loop.lyate", text)], &arguments));
}

#[test]
fn a_point_of_a_curve_without_an_answer_is_named() {
    let text = "\
component NH3, Cl-
reaction NH4+ <=> NH3 + H+, log K(T) = log(T - 293.15) - 10.4, source \"made up\"
add NH4Cl 2 mmol/L
curve over temperature from 10 to 40 °C, 7 points
curve over NH4Cl from 0 to 1 mol/L, 11 points
";
    let folder = folder(&[("jar.lyate", text)]);
    let output = run(folder.path(), &["solve", "jar.lyate"]);
    assert_eq!(code(&output), 1);
    let told = "not solved from 10 °C to 20 °C (3 points): \
                the constant of `NH4+ <=> NH3 + H+` has no value there";
    assert!(stdout(&output).contains(told), "{}", stdout(&output));
    let past = "past the ionic strength of 0.5 mol/L up to which `davies` is used: 5 of 11 points";
    assert!(stdout(&output).contains(past), "{}", stdout(&output));
    let output = run(folder.path(), &["solve", "jar.lyate", "--output", "json"]);
    assert_eq!(code(&output), 1);
    let report: Value = serde_json::from_slice(&output.stdout).unwrap();
    let points = report["solutions"][0]["curves"][0]["points"].as_array().unwrap();
    let status = |point: &Value| point["status"].as_str().unwrap().to_owned();
    let statuses: Vec<String> = points.iter().map(status).collect();
    let (without, with) = ("no-constant", "solved");
    assert_eq!(statuses, [without, without, without, with, with, with, with]);
    assert_eq!(points[0].as_object().unwrap().len(), 2, "no numbers but x");
}

/// A dose from a stock, in each form, and one that no amount reaches.
#[test]
fn doses_that_meet_targets() {
    let text = "\
# Rinse water before the stripper, caustic from the drum. Invented figures.
problem \"Stripper feed\"
use aqueous
component NH3 \"ammonia nitrogen\", Na+, Cl-
add NH4Cl 10 mmol/L
hold pH = 11.0 by dose of 30 % NaOH
balance protons
    [H+] + added NaOH = [OH-] + [NH3]
expect dose NaOH < 1.5 mL/L

case \"back to the sewer\"
    add 1.3 mL/L of 30 % NaOH
    hold pH = 8.5 by HCl
    without expect dose NaOH
    without balance protons

case \"the wrong drum\"
    hold pH = 3 by dose of 30 % NaOH
    without expect dose NaOH
";
    insta::assert_snapshot!(session(&[("feed.lyate", text)], &["solve", "feed.lyate"]));
    let folder = folder(&[("feed.lyate", text)]);
    let output = run(folder.path(), &["solve", "feed.lyate", "--output", "json"]);
    assert_eq!(code(&output), 1, "one case is not solved");
    let report: Value = serde_json::from_slice(&output.stdout).unwrap();
    let statuses: Vec<&Value> =
        report["solutions"].as_array().unwrap().iter().map(|s| &s["status"]).collect();
    assert_eq!(statuses, ["solved", "solved", "no-solution"]);
    insta::assert_snapshot!(
        serde_json::to_string_pretty(&report["solutions"][0]["doses"]).unwrap()
    );
}

/// Two waters, one of them as a laboratory reports it, mixed and dosed; invented figures.
#[test]
fn an_analysis_and_a_blend() {
    let well = "\
use aqueous
component CO3^2-, Ca^2+, Mg^2+, Na+, Cl-
temperature 12 °C
total CO3^2- = 4.6 mmol/L
total Ca^2+ = 82 mg/L
total Mg^2+ = 2 °dH
total Na+ = 0 mg/L
total Cl- = 40 mg/L
hold pH = 7.3
";
    let main = "\
problem \"Main\"
use aqueous
component CO3^2-, Ca^2+, Mg^2+, Na+, Cl-
blend 70 % of \"river.lyate\" case \"summer\", 30 % of \"well.lyate\"
add NaOH 0.1 mmol/L
curve over blend \"well.lyate\" from 0 to 100 %, 3 points
expect hardness < 12 °dH
";
    let river = "\
use aqueous
component CO3^2-, Ca^2+, Na+, Cl-
add NaHCO3 0.4 mmol/L
add CaCl2  0.5 mmol/L
hold CO2(g) = 600 µatm
temperature 6 °C
case \"summer\"
    temperature 22 °C
";
    let files = [("main.lyate", main), ("river.lyate", river), ("well.lyate", well)];
    insta::assert_snapshot!(session(&files, &["check", "well.lyate"]));
    insta::assert_snapshot!(session(&files[2..], &["solve", "well.lyate"]));
    insta::assert_snapshot!(session(&files, &["solve", "main.lyate"]));
    let output = run(folder(&files).path(), &["solve", "main.lyate", "--output", "json"]);
    let answer: Value = serde_json::from_str(&stdout(&output)).unwrap();
    let part = &answer["solutions"][0]["blend"][0];
    assert_eq!((&part["file"], &part["case"]), (&"river.lyate".into(), &"summer".into()));
    assert_eq!(part["share"].as_f64(), Some(0.7));
    let output = run(folder(&files).path(), &["solve", "well.lyate", "--output", "json"]);
    let answer: Value = serde_json::from_str(&stdout(&output)).unwrap();
    let balance = &answer["solutions"][0]["ion_balance"];
    assert_eq!(balance["criterion"]["percent"].as_f64(), Some(2.0));
    assert_eq!(balance["accepted"].as_bool(), Some(false));
    let sums = ["cations_meq_per_litre", "anions_meq_per_litre", "difference_meq_per_litre"]
        .map(|name| balance[name].as_f64().unwrap());
    assert!((sums[0] - sums[1] - sums[2]).abs() < 1e-9);
}

#[test]
fn what_cannot_be_solved_says_why() {
    insta::assert_snapshot!(session(
        &[("condensate.lyate", FAULTY)],
        &["solve", "condensate.lyate"]
    ));
    let folder = folder(&[("condensate.lyate", FAULTY)]);
    let output = run(folder.path(), &["solve", "condensate.lyate", "--output", "json"]);
    assert_eq!(code(&output), 1);
    let report: Value = serde_json::from_slice(&output.stdout).unwrap();
    let expected = serde_json::json!([{"case": null, "status": "not-well-posed"}]);
    assert_eq!(report["solutions"], expected, "other fields are absent");
    assert!(stderr(&output).contains("error["), "why goes to standard error");
}

#[test]
fn an_expectation_that_is_missed_ends_with_one() {
    let text = RINSE.replace("[NH3] < 20 mg/L as N", "[NH3] < 2 mg/L as N");
    let folder = folder(&[("rinse.lyate", &text)]);
    let output = run(folder.path(), &["solve", "rinse.lyate"]);
    assert_eq!(code(&output), 1);
    let line = stdout(&output).lines().find(|line| line.contains("< 2 mg/L")).unwrap().to_owned();
    assert!(line.ends_with("not met") && line.trim_start().starts_with("17 "), "{line}");
    let output = run(folder.path(), &["solve", "rinse.lyate", "--output", "json"]);
    assert_eq!(code(&output), 1);
    let report: Value = serde_json::from_slice(&output.stdout).unwrap();
    let expectations = &report["solutions"][0]["expectations"];
    assert_eq!(expectations[1]["quantity"], "[NH3]");
    assert_eq!(expectations[1]["met"], false);
    assert_eq!(expectations[1]["line"], 17);
}

#[test]
fn a_case_by_its_title() {
    let folder = folder(&[("rinse.lyate", RINSE), ("plain.lyate", "component Na+\n")]);
    let output = run(folder.path(), &["solve", "rinse.lyate", "--case", "warm"]);
    assert_eq!(code(&output), 0);
    assert!(stdout(&output).starts_with("Milk line, last rinse, case \"warm\"\n38 °C"));
    let output = run(folder.path(), &["solve", "rinse.lyate", "--case", "wram"]);
    assert_eq!(code(&output), 2);
    assert_eq!(
        stderr(&output),
        "lyate: rinse.lyate has no case \"wram\"; did you mean \"warm\"?\n"
    );
    let output = run(folder.path(), &["solve", "plain.lyate", "--case", "warm"]);
    assert_eq!(code(&output), 2);
    assert_eq!(stderr(&output), "lyate: plain.lyate has no cases\n");
}

/// A base that leaves an amount to its cases is no problem of its own.
#[test]
fn a_base_may_leave_amounts_to_its_cases() {
    let text = "\
use aqueous
component NH3, Cl-
total Cl- = 5 mmol/L
balance NH3
    [NH3] + [NH4+] = total NH3

case \"weak\"
    total NH3 = 5 mmol/L

case \"strong\"
    total NH3 = 15 mmol/L
";
    let folder = folder(&[("bath.lyate", text)]);
    let output = run(folder.path(), &["solve", "bath.lyate", "--output", "json"]);
    let report: Value = serde_json::from_slice(&output.stdout).unwrap();
    let cases: Vec<&str> = report["solutions"]
        .as_array()
        .unwrap()
        .iter()
        .map(|solution| solution["case"].as_str().unwrap())
        .collect();
    assert_eq!(cases, ["weak", "strong"]);
    assert_eq!(code(&output), 0);
    let output = run(folder.path(), &["check", "bath.lyate"]);
    assert_eq!(stdout(&output), "1 file, 2 problems solved, no findings\n");
    assert_eq!(code(&output), 0);
}

#[test]
fn definitions_alone_have_no_answer() {
    let text = "reaction HOCl <=> OCl- + H+, pKa = 7.54, source \"plant constants\"\n";
    let folder = folder(&[("bleach.lyate", text)]);
    let output = run(folder.path(), &["solve", "bleach.lyate"]);
    assert_eq!(code(&output), 1);
    assert_eq!(stdout(&output), "bleach.lyate states no amounts: there is nothing to solve\n");
    let output = run(folder.path(), &["check", "bleach.lyate"]);
    assert_eq!(stdout(&output), "1 file, 0 problems solved, no findings\n");
    assert_eq!(code(&output), 0);
}

/// Every input with a `±` in each answer, with its share, and a limit that holds too narrowly.
#[test]
fn uncertain_answers_and_their_budgets() {
    let text = "\
# Feed of an ammonia stripper. Invented figures.
use aqueous
component NH3, SO4^2-, Na+
temperature 18 ± 0.5 °C
reaction NH4+ <=> NH3 + H+, pKa = 9.25 ± 0.02, enthalpy = 52.1 ± 0.5 kJ/mol, source \"sheet 3\"
add (NH4)2SO4 12 ± 2 % mmol/L
add NaOH 5.0 ± 0.05 mmol/L
add NaOH 4.0 ± 0.1 mmol/L
expect pH < 9.35, confidence 95 %
expect [NH3] < 130 mg/L as N
";
    let solve = ["solve", "feed.lyate"];
    insta::assert_snapshot!(session(&[("feed.lyate", text)], &solve));
    let folder = folder(&[("feed.lyate", text)]);
    let output = run(folder.path(), &["solve", "feed.lyate", "--output", "json"]);
    assert_eq!(code(&output), 1);
    let report: Value = serde_json::from_slice(&output.stdout).unwrap();
    let solution = &report["solutions"][0];
    let number = |value: &Value| value.as_f64().unwrap();
    let ph = &solution["uncertainties"][0];
    assert_eq!(ph["quantity"], "pH");
    assert_eq!(number(&ph["standard_uncertainty"]), number(&solution["ph_uncertainty"]));
    let shares = ph["budget"].as_array().unwrap();
    let sum: f64 = shares.iter().map(|share| number(&share["percent"])).sum();
    assert!((sum - 100.0).abs() < 1e-9, "{sum}");
    let of = |line: u64| shares.iter().find(|share| share["line"] == line).unwrap();
    // Two lines of one reagent, each by what it was weighed to.
    let ratio = number(&of(8)["contribution"]) / number(&of(7)["contribution"]);
    assert!((ratio - 2.0).abs() < 1e-9, "{ratio}");
    let limit = &solution["expectations"][0];
    let probability = number(&limit["probability"]);
    assert!(limit["met"] == false && probability > 0.8 && probability < 0.95, "{limit}");
    assert_eq!(solution["expectations"][1]["met"], true);
}

/// The pH is uncertain by what its constants' uncertainties move it, in quadrature.
#[test]
fn the_uncertainty_of_the_ph_is_what_constants_move() {
    let file = |ammonia: &str, carbonic: &str| {
        format!(
            "use aqueous\ncomponent NH3, CO3^2-\nadd NH4HCO3 20 mmol/L\n\
             reaction NH4+ <=> NH3 + H+, pKa = {ammonia}, source \"plant\"\n\
             reaction CO2 + H2O <=> HCO3- + H+, pKa = {carbonic}, source \"plant\"\n",
        )
    };
    let solve = |ammonia: &str, carbonic: &str| -> Value {
        let folder = folder(&[("tank.lyate", &file(ammonia, carbonic))]);
        let output = run(folder.path(), &["solve", "tank.lyate", "--output", "json"]);
        let report: Value = serde_json::from_slice(&output.stdout).unwrap();
        report["solutions"][0].clone()
    };
    let ph = |ammonia: &str, carbonic: &str| solve(ammonia, carbonic)["ph"].as_f64().unwrap();
    let by_ammonia = (ph("9.27", "6.35") - ph("9.23", "6.35")) / 2.0;
    let by_carbonic = (ph("9.25", "6.38") - ph("9.25", "6.32")) / 2.0;
    let found = |ammonia: &str, carbonic: &str| {
        solve(ammonia, carbonic)["ph_uncertainty"].as_f64().unwrap()
    };
    let near = |found: f64, expected: f64| {
        assert!((found - expected.abs()).abs() < 1e-3 * expected.abs(), "{found}, {expected}");
    };
    near(found("9.25 ± 0.02", "6.35"), by_ammonia);
    near(found("9.25", "6.35 ± 0.03"), by_carbonic);
    near(found("9.25 ± 0.02", "6.35 ± 0.03"), by_ammonia.hypot(by_carbonic));
    assert_eq!(solve("9.25", "6.35").get("ph_uncertainty"), None, "absent where none is stated");
}
