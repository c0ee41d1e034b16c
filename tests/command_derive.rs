//! `lyate derive`: balances and how they follow, in each form.

mod command_support;

use command_support::{FAULTY, RINSE, code, folder, run, session, stderr};
use serde_json::Value;

/// Two forms of one component, so that there is another reference level.
const BOTH: &str = "\
# Boiler water with bicarbonate and soda. Invented figures.
problem \"Softened make-up\"
use aqueous
component CO3^2-, Na+
add NaHCO3 3 mmol/L
add Na2CO3 1 mmol/L
";

#[test]
fn a_derivation_for_people() {
    insta::assert_snapshot!(session(&[("make-up.lyate", BOTH)], &["derive", "make-up.lyate"]));
}

#[test]
fn a_derivation_as_markdown() {
    let arguments = ["derive", "rinse.lyate", "--case", "warm", "--output", "markdown"];
    insta::assert_snapshot!(session(&[("rinse.lyate", RINSE)], &arguments));
}

#[test]
fn a_derivation_as_latex() {
    let arguments = ["derive", "make-up.lyate", "--output", "latex"];
    insta::assert_snapshot!(session(&[("make-up.lyate", BOTH)], &arguments));
}

#[test]
fn a_derivation_for_programs() {
    let arguments = ["derive", "make-up.lyate", "--output", "json"];
    insta::assert_snapshot!(session(&[("make-up.lyate", BOTH)], &arguments));
}

/// The condition is the combination that the derivation says: added up term by term.
#[test]
fn the_proton_condition_is_its_combination() {
    let folder = folder(&[("rinse.lyate", RINSE), ("make-up.lyate", BOTH)]);
    for file in ["rinse.lyate", "make-up.lyate"] {
        let output = run(folder.path(), &["derive", file, "--output", "json"]);
        let report: Value = serde_json::from_slice(&output.stdout).unwrap();
        for derivation in report["derivations"].as_array().unwrap() {
            let condition = &derivation["proton_condition"];
            let mut sum = sides(&derivation["charge_balance"], condition["charge_factor"].as_i64());
            for factor in condition["mass_factors"].as_array().unwrap() {
                let masses = derivation["mass_balances"].as_array().unwrap();
                let mass = masses.iter().find(|m| m["component"] == factor["component"]).unwrap();
                for (term, n) in sides(mass, factor["factor"].as_i64()) {
                    *sum.entry(term).or_default() -= n;
                }
            }
            // Totals are written out in what was added.
            let mut wanted = sides(condition, Some(1));
            sum.retain(|term, n| term.starts_with('[') && *n != 0);
            wanted.retain(|term, _| term.starts_with('['));
            assert_eq!(sum, wanted, "{file}");
        }
    }
}

fn sides(balance: &Value, factor: Option<i64>) -> std::collections::BTreeMap<String, i64> {
    let factor = factor.expect("whole here");
    [("left", factor), ("right", -factor)]
        .into_iter()
        .flat_map(|(side, sign)| {
            balance[side].as_array().unwrap().iter().map(move |entry| {
                let coefficient = entry["coefficient"].as_i64().unwrap();
                (entry["term"].as_str().unwrap().to_owned(), sign * coefficient)
            })
        })
        .collect()
}

/// Balances need no answer; what could not be solved is said, and ends with one.
#[test]
fn balances_without_an_answer() {
    let folder = folder(&[("condensate.lyate", FAULTY)]);
    let output = run(folder.path(), &["derive", "condensate.lyate"]);
    assert_eq!(code(&output), 1);
    assert_eq!(
        stderr(&output),
        "lyate: not all of it could be solved: see `lyate check condensate.lyate`\n"
    );
}
