//! Input that is no problem file, or a strange one: one clear finding, the right exit
//! code, and no long wait.

mod command_support;

use std::io::Read;
use std::process::{Output, Stdio};

use command_support::{RINSE, code, command, folder, run_within, stderr, stdout};
use serde_json::Value;

/// Seconds that nothing here may take, with a wide margin for a slow machine.
const LIMIT: u64 = 30;

fn check(text: &[u8]) -> (Value, Output) {
    let folder = folder(&[]);
    std::fs::write(folder.path().join("input.lyate"), text).unwrap();
    let output = run_within(folder.path(), &["check", "--output", "json"], LIMIT);
    assert_eq!(stderr(&output), "");
    let report = serde_json::from_slice(&output.stdout).unwrap();
    (report, output)
}

/// The same, and that the other commands and the text form end well on it too.
fn check_all(text: &[u8]) -> (Value, Output) {
    let (report, output) = check(text);
    let folder = folder(&[]);
    std::fs::write(folder.path().join("input.lyate"), text).unwrap();
    for other in ["solve", "derive"] {
        let output = run_within(folder.path(), &[other, "input.lyate"], LIMIT);
        assert!(code(&output) <= 2 && !stderr(&output).contains("panicked"), "{other}");
    }
    let text = run_within(folder.path(), &["check"], LIMIT);
    assert_eq!(code(&text), code(&output), "whatever the form");
    (report, output)
}

fn rules(report: &Value) -> Vec<&str> {
    let findings = report["findings"].as_array().unwrap();
    findings.iter().map(|finding| finding["rule"].as_str().unwrap()).collect()
}

#[test]
fn an_empty_file_is_nothing_to_complain_of() {
    for text in ["", "\n\n", "# nothing but words\n", "\u{feff}"] {
        let (report, output) = check_all(text.as_bytes());
        assert_eq!(rules(&report), [""; 0], "{text:?}");
        assert_eq!(code(&output), 0);
    }
}

#[test]
fn a_megabyte_of_one_line() {
    for piece in ["x", "µ", "(", "1 ", "add NH3 ", "[H+] + "] {
        let line = piece.repeat((1 << 20) / piece.len());
        let (report, output) = check_all(line.as_bytes());
        assert_eq!(code(&output), 1, "{piece:?}");
        assert_eq!(rules(&report).len(), 1, "{piece:?}: {:?}", rules(&report));
        let (report, output) = check(format!("balance charge {line}").as_bytes());
        assert_eq!(code(&output), 1, "{piece:?}");
        assert!(!rules(&report).is_empty(), "{piece:?}");
    }
}

#[test]
fn a_hundred_thousand_parentheses() {
    let deep = 100_000;
    for text in [
        format!("component {}Ca{}", "(".repeat(deep), ")".repeat(deep)),
        format!("component {}", "(".repeat(deep)),
        format!(
            "reaction NH4+ <=> NH3 + H+, log K(T) = {}T{}, source \"x\"",
            "(".repeat(deep),
            ")".repeat(deep)
        ),
        format!("reaction NH4+ <=> NH3 + H+, log K(T) = {}T, source \"x\"", "-".repeat(deep)),
    ] {
        let (report, output) = check_all(text.as_bytes());
        assert_eq!(code(&output), 1);
        let errors: Vec<&str> = report["findings"]
            .as_array()
            .unwrap()
            .iter()
            .filter(|finding| finding["severity"] == "error")
            .map(|finding| finding["rule"].as_str().unwrap())
            .collect();
        assert_eq!(errors.len(), 1, "{} … : {errors:?}", &text[..60]);
    }
}

#[test]
fn numbers_that_are_none() {
    for number in ["1e999", "-1e999", "NaN", "inf", "1e-99999999999999999999", "0x10", "1.2.3"] {
        let text = RINSE.replace("2.0 mmol/L", &format!("{number} mmol/L"));
        let (report, output) = check(text.as_bytes());
        assert_eq!(code(&output), 1, "{number}");
        let on_line: Vec<&Value> = report["findings"]
            .as_array()
            .unwrap()
            .iter()
            .filter(|finding| finding["line"] == 10 && finding["severity"] == "error")
            .collect();
        assert_eq!(on_line.len(), 1, "{number}: {report:#}");
    }
}

