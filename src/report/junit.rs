//! A check as JUnit's XML: one test suite per file, one test case per problem in it.

use std::cmp::Reverse;

use quick_junit::{NonSuccessKind, Report, SerializeError, TestCase, TestCaseStatus, TestSuite};

use super::source::{FileReport, Reading};
use super::style::Style;
use super::terminal;
use crate::rules::finding::{Failing, LocatedFinding};
use crate::rules::outcome::Outcome;

/// A test case fails when a failing finding lies in it: an expectation that is not met is
/// one. Findings of no case belong to the base.
///
/// # Errors
/// Those of the writer of XML; none are known for this data.
pub fn report(files: &[FileReport], fail_on: Failing) -> Result<String, SerializeError> {
    let mut report = Report::new("lyate check");
    for file in files {
        report.add_test_suite(suite(file, fail_on));
    }
    report.to_string()
}

fn suite(file: &FileReport, fail_on: Failing) -> TestSuite {
    let name = file.source.name.as_str();
    let mut suite = TestSuite::new(name);
    let problems = file.problems();
    let base = problems.iter().find(|stated| stated.section == 0);
    let findings = |case: Option<&str>| -> Vec<&LocatedFinding> {
        file.findings.iter().filter(|f| f.case.as_deref() == case).collect()
    };
    let mut add = |title: &str, outcome: Option<&Outcome>, findings: &[&LocatedFinding]| {
        let mut case = TestCase::new(title, status(file, outcome, findings, fail_on));
        case.set_classname(name);
        suite.add_test_case(case);
    };
    add("base", base.map(|stated| stated.outcome), &findings(None));
    for stated in problems.iter().filter(|stated| stated.section > 0) {
        match stated.case {
            Some(case) => add(case, Some(stated.outcome), &findings(Some(case))),
            // What is wrong with a case that has no title is told with the base.
            None => add(&format!("case {}", stated.section), Some(stated.outcome), &[]),
        }
    }
    suite
}

/// `outcome` is none where nothing was to be solved.
fn status(
    file: &FileReport,
    outcome: Option<&Outcome>,
    findings: &[&LocatedFinding],
    fail_on: Failing,
) -> TestCaseStatus {
    let failing: Vec<_> = findings.iter().filter(|f| fail_on.includes(f.severity)).collect();
    let Some(worst) = failing.iter().min_by_key(|f| Reverse(f.severity)) else {
        return match outcome {
            None => TestCaseStatus::skipped(),
            Some(outcome) if outcome.solved().is_some() => TestCaseStatus::success(),
            Some(_) => {
                let mut status = TestCaseStatus::non_success(NonSuccessKind::Failure);
                status.set_message("the problem could not be solved");
                status
            }
        };
    };
    let kind = match file.reading {
        Reading::Checked(_) => NonSuccessKind::Failure,
        Reading::NotText | Reading::Missing => NonSuccessKind::Error,
    };
    let mut status = TestCaseStatus::non_success(kind);
    let words: Vec<String> =
        failing.iter().map(|f| terminal::finding(f, &file.source, Style::Plain)).collect();
    status
        .set_message(worst.message.as_str())
        .set_type(worst.rule)
        .set_description(words.join("\n\n"));
    status
}
