//! Each rule against its caret fixtures and against its own page of explanation.

mod rules_support;

use std::collections::BTreeSet;
use std::path::{Path, PathBuf};

use lyate::rules::catalogue::{Rule, find, rules};
use lyate::rules::finding::Severity;
use lyate::rules::outcome::State;
use rules_support::{Fixture, check_text, read};

fn folder(name: &str) -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join(name)
}

fn files_in(folder: &Path, ending: &str) -> Vec<PathBuf> {
    let mut files: Vec<PathBuf> = std::fs::read_dir(folder)
        .expect("a folder of the project")
        .map(|entry| entry.expect("an entry").path())
        .filter(|path| path.extension().is_some_and(|e| e == ending))
        .collect();
    files.sort();
    files
}

fn fixtures() -> Vec<(PathBuf, Fixture)> {
    files_in(&folder("tests/rules"), "txt")
        .into_iter()
        .flat_map(|path| read(&path).into_iter().map(move |fixture| (path.clone(), fixture)))
        .collect()
}

#[test]
fn every_fixture_gives_the_findings_drawn_in_it() {
    let mut report = String::new();
    for (path, fixture) in fixtures() {
        let problems = fixture.problems();
        if !problems.is_empty() {
            let name = path.file_name().unwrap_or_default().to_string_lossy();
            report += &format!("\n\n{name}:{}: {}\n", fixture.line, fixture.title);
            report += &problems.join("\n");
        }
    }
    assert!(report.is_empty(), "{report}");
}

#[test]
fn every_rule_has_a_fixture_where_it_is_found_and_one_where_it_is_not() {
    let fixtures = fixtures();
    let about = |positive: bool| -> BTreeSet<&str> {
        fixtures
            .iter()
            .filter(|(_, fixture)| fixture.is_positive() == positive)
            .map(|(_, fixture)| fixture.about())
            .collect()
    };
    let (positive, negative) = (about(true), about(false));
    let lacking: Vec<_> = rules()
        .filter_map(|rule| {
            let lacks = match (positive.contains(rule.name), negative.contains(rule.name)) {
                (true, true) => return None,
                (true, false) => "one where it is not found",
                (false, true) => "one where it is found",
                (false, false) => "any",
            };
            Some(format!("{} lacks {lacks}", rule.name))
        })
        .collect();
    assert!(lacking.is_empty(), "{lacking:#?}");
    let unknown: Vec<_> = positive.union(&negative).filter(|name| find(name).is_none()).collect();
    assert!(unknown.is_empty(), "fixtures about no rule: {unknown:?}");
}

#[test]
fn every_file_of_a_rule_is_in_the_catalogue_under_its_own_name() {
    let mut seen = 0;
    for family in std::fs::read_dir(folder("src/rules")).expect("the rules") {
        let family = family.expect("an entry").path();
        if !family.is_dir() {
            continue;
        }
        for path in files_in(&family, "rs") {
            let stem = path.file_stem().unwrap_or_default().to_string_lossy().replace('_', "-");
            let source = std::fs::read_to_string(&path).expect("a rule");
            // Helpers of a family declare no rule.
            if stem == "mod" || !source.contains("\nrule!(") {
                continue;
            }
            seen += 1;
            let rule = find(&stem);
            assert!(rule.is_some_and(|rule| rule.source == source), "{}", path.display());
        }
    }
    assert_eq!(seen, rules().count(), "a rule without a file of its own");
}

/// The examples of a page: under `Before:` and under `After:`. An example whose fence names
/// a file is another file beside the others.
struct Examples {
    before: Vec<String>,
    after: Vec<String>,
    files: Vec<(String, String)>,
}

fn examples(rule: &Rule) -> Examples {
    let mut examples = Examples { before: Vec::new(), after: Vec::new(), files: Vec::new() };
    let mut before = true;
    let mut open: Option<(String, String)> = None;
    for line in rule.page().lines() {
        match &mut open {
            Some((name, text)) if line == "```" => {
                let (name, text) = (std::mem::take(name), std::mem::take(text));
                match (name.is_empty(), before) {
                    (false, _) => examples.files.push((name, text)),
                    (true, true) => examples.before.push(text),
                    (true, false) => examples.after.push(text),
                }
                open = None;
            }
            Some((_, text)) => *text += &format!("{line}\n"),
            None => match line.strip_prefix("```lyate") {
                Some(name) => open = Some((name.trim().to_owned(), String::new())),
                None if line.starts_with("Before:") => before = true,
                None if line.starts_with("After:") => before = false,
                None => {}
            },
        }
    }
    assert!(open.is_none(), "{}: an example is not closed", rule.name);
    examples
}

