//! A blend names a case that the other file does not have.
//!
//! `case "…"` behind a file of a blend takes that case of it in the place of its base. The
//! title must be the same to the letter.
//!
//! Before:
//!
//! ```lyate
//! component Na+, Cl-
//! blend 100 % of "river.lyate" case "wintr"
//! ```
//!
//! ```lyate river.lyate
//! component Na+, Cl-
//! add NaCl 0.4 mmol/L
//! case "winter"
//!     temperature 4 °C
//! ```
//!
//! After:
//!
//! ```lyate
//! component Na+, Cl-
//! blend 100 % of "river.lyate" case "winter"
//! ```
//!
//! ```lyate river.lyate
//! component Na+, Cl-
//! add NaCl 0.4 mmol/L
//! case "winter"
//!     temperature 4 °C
//! ```

use crate::problem::defect::DefectKind;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::rules::words::list;
use crate::text::span::Place;
use crate::text::tree::Statement;

rule!("blended-case-missing", Error, "blended_case_missing.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for defect in context.defects() {
        let DefectKind::BlendedCaseMissing { path, case, cases } = &defect.kind else { continue };
        let named = context.statement(defect.at).and_then(|written| match written.statement() {
            Statement::Blend { parts } => {
                let part = parts.iter().find(|part| part.span == defect.at.span)?;
                Some(written.place(part.case.as_ref()?.span))
            }
            _ => None,
        });
        let at = named.unwrap_or(defect.at);
        let message = format!("`{}` has no case \"{case}\"", path.display());
        let mut finding = RULE.at(at, message).with_help(match &cases[..] {
            [] => "it has no cases".to_owned(),
            cases => {
                let shown: Vec<String> =
                    cases.iter().take(SHOWN).map(|case| format!("\"{case}\"")).collect();
                let more = if cases.len() > SHOWN { ", and more" } else { "" };
                format!("its cases are {}{more}", list(&shown, "and"))
            }
        });
        if let Some(near) = nearest(case, cases) {
            finding = finding.with_fix(format!("write \"{near}\""), false, at, format!("\"{near}\""));
        }
        found.push(finding);
    }
}

/// So many cases are named in the help.
const SHOWN: usize = 6;

fn nearest<'c>(case: &str, cases: &'c [String]) -> Option<&'c str> {
    if case.len() > 64 {
        return None;
    }
    let lower = case.to_lowercase();
    cases
        .iter()
        .filter(|known| known.len() <= 64)
        .map(|known| (strsim::damerau_levenshtein(&known.to_lowercase(), &lower), known.as_str()))
        .filter(|(distance, known)| *distance <= known.len() / 3)
        .min()
        .map(|(_, known)| known)
}
