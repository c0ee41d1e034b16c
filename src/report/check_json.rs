//! What `lyate check --output json` writes: stable, versioned by its `schema` field.

use serde::Serialize;

use super::source::{FileReport, Region, Source};
use super::summary::Summary;
use crate::rules::finding::{LocatedFinding, Severity};

#[derive(Serialize)]
struct Report<'a> {
    schema: u32,
    findings: Vec<Finding<'a>>,
    files: usize,
    problems_solved: usize,
    expectations: Expectations,
}

#[derive(Serialize)]
struct Expectations {
    met: usize,
    failed: usize,
}

#[derive(Serialize)]
struct Finding<'a> {
    rule: &'a str,
    severity: &'static str,
    message: &'a str,
    file: &'a str,
    #[serde(flatten)]
    region: Region,
    case: Option<&'a str>,
    fixes: Vec<Fix<'a>>,
}

#[derive(Serialize)]
struct Fix<'a> {
    title: &'a str,
    safe: bool,
    edits: Vec<Edit<'a>>,
}

#[derive(Serialize)]
struct Edit<'a> {
    #[serde(flatten)]
    region: Region,
    text: &'a str,
}

/// The report as indented JSON.
///
/// # Errors
/// Those of the serialiser; none are known for this data.
pub fn report(files: &[FileReport]) -> serde_json::Result<String> {
    let summary = Summary::of(files);
    let findings = files
        .iter()
        .flat_map(|file| file.findings.iter().map(|finding| self::finding(finding, &file.source)));
    serde_json::to_string_pretty(&Report {
        schema: 1,
        findings: findings.collect(),
        files: summary.files,
        problems_solved: summary.solved,
        expectations: Expectations { met: summary.met, failed: summary.expectations - summary.met },
    })
}

fn finding<'a>(finding: &'a LocatedFinding, source: &'a Source) -> Finding<'a> {
    Finding {
        rule: finding.rule,
        severity: severity(finding.severity),
        message: &finding.message,
        file: &source.name,
        region: source.region(&finding.at),
        case: finding.case.as_deref(),
        fixes: finding
            .fixes
            .iter()
            .map(|fix| Fix {
                title: &fix.title,
                safe: fix.safe,
                edits: fix
                    .edits
                    .iter()
                    .map(|(at, text)| Edit { region: source.region(at), text })
                    .collect(),
            })
            .collect(),
    }
}

/// A severity's word in data: `error`, `warning`, `note`, `caution`.
pub fn severity(severity: Severity) -> &'static str {
    match severity {
        Severity::Error => "error",
        Severity::Warning => "warning",
        Severity::Note => "note",
        Severity::Caution => "caution",
    }
}
