//! Fixes as the editor's code actions: one by one, and all that are safe at once.

use std::collections::HashMap;
use std::ops::Range;

use tower_lsp::lsp_types::*;

use super::convert::Positions;
use super::diagnostics::diagnostic;
use super::generation::Checked;
use super::pictures;
use super::settings::{DRAW_ACTION, FIX_ALL, Settings};
use crate::rules::finding::{Fix, LocatedFinding};

/// What may be done in a range.
pub fn actions(
    checked: &Checked,
    params: &CodeActionParams,
    settings: &Settings,
) -> Vec<CodeActionOrCommand> {
    let positions = checked.positions();
    let range = positions.bytes(params.range);
    let findings = checked.view.findings();
    let mut actions = Vec::new();
    if wanted(params, &CodeActionKind::QUICKFIX) {
        for finding in findings {
            let preferred = finding.fixes.iter().position(|fix| fix.safe);
            for (index, fix) in finding.fixes.iter().enumerate() {
                if touches(&finding.at, &range)
                    || fix.edits.iter().any(|(at, _)| touches(at, &range))
                {
                    actions.push(CodeAction {
                        title: fix.title.clone(),
                        kind: Some(CodeActionKind::QUICKFIX),
                        diagnostics: Some(vec![diagnostic(
                            finding,
                            &checked.uri,
                            &positions,
                            settings,
                        )]),
                        edit: Some(edit(checked, &positions, fix.edits.iter(), settings)),
                        is_preferred: (preferred == Some(index)).then_some(true),
                        ..Default::default()
                    });
                }
            }
        }
    }
    if wanted(params, &FIX_ALL) {
        let fixes = safe_fixes(findings);
        if !fixes.is_empty() {
            let edits = fixes.iter().flat_map(|fix| &fix.edits);
            actions.push(CodeAction {
                title: "Apply all safe fixes".into(),
                kind: Some(FIX_ALL),
                edit: Some(edit(checked, &positions, edits, settings)),
                ..Default::default()
            });
        }
    }
    // A client that shows no files would draw for nobody.
    if settings.show_document && wanted(params, &DRAW_ACTION) {
        actions.extend(checked.view.pictures(range).into_iter().map(|offer| CodeAction {
            title: offer.title.clone(),
            kind: Some(DRAW_ACTION),
            command: Some(pictures::command(offer, &checked.uri)),
            ..Default::default()
        }));
    }
    actions.into_iter().map(CodeActionOrCommand::CodeAction).collect()
}

/// Whether the client asked for this kind, a wider one, or for no kind in particular.
fn wanted(params: &CodeActionParams, kind: &CodeActionKind) -> bool {
    params.context.only.as_ref().is_none_or(|only| {
        only.iter().any(|wider| {
            let rest = kind.as_str().strip_prefix(wider.as_str());
            rest.is_some_and(|rest| {
                rest.is_empty() || rest.starts_with('.') || wider.as_str().is_empty()
            })
        })
    })
}

fn touches(one: &Range<usize>, other: &Range<usize>) -> bool {
    one.start <= other.end && other.start <= one.end
}

/// The safe fixes that can be applied together: one of each finding, and each only
/// where it does not meet an earlier one. The rest is found again afterwards.
fn safe_fixes(findings: &[LocatedFinding]) -> Vec<&Fix<Range<usize>>> {
    let mut chosen: Vec<&Fix<Range<usize>>> = Vec::new();
    let mut taken: Vec<&Range<usize>> = Vec::new();
    for finding in findings {
        let Some(fix) = finding.fixes.iter().find(|fix| fix.safe) else { continue };
        // The same fix of another finding, as where each case repeats it.
        if chosen.iter().any(|other| other.edits == fix.edits) {
            continue;
        }
        if fix.edits.iter().all(|(at, _)| taken.iter().all(|other| !touches(at, other))) {
            taken.extend(fix.edits.iter().map(|(at, _)| at));
            chosen.push(fix);
        }
    }
    chosen
}

fn edit<'a>(
    checked: &Checked,
    positions: &Positions<'_>,
    edits: impl Iterator<Item = &'a (Range<usize>, String)>,
    settings: &Settings,
) -> WorkspaceEdit {
    let edits =
        edits.map(|(at, text)| TextEdit { range: positions.range(at), new_text: text.clone() });
    if settings.document_changes {
        let document = TextDocumentEdit {
            text_document: OptionalVersionedTextDocumentIdentifier {
                uri: checked.uri.clone(),
                version: Some(checked.version),
            },
            edits: edits.map(OneOf::Left).collect(),
        };
        WorkspaceEdit {
            document_changes: Some(DocumentChanges::Edits(vec![document])),
            ..Default::default()
        }
    } else {
        let changes = HashMap::from([(checked.uri.clone(), edits.collect())]);
        WorkspaceEdit { changes: Some(changes), ..Default::default() }
    }
}
