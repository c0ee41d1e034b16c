//! What is known of the thing under the cursor.

use tower_lsp::lsp_types::*;

use super::analysis::Analyser;
use super::generation::Checked;
use super::settings::Settings;

/// The view's own words for the place; where it has none, the pages of the rules that
/// found something there.
pub fn hover(
    checked: &Checked,
    position: Position,
    analyser: &dyn Analyser,
    settings: &Settings,
) -> Option<Hover> {
    let positions = checked.positions();
    let offset = positions.offset(position);
    if let Some(hover) = checked.view.hover(offset) {
        let range = Some(positions.range(&hover.range));
        return Some(Hover {
            contents: HoverContents::Markup(settings.markup(hover.markdown)),
            range,
        });
    }
    let mut rules = Vec::new();
    for finding in checked.view.findings() {
        if finding.at.start <= offset && offset <= finding.at.end && !rules.contains(&finding.rule)
        {
            rules.push(finding.rule);
        }
    }
    let pages: Vec<_> = rules.into_iter().filter_map(|rule| analyser.explain(rule)).collect();
    (!pages.is_empty()).then(|| Hover {
        contents: HoverContents::Markup(settings.markup(pages.join("\n\n---\n\n"))),
        range: None,
    })
}