#[test]
fn the_examples_of_every_page_hold() {
    let mut report = Vec::new();
    for rule in rules() {
        let examples = examples(rule);
        if examples.before.is_empty() || examples.after.is_empty() {
            report.push(format!("{}: no example before, or none after", rule.name));
        }
        for text in &examples.before {
            let checked = check_text(text, &examples.files);
            if !checked.findings.iter().any(|finding| finding.rule == rule.name) {
                report.push(format!("{}: not found in\n{text}", rule.name));
            }
        }
        for text in &examples.after {
            let checked = check_text(text, &examples.files);
            if checked.findings.iter().any(|finding| finding.rule == rule.name) {
                report.push(format!("{}: still found in\n{text}", rule.name));
            }
        }
    }
    assert!(report.is_empty(), "{}", report.join("\n\n"));
}

#[test]
fn every_page_opens_with_one_sentence_and_is_of_reading_length() {
    for rule in rules() {
        let summary = rule.summary();
        assert!(summary.ends_with('.') && summary.len() <= 100, "{}: {summary}", rule.name);
        let lines = rule.page().lines().count();
        assert!((10..=60).contains(&lines), "{}: a page of {lines} lines", rule.name);
    }
}

#[test]
fn messages_are_one_plain_sentence_in_lower_case() {
    let mut seen = 0;
    for (_, fixture) in fixtures() {
        for finding in fixture.findings() {
            seen += 1;
            let message = &finding.message;
            // A formula or a symbol may start it; a word may not be a capitalised one.
            let first = message.split_whitespace().next().unwrap_or_default();
            let is_word = first.len() > 2 && first.chars().all(char::is_alphabetic);
            let starts = !is_word || !first.starts_with(char::is_uppercase) || {
                first.chars().skip(1).any(char::is_uppercase)
            };
            let ends = !message.ends_with('.') && !message.contains('\n');
            assert!(starts && ends, "{}: {message}", finding.rule);
        }
    }
    assert!(seen > 0);
}

/// A problem without an answer has an error that says why, and a balance that is not
/// compared has one in its own statement: in every fixture, whole and with one line less.
#[test]
fn nothing_goes_unsolved_or_unread_in_silence() {
    let mut unsolved = 0;
    let mut report = Vec::new();
    for (_, fixture) in fixtures() {
        let lines: Vec<&str> = fixture.text.lines().collect();
        for left_out in 0..=lines.len() {
            let kept = lines.iter().enumerate().filter(|(i, _)| *i != left_out);
            let text: String = kept.map(|(_, line)| format!("{line}\n")).collect();
            let checked = check_text(&text, fixture.files());
            let errors = checked.count(Severity::Error);
            // A base may be left open for its cases to close.
            let open = checked.outcomes.len() > 1
                && checked.outcomes[1..].iter().all(|case| case.solved().is_some());
            for outcome in &checked.outcomes[usize::from(open)..] {
                let silent = match outcome.state {
                    State::Failed(_) | State::OutOfReach(_) | State::NotWellPosed => {
                        unsolved += 1;
                        errors == 0
                    }
                    _ => errors == 0 && outcome.problem.balances.iter().any(|b| !b.complete),
                };
                if silent {
                    report.push(format!("{:?} in\n{text}", outcome.state));
                }
            }
        }
    }
    assert!(unsolved > 100, "only {unsolved} without an answer");
    assert!(report.is_empty(), "{}", report.join("\n\n"));
}

#[test]
fn what_can_be_read_is_a_warning_where_what_cannot_is_an_error() {
    let follows = |pk: &str| {
        format!(
            "component CO3^2-\n\
             reaction HCO3- <=> CO3^2- + H+, pKa = 10.33\n\
             reaction H2CO3* <=> HCO3- + H+, pKa = 6.35\n\
             reaction H2CO3* <=> CO3^2- + 2 H+, pK = {pk}\n"
        )
    };
    let cases = [
        ("ambiguous-charge", "component SO4-2\n".to_owned(), Severity::Error),
        ("ambiguous-charge", "component Ca2+\n".to_owned(), Severity::Warning),
        ("reaction-follows-from-others", follows("16.65"), Severity::Error),
        ("reaction-follows-from-others", follows("16.67"), Severity::Warning),
    ];
    for (rule, text, severity) in cases {
        let checked = check_text(&text, &[]);
        let found: Vec<_> =
            checked.findings.iter().filter(|f| f.rule == rule).map(|f| f.severity).collect();
        assert_eq!(found, [severity], "{text}");
    }
}