#[test]
fn a_file_that_is_not_text() {
    let (report, output) = check(b"component NH3\n# caf\xe9\n");
    assert_eq!(rules(&report), ["file-not-text"]);
    assert_eq!(code(&output), 1);
    assert_eq!(
        report["findings"][0]["message"],
        "the file is not UTF-8 text: it breaks at line 2, column 6"
    );
    let (report, _) = check(&[0xff, 0xfe, 0x00, 0x41]);
    assert_eq!(rules(&report), ["file-not-text"]);
}

/// What cannot be read does not keep the other files from being checked.
#[test]
fn a_folder_with_strange_neighbours() {
    let folder = folder(&[("rinse.lyate", RINSE), ("folder.lyate/inner.lyate", RINSE)]);
    std::fs::write(folder.path().join("bytes.lyate"), [0xc3, 0x28]).unwrap();
    let output = run_within(folder.path(), &["check"], LIMIT);
    assert_eq!(code(&output), 1);
    assert!(stdout(&output).contains("3 files, 4 problems solved"), "{}", stdout(&output));
    assert!(stdout(&output).contains("error[file-not-text]"), "{}", stdout(&output));

    #[cfg(unix)]
    {
        use std::os::unix::fs::symlink;
        symlink("circle.lyate", folder.path().join("circle.lyate")).unwrap();
        symlink(".", folder.path().join("again")).unwrap();
        symlink("gone", folder.path().join("vanished.lyate")).unwrap();
        let output = run_within(folder.path(), &["check", "--output", "json"], LIMIT);
        assert_eq!(code(&output), 2, "files that cannot be read");
        let report: Value = serde_json::from_slice(&output.stdout).unwrap();
        assert_eq!(report["files"], 5, "a link to a folder is not followed");
        let missing: Vec<(&str, &str)> = report["findings"]
            .as_array()
            .unwrap()
            .iter()
            .filter(|finding| finding["rule"] == "file-missing")
            .map(|finding| {
                (finding["file"].as_str().unwrap(), finding["message"].as_str().unwrap())
            })
            .collect();
        assert_eq!(
            missing,
            [
                ("circle.lyate", "the file cannot be read: too many levels of symbolic links"),
                ("vanished.lyate", "the file cannot be read: there is no such file"),
            ]
        );
        let output = run_within(folder.path(), &["check", "circle.lyate"], LIMIT);
        assert_eq!(code(&output), 2);
        assert_eq!(stderr(&output), "lyate: circle.lyate: too many levels of symbolic links\n");
    }
}

#[test]
fn a_folder_has_no_answer() {
    let folder = folder(&[("tanks/rinse.lyate", RINSE)]);
    for command in ["solve", "derive"] {
        let output = run_within(folder.path(), &[command, "tanks"], LIMIT);
        assert_eq!(code(&output), 2);
        assert_eq!(stderr(&output), "lyate: tanks: the file cannot be read: it is a folder\n");
        let output = run_within(folder.path(), &[command, "gone.lyate"], LIMIT);
        assert_eq!(code(&output), 2);
        assert_eq!(
            stderr(&output),
            "lyate: gone.lyate: the file cannot be read: there is no such file\n"
        );
    }
}

/// `lyate check | head -1`: the reader goes away in the middle.
#[test]
fn a_reader_that_goes_away() {
    let folder = folder(&[]);
    let broken = "colour blue\n".repeat(20_000);
    std::fs::write(folder.path().join("input.lyate"), broken).unwrap();
    let mut child = command(folder.path(), &["check"])
        .stdout(Stdio::piped())
        .stderr(Stdio::piped())
        .spawn()
        .unwrap();
    let mut first = [0; 64];
    child.stdout.take().unwrap().read_exact(&mut first).unwrap();
    // Taken and dropped: the pipe is closed from here on.
    let output = child.wait_with_output().unwrap();
    assert_eq!(String::from_utf8_lossy(&output.stderr), "");
    assert_eq!(output.status.code(), Some(1));
}

#[test]
fn a_place_far_along_a_line_is_told_by_its_real_column() {
    let text = format!("component Na+\ntotal{}Na+ = 1 mmolL\n", " ".repeat(700));
    let folder = folder(&[]);
    std::fs::write(folder.path().join("input.lyate"), text).unwrap();
    let output = run_within(folder.path(), &["check"], LIMIT);
    let column = "total".len() + 700 + "Na+ = 1 ".len() + 1;
    let text = stdout(&output);
    assert!(text.contains(&format!("input.lyate:2:{column}\n")), "{text}");
}
