//! `lyate check`: what it says, in each form, and how it ends.

mod command_support;

use command_support::{FAULTY, RINSE, code, command, folder, run, session, stderr, stdout};
use serde_json::Value;

#[test]
fn a_sound_file_is_one_line() {
    insta::assert_snapshot!(session(&[("rinse.lyate", RINSE)], &["check"]));
}

#[test]
fn findings_stand_under_their_characters() {
    insta::assert_snapshot!(session(
        &[("condensate.lyate", FAULTY)],
        &["check", "condensate.lyate"]
    ));
}

#[test]
fn findings_as_json() {
    let files = [("condensate.lyate", FAULTY), ("rinse.lyate", RINSE)];
    insta::assert_snapshot!(session(&files, &["check", "--output", "json"]));
}

#[test]
fn findings_as_sarif() {
    let files = [("a b/condensate.lyate", FAULTY)];
    insta::assert_snapshot!(session(&files, &["check", "--output", "sarif"]));
}

#[test]
fn findings_as_junit() {
    let files = [("condensate.lyate", FAULTY), ("rinse.lyate", RINSE)];
    insta::assert_snapshot!(session(&files, &["check", "--output", "junit"]));
}

#[test]
fn a_missed_expectation_is_a_failure() {
    let text = RINSE.replace("[NH3] < 20 mg/L as N", "[NH3] < 2 mg/L as N");
    insta::assert_snapshot!(session(&[("rinse.lyate", &text)], &["check"]));
    let arguments = ["check", "--output", "junit"];
    insta::assert_snapshot!(session(&[("rinse.lyate", &text)], &arguments));
}

/// Exit codes by the mildest finding asked about.
#[test]
fn fail_on_decides_the_exit_code() {
    let note = RINSE.to_owned() + "reaction HSO4- <=> SO4^2- + H+, pKa = 1.98\n";
    let folder = folder(&[("note.lyate", &note), ("sound.lyate", RINSE), ("bad.lyate", FAULTY)]);
    let ends = |arguments: &[&str]| code(&run(folder.path(), arguments));
    assert_eq!(ends(&["check", "sound.lyate", "--fail-on", "note"]), 0);
    assert_eq!(ends(&["check", "note.lyate"]), 0);
    assert_eq!(ends(&["check", "note.lyate", "--fail-on", "warning"]), 0);
    assert_eq!(ends(&["check", "note.lyate", "--fail-on", "note"]), 1);
    assert_eq!(ends(&["check", "bad.lyate"]), 1);
    assert_eq!(ends(&["check"]), 1);
    assert_eq!(ends(&["check", "sound.lyate", "--fail-on", "sometimes"]), 2);
}

/// A caution is shown, and fails a check only where somebody asks for that.
#[test]
fn cautions_fail_no_check_unasked() {
    let text = "component Na+\nactivity ideal\nadd NaOH 0.6 mol/L\n";
    let folder = folder(&[("boil-out.lyate", text)]);
    let output = run(folder.path(), &["check"]);
    assert_eq!(code(&output), 0);
    insta::assert_snapshot!(stdout(&output));
    let ends = |fail_on: &str| code(&run(folder.path(), &["check", "--fail-on", fail_on]));
    assert_eq!([ends("error"), ends("warning"), ends("note")], [0, 0, 0]);
    assert_eq!([ends("caution"), ends("warning,caution")], [1, 1]);
    let form = |form: &str| stdout(&run(folder.path(), &["check", "--output", form]));
    assert!(form("json").contains("\"severity\": \"caution\""), "{}", form("json"));
    assert!(form("sarif").contains("\"level\": \"note\""), "{}", form("sarif"));
    assert!(!form("junit").contains("<failure"), "{}", form("junit"));
}

#[test]
fn a_path_that_is_not_there_is_a_matter_of_usage() {
    let folder = folder(&[("rinse.lyate", RINSE)]);
    let output = run(folder.path(), &["check", "rinse.lyate", "gone.lyate", "gone too"]);
    assert_eq!(code(&output), 2);
    assert_eq!(stdout(&output), "");
    assert_eq!(
        stderr(&output),
        "lyate: gone.lyate: there is no such file or folder\n\
         lyate: gone too: there is no such file or folder\n"
    );
}

