//! The cautions of an answer, one sentence each, below what was solved.

use std::collections::BTreeSet;

use serde::Serialize;

use super::style::{Paint, Style};
use super::wrap::wrapped;
use crate::rules::finding::Severity;
use crate::rules::outcome::Outcome;

const WIDTH: usize = 100;
/// `caution: `
const INDENT: usize = 9;

#[derive(Serialize)]
pub struct CautionJson<'a> {
    rule: &'static str,
    message: &'a str,
    #[serde(skip_serializing_if = "Option::is_none")]
    help: Option<&'a str>,
}

pub fn json(outcome: &Outcome) -> Vec<CautionJson<'_>> {
    let cautions = outcome.findings.iter().filter(|f| f.severity == Severity::Caution);
    let json = cautions.map(|finding| CautionJson {
        rule: finding.rule,
        message: &finding.message,
        help: finding.help.as_deref(),
    });
    json.collect()
}

/// Each caution, and then what is to be done about all of them; empty where there are none.
pub fn lines(outcome: &Outcome, style: Style) -> String {
    let cautions = json(outcome);
    let head = style.paint(Paint::Doubtful, "caution:");
    let mut text = String::new();
    let mut said = BTreeSet::new();
    for caution in cautions.iter().filter(|caution| said.insert(caution.message)) {
        let help = caution.help.map_or_else(String::new, |help| format!("; {help}"));
        let words = format!("{}{help}", caution.message);
        text += &format!("{head} {}\n", wrapped(&words, INDENT, INDENT, WIDTH));
    }
    text
}
