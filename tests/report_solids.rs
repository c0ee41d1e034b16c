//! What an editor and the data say of solids: how much forms, how much dissolves, what stays
//! away.

use std::sync::atomic::AtomicBool;

use lyate::problem::files::Disk;
use lyate::problem::import::Imports;
use lyate::report::editor::{hints, hover};
use lyate::rules::check::{Checked, Surroundings, check};
use lyate::text::tree::Document;

/// 10 mmol/L of silver and 4 of chloride: 4 mmol/L of the chloride but for 1.6e-10 / 6e-3.
const SILVER: &str = "\
component Ag+, Cl-, Br-, NO3-
activity ideal
reaction AgCl(s) <=> Ag+ + Cl-, K = 1.6e-10, source \"site table, row 1\"
reaction AgBr(s) <=> Ag+ + Br-, K = 5e-13, source \"site table, row 2\"
total Ag+ = 10 mmol/L
total Cl- = 4 mmol/L
total Br- = 0.00000001 mmol/L
total NO3- = 6 mmol/L
precipitate AgCl(s)
precipitate AgBr(s)

case \"horn silver\"
    total Ag+ = 0 mmol/L
    total Cl- = 0 mmol/L
    total NO3- = 0 mmol/L
    saturate with AgCl(s)
";

fn checked(text: &str) -> Checked {
    let imports = Imports::default();
    let cancel = AtomicBool::new(false);
    let around =
        Surroundings { path: None, roots: &[], files: &Disk, imports: &imports, cancel: &cancel };
    check(Document::parse(text.to_owned()), &around, None).unwrap()
}

#[test]
fn hints_say_what_became_of_each_solid_where_it_is_stated() {
    let checked = checked(SILVER);
    let at = |words: &str| {
        let offset = SILVER.find(words).unwrap() + words.len();
        let all = hints(&checked, &(0..SILVER.len()));
        all.into_iter().find(|hint| hint.offset == offset).map(|hint| hint.text)
    };
    // 143.32 g/mol times 4 mmol/L; SI: log(6e-3 · 1e-11 / 5e-13).
    assert_eq!(at("precipitate AgCl(s)").as_deref(), Some("573 mg/L forms"));
    assert_eq!(at("precipitate AgBr(s)").as_deref(), Some("does not form, SI −0.92"));
    // The root of 1.6e-10 is 12.65 µmol/L, 1.81 mg/L.
    assert_eq!(at("saturate with AgCl(s)").as_deref(), Some("1.81 mg/L dissolves"));
}

#[test]
fn a_hover_tells_a_solid_and_a_component_in_it() {
    let checked = checked(SILVER);
    let over = |words: &str| {
        hover(&checked, SILVER.find(words).unwrap()).map(|hover| hover.markdown).unwrap_or_default()
    };
    let solid = over("AgCl(s)\nprecipitate");
    assert!(solid.contains("saturation index: 0.00"), "{solid}");
    assert!(solid.contains("573 mg/L forms"), "{solid}");
    let component = over("Ag+ = 10");
    assert!(component.contains("total over all its forms: 6.00 mmol/L"), "{component}");
    assert!(component.contains("in solids that formed: 4.00 mmol/L"), "{component}");
}