#[test]
fn imports_stay_below_the_root() {
    let user = "use \"../shared.lyate\"\nuse aqueous\ncomponent NH3\ntotal NH3 = 1 mmol/L\n";
    let folder = folder(&[("shared.lyate", "group Hum\n"), ("site/tank.lyate", user)]);
    let rules = |arguments: &[&str]| -> Vec<String> {
        let output = run(folder.path(), arguments);
        let report: Value = serde_json::from_slice(&output.stdout).unwrap();
        let findings = report["findings"].as_array().unwrap().iter();
        findings.map(|finding| finding["rule"].as_str().unwrap().to_owned()).collect()
    };
    let tank = ["check", "site/tank.lyate", "--output", "json"];
    assert_eq!(rules(&[&tank[..], &["--root", "."]].concat()), [""; 0]);
    assert_eq!(rules(&[&tank[..], &["--root", "site"]].concat()), ["import-outside-root"]);
    for command in [&["check"][..], &["solve", "site/tank.lyate"], &["derive", "site/tank.lyate"]] {
        let output = run(folder.path(), &[command, &["--root", "gone"]].concat());
        assert_eq!(code(&output), 2);
        assert_eq!(stderr(&output), "lyate: --root gone: there is no such folder\n");
    }
}

#[test]
fn an_empty_folder_says_so() {
    let folder = folder(&[("notes.txt", "nothing to see")]);
    let output = run(folder.path(), &["check"]);
    assert_eq!(code(&output), 0);
    assert_eq!(stdout(&output), "");
    assert_eq!(stderr(&output), "lyate: there are no .lyate files in .\n");
    let output = run(folder.path(), &["check", "--output", "json"]);
    let report: Value = serde_json::from_slice(&output.stdout).unwrap();
    assert_eq!((&report["files"], &report["findings"]), (&0.into(), &Value::Array(Vec::new())));
}

/// Whatever thread was first, the order is that of the paths; ignored files are left out,
/// and a file that is named itself is taken whatever it is called.
#[test]
fn files_come_in_the_order_of_their_paths() {
    let names: Vec<String> = (10..50).map(|n| format!("line {}/tank {n}.lyate", n % 3)).collect();
    let mut files: Vec<(&str, &str)> = names.iter().map(|name| (name.as_str(), FAULTY)).collect();
    files.push((".ignore", "old\n"));
    files.push(("old/tank.lyate", FAULTY));
    files.push(("tank.txt", FAULTY));
    let folder = folder(&files);
    let found = |arguments: &[&str]| -> Vec<String> {
        let output = run(folder.path(), arguments);
        let report: Value = serde_json::from_slice(&output.stdout).unwrap();
        let findings = report["findings"].as_array().unwrap().clone();
        let mut files: Vec<String> =
            findings.iter().map(|f| f["file"].as_str().unwrap().to_owned()).collect();
        files.dedup();
        files
    };
    let mut sorted = names.clone();
    sorted.sort();
    assert_eq!(found(&["check", "--output", "json"]), sorted);
    assert_eq!(found(&["check", "tank.txt", "--output", "json"]), ["tank.txt"]);
}

/// Columns count characters, not bytes: `µ` and `°` are one each, a letter outside the
/// basic plane too.
#[test]
fn columns_count_characters() {
    let text = "component NH3, Cl-\nproblem \"𝄞 µ°\" oops\n";
    let folder = folder(&[("a.lyate", text)]);
    let output = run(folder.path(), &["check", "--output", "json"]);
    let report: Value = serde_json::from_slice(&output.stdout).unwrap();
    let finding = report["findings"]
        .as_array()
        .unwrap()
        .iter()
        .find(|finding| finding["line"] == 2)
        .unwrap_or_else(|| panic!("{report:#}"));
    assert_eq!(finding["column"], 16, "{finding:#}");
}

#[test]
fn colours_only_where_they_are_wanted() {
    let folder = folder(&[("condensate.lyate", FAULTY)]);
    let output = run(folder.path(), &["check"]);
    assert!(!stdout(&output).contains('\u{1b}'), "none into a pipe");
    let output = command(folder.path(), &["check"]).env("NO_COLOR", "1").output().unwrap();
    assert!(!stdout(&output).contains('\u{1b}'));
}

/// Findings of one rule at one place in several cases are told together.
#[test]
fn cases_share_a_finding() {
    let mut text = String::from(
        "# Water analyses with pH measured. Invented figures.\n\
         component Na+, Cl-\ntotal Na+ = 5 mmol/L\ntotal Cl- = 2 mmol/L\nhold pH = 7.0\n",
    );
    for n in 1..=6 {
        text += &format!("\ncase \"sample {n}\"\n    total Cl- = {}.2 mmol/L\n", n % 3);
    }
    insta::assert_snapshot!(session(&[("samples.lyate", &text)], &["check"]));
}

#[test]
fn the_help_says_what_a_user_needs() {
    insta::assert_snapshot!(session(&[], &["--help"]));
    insta::assert_snapshot!(session(&[], &["check", "--help"]));
}
