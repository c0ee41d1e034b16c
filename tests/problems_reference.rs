//! The problem library against `tests/reference/problems.py`, which reads and solves every
//! file on its own with mpmath at 40 digits and more: equal to 10⁻⁹ in pH where the
//! problem is ideal and states its own constants, and to what the published formulas for
//! water differ by (10⁻⁴) elsewhere.

use std::path::Path;
use std::sync::atomic::AtomicBool;

use lyate::problem::files::Disk;
use lyate::problem::import::Imports;
use lyate::rules::check::{Surroundings, check};
use lyate::text::tree::{Document, Statement};

#[test]
fn every_answer_is_the_one_found_by_arithmetic_of_many_digits() {
    let here = Path::new(env!("CARGO_MANIFEST_DIR"));
    let stored = std::fs::read_to_string(here.join("tests/reference/problems.json")).unwrap();
    let stored: serde_json::Value = serde_json::from_str(&stored).unwrap();
    let files = stored.as_object().unwrap();
    assert!(files.len() > 60, "the stored answers were not found");
    let (mut exact, mut near) = (0, 0);
    for (name, entries) in files {
        let path = here.join("tests/problems").join(name);
        let text = std::fs::read_to_string(&path).unwrap();
        let imports = Imports::default();
        let around = Surroundings {
            path: Some(&path),
            roots: &[],
            files: &Disk,
            imports: &imports,
            cancel: &AtomicBool::new(false),
        };
        let checked = check(Document::parse(text), &around, None).unwrap();
        for entry in entries.as_array().unwrap() {
            let case = entry["case"].as_str();
            let section = checked
                .document
                .sections
                .iter()
                .position(|section| title(section.statements.first()).as_deref() == case)
                .unwrap_or_else(|| panic!("{name} has no case {case:?}"));
            let outcome = &checked.outcomes[section];
            let solved =
                outcome.solved().unwrap_or_else(|| panic!("{name} {case:?} is not solved"));
            let wanted: f64 = entry["ph"].as_str().unwrap().parse().unwrap();
            let own_water = entry["own_water"].as_bool().unwrap();
            let ideal = entry["activity"] == "ideal";
            let tolerance = if own_water && ideal { 1e-9 } else { 1e-4 };
            let difference = (solved.ph() - wanted).abs();
            assert!(difference <= tolerance, "{name} {case:?}: {} for {wanted}", solved.ph());
            *(if own_water && ideal { &mut exact } else { &mut near }) += 1;
        }
    }
    assert!(exact > 30 && near > 100, "{exact} exact and {near} near answers were compared");
}

/// The title of the case that a section is; none for the base.
fn title(first: Option<&lyate::text::tree::Placed>) -> Option<String> {
    match &first?.parsed.statement {
        Statement::Case { title } => Some(title.value.clone()),
        _ => None,
    }
}
