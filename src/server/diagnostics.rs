//! Findings as the editor's diagnostics, pushed or reported on request.

use serde_json::json;
use tower_lsp::lsp_types::*;

use super::convert::Positions;
use super::settings::{SOURCE, Settings};
use crate::rules::finding::{LocatedFinding, Severity};

/// What was last told to a client that asks, and the name it has there.
pub struct Report {
    pub id: u64,
    pub diagnostics: Vec<Diagnostic>,
}

impl Report {
    /// A report of these; the one before, where it says the same.
    pub fn following(
        previous: Option<std::sync::Arc<Report>>,
        diagnostics: Vec<Diagnostic>,
    ) -> std::sync::Arc<Report> {
        match previous {
            Some(previous) if previous.diagnostics == diagnostics => previous,
            previous => {
                let id = previous.map_or(1, |previous| previous.id + 1);
                std::sync::Arc::new(Report { id, diagnostics })
            }
        }
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
            Severity::Warning => DiagnosticSeverity::WARNING,
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

/// The answer to a client that asks, and may know the last report already.
pub fn answer(report: Option<&Report>, known: Option<&str>) -> DocumentDiagnosticReport {
    let Some(report) = report else { return RelatedFullDocumentDiagnosticReport::default().into() };
    let id = report.id.to_string();
    if known == Some(id.as_str()) {
        return RelatedUnchangedDocumentDiagnosticReport {
            related_documents: None,
            unchanged_document_diagnostic_report: UnchangedDocumentDiagnosticReport {
                result_id: id,
            },
        }
        .into();
    }
    RelatedFullDocumentDiagnosticReport {
        related_documents: None,
        full_document_diagnostic_report: FullDocumentDiagnosticReport {
            result_id: Some(id),
            items: report.diagnostics.clone(),
        },
    }
    .into()
}
