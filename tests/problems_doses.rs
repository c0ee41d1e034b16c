//! Doses that files ask for, against `tests/reference/doses.py`, which finds them on its own
//! with mpmath; and put in with `add`, they must give what was asked.

use std::path::{Path, PathBuf};
use std::sync::atomic::AtomicBool;

use lyate::problem::files::Disk;
use lyate::problem::import::Imports;
use lyate::problem::model::Unknown;
use lyate::rules::check::{Checked, Surroundings, check};
use lyate::text::tree::{Document, Statement};

fn checked(text: &str, path: &Path) -> Checked {
    let around = Surroundings {
        path: Some(path),
        roots: &[],
        files: &Disk,
        imports: &Imports::default(),
        cancel: &AtomicBool::new(false),
    };
    check(Document::parse(text.to_owned()), &around, None).unwrap()
}

fn here() -> PathBuf {
    PathBuf::from(env!("CARGO_MANIFEST_DIR"))
}

#[test]
fn every_dose_is_the_one_found_by_arithmetic_of_many_digits() {
    let stored = std::fs::read_to_string(here().join("tests/reference/doses.json")).unwrap();
    let stored: serde_json::Value = serde_json::from_str(&stored).unwrap();
    let (mut exact, mut near) = (0, 0);
    for (name, entries) in stored.as_object().unwrap() {
        let path = here().join("tests/problems/doses").join(name);
        let checked = checked(&std::fs::read_to_string(&path).unwrap(), &path);
        for entry in entries.as_array().unwrap() {
            let case = entry["case"].as_str();
            let section = checked.document.sections.iter().position(|section| {
                let first = section.statements.first().map(|placed| &placed.parsed.statement);
                let title = match first {
                    Some(Statement::Case { title }) => Some(title.value.as_str()),
                    _ => None,
                };
                title == case
            });
            let outcome = &checked.outcomes[section.unwrap()];
            let solved = outcome.solved().unwrap_or_else(|| panic!("{name} {case:?}"));
            let is_exact = entry["exact"].as_bool().unwrap();
            let number =
                |value: &serde_json::Value| -> f64 { value.as_str().unwrap().parse().unwrap() };
            // Elsewhere the published formulas for water differ by 10⁻⁴.
            let within = if is_exact { 1e-9 } else { 1e-4 };
            let found = outcome.problem.found.clone().unwrap_or_default();
            let doses = entry["doses"].as_array().unwrap();
            assert_eq!(found.len(), doses.len(), "{name} {case:?}");
            for (found, dose) in found.iter().zip(doses) {
                let off = found / number(dose) - 1.0;
                assert!(off.abs() <= within, "{name} {case:?}: {found} for {dose}");
                *(if is_exact { &mut exact } else { &mut near }) += 1;
            }
            let off = solved.ph() - number(&entry["ph"]);
            assert!(off.abs() <= within, "{name} {case:?}: pH {}", solved.ph());
        }
    }
    assert!(exact >= 7 && near >= 4, "{exact} exact and {near} near doses were compared");
}

/// The file with each found amount written into it meets what was to be held.
#[test]
fn a_dose_put_in_gives_what_was_asked() {
    let texts = [
        // Two stocks, one of them found, and a case that asks for something else.
        "use aqueous\ncomponent NH3, Na+, Cl-, CO3^2-\nadd NH4Cl 10 mmol/L\nadd CO2 1 mmol/L\n\
         add 1 mL/L of 10 mol/L HCl\nhold pH = 10.5 by dose of 30 % NaOH\n",
        "use aqueous\ncomponent NH3, Na+, Cl-, CO3^2-\nadd NH4Cl 10 mmol/L\n\
         hold pH = 8 by NaOH\nhold alkalinity = 4 meq/L by CO2\n",
        "use aqueous\ncomponent NH3, Cl-\nadd NH3 10 mmol/kg\n\
         hold fraction NH3 = 20 % by dose of 20 % HCl\n",
        "use aqueous\ncomponent CO3^2-, Na+, Cl-\nadd NaHCO3 5 mmol/L\n\
         hold CO2(g) = 2000 µatm by HCl\n",
        "use aqueous\ncomponent PO4^3-, Na+\nadd NaH2PO4 5 mmol/L\n\
         hold buffer capacity = 2 mmol/L by NaOH\n",
        "component Na+, Cl-\nhold ionic strength = 0.1 mol/L by NaCl\n",
        "use aqueous\ncomponent CO3^2-, Na+\ntotal Na+ = 3 mmol/L\nhold pH = 7.4\n\
         hold alkalinity = 2.9 meq/L by total CO3^2-\n",
    ];
    let path = here().join("tests/problems/doses/made.lyate");
    for text in texts {
        let first = checked(text, &path);
        let problem = &first.outcomes[0].problem;
        let found = problem.found.as_ref().unwrap_or_else(|| panic!("not found: {text}"));
        let mut lines: Vec<String> =
            text.lines().filter(|line| !line.contains(" by ")).map(str::to_owned).collect();
        let per = if text.contains("mol/kg") { "kg" } else { "L" };
        for (target, amount) in problem.targets.iter().zip(found) {
            lines.push(match target.unknown {
                Unknown::Total(j) => {
                    format!(
                        "total {} = {amount:e} mol/{per}",
                        problem.scope.components[j].formula.name
                    )
                }
                Unknown::Reagent(index) => {
                    let reagent = &problem.reagents[index];
                    match &reagent.stock {
                        Some(stock) => format!("add {amount:e} mol/{per} of {}", stock.words),
                        None => format!("add {} {amount:e} mol/{per}", reagent.formula.name),
                    }
                }
            });
        }
        let second = checked(&(lines.join("\n") + "\n"), &path);
        let again = &second.outcomes[0];
        let solved = again.solved().unwrap_or_else(|| panic!("not solved: {lines:?}"));
        for target in &problem.targets {
            let value = solved.value(&again.problem, target.sought).unwrap();
            let off = (value - target.wanted).abs() / target.wanted.abs().max(1.0);
            assert!(off < 1e-10, "{}: {value} for {} in {lines:?}", target.words, target.wanted);
        }
    }
}
