//! Findings as SARIF 2.1.0, the OASIS standard for the results of checkers.

use std::collections::BTreeMap;
use std::ops::Range;

use serde_json::{Value, json};

use super::source::{FileReport, Reading, Source};
use crate::rules::catalogue;
use crate::rules::finding::{LocatedFinding, Severity};

/// The log of one run, as indented JSON. Only rules with findings are described.
///
/// # Errors
/// Those of the serialiser; none are known for this data.
pub fn report(files: &[FileReport]) -> serde_json::Result<String> {
    let mut found: BTreeMap<&str, usize> =
        files.iter().flat_map(|file| &file.findings).map(|f| (f.rule, 0)).collect();
    for (index, place) in found.values_mut().enumerate() {
        *place = index;
    }
    let rules: Vec<Value> = found.keys().map(|name| rule(name)).collect();
    let results: Vec<Value> = files
        .iter()
        .flat_map(|file| file.findings.iter().map(|f| result(f, &file.source, &found)))
        .collect();
    let complete = !files.iter().any(|file| matches!(file.reading, Reading::Missing));
    serde_json::to_string_pretty(&json!({
        "$schema": "https://docs.oasis-open.org/sarif/sarif/v2.1.0/os/schemas/sarif-schema-2.1.0.json",
        "version": "2.1.0",
        "runs": [{
            "tool": {"driver": {
                "name": env!("CARGO_PKG_NAME"),
                "semanticVersion": env!("CARGO_PKG_VERSION"),
                "rules": rules,
            }},
            "columnKind": "unicodeCodePoints",
            "invocations": [{"executionSuccessful": complete}],
            "results": results,
        }],
    }))
}

/// The standard has no level for a caution, and only `note` says that nothing is wrong.
fn level(severity: Severity) -> &'static str {
    match severity {
        Severity::Error => "error",
        Severity::Warning => "warning",
        Severity::Note | Severity::Caution => "note",
    }
}

fn rule(name: &str) -> Value {
    let Some(rule) = catalogue::find(name) else { return json!({"id": name}) };
    let page = rule.page();
    json!({
        "id": name,
        "shortDescription": {"text": rule.summary()},
        "help": {"text": page, "markdown": page},
        "defaultConfiguration": {"level": level(rule.severity)},
    })
}

fn result(finding: &LocatedFinding, source: &Source, rules: &BTreeMap<&str, usize>) -> Value {
    let mut text = finding.message.clone();
    if let Some(help) = &finding.help {
        text += &format!("\n{help}");
    }
    let mut result = json!({
        "ruleId": finding.rule,
        "ruleIndex": rules.get(finding.rule),
        "level": level(finding.severity),
        "message": {"text": text},
        "locations": [{"physicalLocation": physical(source, &finding.at)}],
    });
    if let Some(case) = &finding.case {
        result["properties"] = json!({"case": case});
    }
    if !finding.related.is_empty() {
        let places = finding.related.iter().enumerate().map(|(id, (at, words))| {
            json!({
                "id": id,
                "message": {"text": words},
                "physicalLocation": physical(source, at),
            })
        });
        result["relatedLocations"] = places.collect();
    }
    if !finding.fixes.is_empty() {
        let fixes = finding.fixes.iter().map(|fix| {
            let replacements = fix.edits.iter().map(|(at, text)| {
                json!({"deletedRegion": region(source, at), "insertedContent": {"text": text}})
            });
            json!({
                "description": {"text": fix.title},
                "artifactChanges": [{
                    "artifactLocation": artifact(source),
                    "replacements": replacements.collect::<Vec<_>>(),
                }],
                "properties": {"safe": fix.safe},
            })
        });
        result["fixes"] = fixes.collect();
    }
    result
}

fn physical(source: &Source, at: &Range<usize>) -> Value {
    // A file that could not be read has no region.
    if source.text.is_empty() {
        return json!({"artifactLocation": artifact(source)});
    }
    json!({"artifactLocation": artifact(source), "region": region(source, at)})
}

fn region(source: &Source, at: &Range<usize>) -> Value {
    let region = source.region(at);
    json!({
        "startLine": region.line,
        "startColumn": region.column,
        "endLine": region.end_line,
        "endColumn": region.end_column,
    })
}

fn artifact(source: &Source) -> Value {
    json!({"uri": uri(&source.name)})
}

/// A path as a URI reference: relative paths stay relative.
fn uri(path: &str) -> String {
    let path = if cfg!(windows) { path.replace('\\', "/") } else { path.to_owned() };
    let mut uri = String::with_capacity(path.len());
    if path.starts_with('/') {
        uri += "file://";
    } else if path.as_bytes().get(1) == Some(&b':') && cfg!(windows) {
        uri += "file:///";
    }
    for byte in path.bytes() {
        match byte {
            b'a'..=b'z' | b'A'..=b'Z' | b'0'..=b'9' | b'-' | b'.' | b'_' | b'~' | b'/' => {
                uri.push(char::from(byte));
            }
            _ => uri += &format!("%{byte:02X}"),
        }
    }
    uri
}

#[cfg(test)]
mod tests {
    use super::uri;

    #[test]
    fn paths_become_uri_references() {
        assert_eq!(uri("plant/sump.lyate"), "plant/sump.lyate");
        assert_eq!(uri("/srv/sump.lyate"), "file:///srv/sump.lyate");
        assert_eq!(uri("a b/50 %/µ.lyate"), "a%20b/50%20%25/%C2%B5.lyate");
    }
}
