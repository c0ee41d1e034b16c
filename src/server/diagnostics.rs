//! Findings as the editor's diagnostics, pushed or reported on request.

use std::sync::Arc;

use serde::Serialize;
use serde_json::json;
use serde_json::value::{RawValue, to_raw_value};
use tower_lsp::lsp_types::*;

use super::convert::Positions;
use super::settings::{SOURCE, Settings};
use crate::rules::finding::{LocatedFinding, Severity};

/// What is told to a client that asks: the list, written already, and the name it has.
pub struct Report {
    id: u64,
    items: Box<RawValue>,
}

impl Report {
    /// A report of these; the one before, where it says the same. The number is one that
    /// no report had before, so that no client takes one for another.
    pub fn following(
        previous: Option<Arc<Report>>,
        diagnostics: &[Diagnostic],
        number: u64,
    ) -> serde_json::Result<Arc<Report>> {
        let items = to_raw_value(diagnostics)?;
        Ok(match previous {
            Some(previous) if previous.items.get() == items.get() => previous,
            _ => Arc::new(Report { id: number, items }),
        })
    }
}

/// The answer to a client that asks, and may know the last report already.
#[derive(Serialize)]
#[serde(rename_all = "camelCase")]
pub struct Answer {
    kind: &'static str,
    result_id: String,
    #[serde(skip_serializing_if = "Option::is_none")]
    items: Option<Box<RawValue>>,
}

impl Answer {
    /// None where no report was made, as for a client that does not ask.
    pub fn new(report: Option<&Report>, known: Option<&str>) -> Option<Self> {
        let report = report?;
        let result_id = report.id.to_string();
        Some(if known == Some(result_id.as_str()) {
            Self { kind: "unchanged", result_id, items: None }
        } else {
            Self { kind: "full", result_id, items: Some(report.items.clone()) }
        })
    }
}

/// All findings of a document, in the order given.
pub fn diagnostics(
    findings: &[LocatedFinding],
    uri: &Url,
    positions: &Positions<'_>,
    settings: &Settings,
) -> Vec<Diagnostic> {
    findings.iter().map(|finding| diagnostic(finding, uri, positions, settings)).collect()
}

pub fn diagnostic(
    finding: &LocatedFinding,
    uri: &Url,
    positions: &Positions<'_>,
    settings: &Settings,
) -> Diagnostic {
    let mut message = match &finding.case {
        Some(case) => format!("Case \"{case}\": {}", finding.message),
        None => finding.message.clone(),
    };
    if let Some(help) = &finding.help {
        message.push('\n');
        message.push_str(help);
    }
    let related = || {
        let related = finding.related.iter().map(|(at, words)| DiagnosticRelatedInformation {
            location: Location { uri: uri.clone(), range: positions.range(at) },
            message: words.clone(),
        });
        related.collect()
    };
    Diagnostic {
        range: positions.range(&finding.at),
        severity: Some(match finding.severity {
            Severity::Error => DiagnosticSeverity::ERROR,
            // The protocol has no word for it: among what an editor never hides.
            Severity::Warning | Severity::Caution => DiagnosticSeverity::WARNING,
            Severity::Note => DiagnosticSeverity::INFORMATION,
        }),
        code: Some(NumberOrString::String(finding.rule.into())),
        source: Some(SOURCE.into()),
        message,
        related_information: (settings.related_information && !finding.related.is_empty())
            .then(related),
        data: finding.case.as_ref().map(|case| json!({ "case": case })),
        ..Default::default()
    }
}

/// Stands in for all others where the analysis itself failed.
pub fn failure() -> Diagnostic {
    Diagnostic {
        severity: Some(DiagnosticSeverity::ERROR),
        code: Some(NumberOrString::String("internal-error".into())),
        source: Some(SOURCE.into()),
        message: "The checker failed on this text, so nothing in it was checked. This is a defect \
                  of the checker: please report it with the text."
            .into(),
        ..Default::default()
    }
}
