//! `lyate library`: the list of sets, a set's constants, and the reactions of a species.

mod command_support;

use command_support::{code, folder, run, session, stderr, stdout};
use serde_json::Value;

#[test]
fn the_list_for_people() {
    insta::assert_snapshot!(session(&[], &["library"]));
}

#[test]
fn a_set_for_people() {
    insta::assert_snapshot!(session(&[], &["library", "carbonate"]));
    insta::assert_snapshot!(session(&[], &["library", "chlorine", "--at", "40 °C"]));
}

#[test]
fn the_reactions_of_a_species() {
    insta::assert_snapshot!(session(&[], &["library", "minerals", "CaCO3", "--at", "95 °C"]));
    insta::assert_snapshot!(session(&[], &["library", "chelates", "CaEDTA²⁻", "--at", "40 °C"]));
}

#[test]
fn a_set_for_programs() {
    let arguments = ["library", "sulfide", "--at", "60 °C", "--output", "json"];
    insta::assert_snapshot!(session(&[], &arguments));
    let folder = folder(&[]);
    let list = run(folder.path(), &["library", "--output", "json"]);
    let list: Value = serde_json::from_slice(&list.stdout).unwrap();
    let sets = list["sets"].as_array().unwrap();
    let names = |edition: u64| sets.iter().filter(move |set| set["edition"] == edition).count();
    assert_eq!((names(1), names(2)), (7, 30));
}

#[test]
fn an_edition_is_asked_for_by_its_number() {
    let folder = folder(&[]);
    let one = run(folder.path(), &["library", "aqueous", "--edition", "1"]);
    assert_eq!(code(&one), 0);
    assert!(stdout(&one).starts_with("aqueous, edition 1\n"), "{}", stdout(&one));
    let list = stdout(&run(folder.path(), &["library", "--edition", "1"]));
    assert!(list.starts_with("Built-in sets, edition 1\n") && !list.contains("  minerals "));
    let later = run(folder.path(), &["library", "minerals", "--edition", "1"]);
    assert_eq!(
        (code(&later), stderr(&later).as_str()),
        (2, "lyate: the set minerals has no edition 1; its newest is 2\n")
    );
    let none = run(folder.path(), &["library", "--edition", "9"]);
    assert_eq!(
        (code(&none), stderr(&none).as_str()),
        (2, "lyate: there is no edition 9 of the sets; the newest is 2\n")
    );
}

#[test]
fn what_is_not_there_names_the_nearest() {
    let folder = folder(&[]);
    let said = |arguments: &[&str]| {
        let output = run(folder.path(), arguments);
        assert_eq!(code(&output), 2, "{arguments:?}");
        stderr(&output)
    };
    assert_eq!(
        said(&["library", "mineral"]),
        "lyate: there is no set mineral; did you mean minerals?\n"
    );
    let unknown = said(&["library", "weather"]);
    assert!(unknown.starts_with("lyate: there is no set weather; the sets are aqueous, ammonia,"));
    assert_eq!(
        said(&["library", "carbonate", "HCO3"]),
        "lyate: no reaction of the set carbonate has HCO3; did you mean HCO3-?\n"
    );
    let at = |text: &str| said(&["library", "carbonate", "--at", text]);
    for text in ["40", "40 mol/L", "-300 °C", "warm", "40 °C\nuse aqueous", ""] {
        assert!(at(text).contains("write a temperature with its unit"), "{text}: {}", at(text));
    }
}

/// Whatever is asked for, lines stay within a terminal of 100 columns, but for a reaction
/// that is longer by itself.
#[test]
fn lines_fit_a_terminal() {
    let folder = folder(&[]);
    let list = stdout(&run(folder.path(), &["library"]));
    assert!(list.lines().all(|line| line.chars().count() <= 80), "{list}");
    for set in ["aqueous", "chelates", "hydrolysis", "ion_pairs", "redox", "buffers"] {
        let text = stdout(&run(folder.path(), &["library", set]));
        for line in text.lines() {
            assert!(line.chars().count() <= 100, "{set}: {line}");
            assert_eq!(line.trim_end(), line, "{set}");
        }
    }
}
