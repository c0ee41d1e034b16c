//! Pages of rules for a terminal, and the list of them.

use super::check_json::severity;
use super::style::{Paint, Style};
use super::wrap::wrapped;
use crate::rules::FAMILIES;
use crate::rules::catalogue::{Rule, rules};
use crate::rules::finding::Severity;

/// Lines of a page are wrapped to this.
const WIDTH: usize = 80;
/// Lines of the list are wrapped to this.
const LIST_WIDTH: usize = 100;

/// A rule's page: prose wrapped, examples set in.
pub fn page(rule: &Rule, style: Style) -> String {
    let mut text = String::new();
    let mut paragraph: Vec<&str> = Vec::new();
    let mut in_code = false;
    let page = rule.page();
    for line in page.lines() {
        if line.starts_with("```") {
            text += &wrap(&paragraph);
            paragraph.clear();
            in_code = !in_code;
        } else if in_code {
            text += format!("    {line}").trim_end();
            text.push('\n');
        } else if let Some(title) = line.strip_prefix("# ") {
            let head = style.paint(Paint::Heading, title);
            let kind = style.paint(severity_paint(rule.severity), severity(rule.severity));
            text += &format!("{head} ({kind})\n");
        } else if line.trim().is_empty() || starts_item(line) {
            text += &wrap(&paragraph);
            paragraph.clear();
            if line.trim().is_empty() {
                text.push('\n');
            } else {
                paragraph.push(line);
            }
        } else {
            paragraph.push(line);
        }
    }
    text += &wrap(&paragraph);
    text
}

/// Whether a line starts an entry of a list or a row of a table.
fn starts_item(line: &str) -> bool {
    let line = line.trim_start();
    line.starts_with("- ") || line.starts_with("* ") || line.starts_with('|')
}

fn wrap(lines: &[&str]) -> String {
    let indent = if lines.first().is_some_and(|line| starts_item(line)) { 2 } else { 0 };
    let mut text = wrapped(&lines.join(" "), 0, indent, WIDTH);
    if !text.is_empty() {
        text.push('\n');
    }
    text
}

/// Every rule with its severity and summary, family by family.
pub fn list(style: Style) -> String {
    let widest = rules().map(|rule| rule.name.len()).max().unwrap_or(0);
    // Two before, two between, the longest of error, warning, note and caution.
    let indent = 2 + widest + 2 + 7 + 2;
    let families = FAMILIES.iter().filter(|family| !family.rules.is_empty()).map(|family| {
        let rules = family.rules.iter().map(|rule| {
            let kind = format!("{:7}", severity(rule.severity));
            let kind = style.paint(severity_paint(rule.severity), &kind);
            let summary = wrapped(rule.summary(), indent, indent, LIST_WIDTH);
            format!("  {:widest$}  {kind}  {summary}\n", rule.name)
        });
        let title = style.paint(Paint::Heading, family.title);
        format!("{title}\n{}", rules.collect::<String>())
    });
    families.collect::<Vec<_>>().join("\n")
}

fn severity_paint(severity: Severity) -> Paint {
    match severity {
        Severity::Error => Paint::Bad,
        Severity::Warning | Severity::Caution => Paint::Doubtful,
        Severity::Note => Paint::Quiet,
    }
}

/// A rule, or all of them, as indented JSON.
pub mod json {
    use serde_json::{Value, json};

    use super::super::check_json::severity;
    use crate::rules::FAMILIES;
    use crate::rules::catalogue::Rule;

    fn head(family: &str, rule: &Rule) -> Value {
        json!({
            "name": rule.name,
            "family": family,
            "severity": severity(rule.severity),
            "summary": rule.summary(),
        })
    }

    pub fn page(rule: &Rule) -> String {
        let family = FAMILIES
            .iter()
            .find(|family| family.rules.iter().any(|other| other.name == rule.name))
            .map_or("", |family| family.title);
        let mut value = head(family, rule);
        value["schema"] = 1.into();
        value["page"] = rule.page().into();
        format!("{value:#}")
    }

    pub fn list() -> String {
        let rules = FAMILIES
            .iter()
            .flat_map(|family| family.rules.iter().map(|rule| head(family.title, rule)));
        format!("{:#}", json!({"schema": 1, "rules": rules.collect::<Vec<_>>()}))
    }
}
