//! The words shown inside the text: pH, dominant terms, values.

use tower_lsp::lsp_types::*;

use super::generation::Checked;
use super::settings::Settings;

/// The hints of the range that the editor shows.
pub fn hints(checked: &Checked, range: Range, settings: &Settings) -> Vec<InlayHint> {
    let positions = checked.positions();
    let hints = checked.view.hints(positions.bytes(range)).into_iter();
    hints
        .filter(|hint| !hint.text.is_empty())
        .map(|hint| InlayHint {
            position: positions.position(hint.offset),
            label: InlayHintLabel::String(hint.text),
            kind: None,
            text_edits: None,
            tooltip: hint
                .tooltip
                .map(|words| InlayHintTooltip::MarkupContent(settings.markup(words))),
            padding_left: Some(true),
            padding_right: None,
            data: None,
        })
        .collect()
}
