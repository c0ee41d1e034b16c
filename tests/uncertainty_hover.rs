//! What an editor shows of uncertainty: the top of a budget where an `expect` is pointed at,
//! and a limit that is not sure beside it.

mod uncertainty_support;

use lyate::report::editor::{hints, hover};
use uncertainty_support::checked;

const TEXT: &str = "use aqueous\ncomponent NH3, Na+, Cl-\nactivity ideal\n\
     add NH4Cl 10 ± 0.1 mmol/L\nadd NaOH 4 ± 0.5 mmol/L\n\
     expect [NH3] < 4.5 mmol/L, confidence 95 %\nexpect pH < 10\n";

fn at(text: &str, words: &str) -> usize {
    text.find(words).unwrap() + 1
}

#[test]
fn a_hover_on_an_expectation_shows_the_top_of_its_budget() {
    let shown = hover(&checked(TEXT), at(TEXT, "4.5 mmol/L")).unwrap();
    assert_eq!(&TEXT[shown.range], "expect [NH3] < 4.5 mmol/L, confidence 95 %");
    let lines: Vec<&str> = shown.markdown.split("\n\n").collect();
    assert_eq!(
        lines,
        [
            "**[NH3]** · 3.99 ± 0.50 mmol/L",
            "met with a probability of 84.8 %",
            "100 % from add NaOH",
            "<0.1 % from add NH4Cl",
        ]
    );
    // On the species itself it is the species that is meant.
    let species = hover(&checked(TEXT), at(TEXT, "NH3] <")).unwrap();
    assert!(species.markdown.starts_with("**NH3**"));
}

#[test]
fn nothing_is_shown_where_nothing_is_uncertain() {
    let text = TEXT.replace("± 0.1 ", "").replace("± 0.5 ", "").replace(", confidence 95 %", "");
    assert_eq!(hover(&checked(&text), at(&text, "4.5 mmol/L")), None);
}

#[test]
fn a_hint_says_what_is_not_sure() {
    let found = hints(&checked(TEXT), &(0..TEXT.len()));
    let texts: Vec<&str> = found.iter().map(|hint| hint.text.as_str()).collect();
    assert!(texts.contains(&"is 3.988 mmol/L, not sure"), "{texts:?}");
    assert!(texts.contains(&"is 9.068"), "{texts:?}");
}
