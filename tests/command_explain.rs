//! `lyate explain`: pages and the list of rules.

mod command_support;

use command_support::{code, folder, run, session, stderr, stdout};
use lyate::rules::catalogue::rules;
use serde_json::Value;

#[test]
fn a_page_for_people() {
    insta::assert_snapshot!(session(&[], &["explain", "charge-not-conserved"]));
}

#[test]
fn every_rule_has_a_page_and_stands_in_the_list() {
    let folder = folder(&[]);
    let list = stdout(&run(folder.path(), &["explain"]));
    let output = run(folder.path(), &["explain", "--output", "json"]);
    let listed: Value = serde_json::from_slice(&output.stdout).unwrap();
    let listed = listed["rules"].as_array().unwrap();
    assert_eq!(listed.len(), rules().count());
    for (rule, listed) in rules().zip(listed) {
        let line = list.lines().find(|line| line.split_whitespace().next() == Some(rule.name));
        assert!(line.is_some(), "{}", rule.name);
        assert_eq!(listed["name"], rule.name);
        assert_eq!(listed["summary"], rule.summary());
    }
    for line in list.lines() {
        assert!(line.chars().count() <= 100, "{line}");
    }
    let some: Vec<_> = rules().step_by(9).collect();
    for rule in some {
        let page = stdout(&run(folder.path(), &["explain", rule.name]));
        assert!(page.starts_with(rule.name) && page.contains("Before:"), "{page}");
        let output = run(folder.path(), &["explain", rule.name, "--output", "json"]);
        let page: Value = serde_json::from_slice(&output.stdout).unwrap();
        assert_eq!(page["page"], rule.page());
    }
}

#[test]
fn an_unknown_rule_names_the_nearest() {
    let folder = folder(&[]);
    let output = run(folder.path(), &["explain", "charge-not-conserve"]);
    assert_eq!(code(&output), 2);
    assert_eq!(
        stderr(&output),
        "lyate: there is no rule charge-not-conserve; did you mean charge-not-conserved?\n"
    );
    let output = run(folder.path(), &["explain", "weather"]);
    assert_eq!(code(&output), 2);
    assert_eq!(
        stderr(&output),
        "lyate: there is no rule weather; `lyate explain` lists all of them\n"
    );
    // As it stands in a finding.
    let output = run(folder.path(), &["explain", "error[charge-not-conserved]:"]);
    assert_eq!(code(&output), 0);
}
