//! Doses in the editor: the hint behind `hold … by`, and what the cursor is told.

use std::sync::atomic::AtomicBool;

use lyate::problem::files::Disk;
use lyate::problem::import::Imports;
use lyate::report::editor::{hints, hover};
use lyate::rules::check::{Checked, Surroundings, check};
use lyate::text::tree::Document;

const TEXT: &str = "\
use aqueous
component NH3, Na+, Cl-
add NH4Cl 10 mmol/L
hold pH = 10.5 by dose of 30 % NaOH # from the drum

case \"by total\"
    hold pH = 10.5 by total Na+
";

fn checked(text: &str, previous: Option<&Checked>) -> Checked {
    let around = Surroundings {
        path: None,
        roots: &[],
        files: &Disk,
        imports: &Imports::default(),
        cancel: &AtomicBool::new(false),
    };
    check(Document::parse(text.to_owned()), &around, previous).unwrap()
}

#[test]
fn the_dose_stands_behind_its_target() {
    let checked = checked(TEXT, None);
    let behind = |words: &str| {
        let offset = TEXT.find(words).unwrap() + words.len();
        let all = hints(&checked, &(0..TEXT.len()));
        let hint = all.into_iter().find(|hint| hint.offset == offset);
        hint.unwrap_or_else(|| panic!("no hint behind {words}"))
    };
    let hint = behind("by dose of 30 % NaOH");
    assert_eq!(hint.text, "9.77 mmol/L NaOH, 0.981 mL/L of 30 % NaOH");
    let tooltip = hint.tooltip.unwrap();
    assert!(tooltip.contains("for each litre of the water treated"), "{tooltip}");
    assert_eq!(behind("by total Na+").text, "9.77 mmol/L total Na+");
}

#[test]
fn hovering_over_the_reagent_tells_what_it_is_for() {
    let checked = checked(TEXT, None);
    let hover = hover(&checked, TEXT.find("NaOH").unwrap() + 1).unwrap();
    let lines: Vec<&str> = hover.markdown.split("\n\n").collect();
    assert_eq!(lines[1], "put in: 9.77 mmol/L, 0.981 mL/L of 30 % NaOH");
    assert!(lines[2].starts_with("found for pH 10.500; try it"), "{lines:?}");
}

/// A target is edited, and found from the answer before.
#[test]
fn an_edited_target_gives_the_dose_of_a_fresh_look() {
    let mut previous = checked(TEXT, None);
    for ph in ["10.6", "9.0", "5.9", "12.0", "4.0", "10.5"] {
        let text = TEXT.replace("pH = 10.5", &format!("pH = {ph}"));
        let next = checked(&text, Some(&previous));
        let fresh = checked(&text, None);
        for (next, fresh) in next.outcomes.iter().zip(&fresh.outcomes) {
            match (&next.problem.found, &fresh.problem.found) {
                (Some(next), Some(fresh)) => {
                    assert!((next[0] / fresh[0] - 1.0).abs() < 1e-11, "{ph}: {next:?} {fresh:?}");
                }
                (None, None) => assert_eq!(ph, "4.0"),
                other => panic!("{ph}: {other:?}"),
            }
        }
        previous = next;
    }
}
