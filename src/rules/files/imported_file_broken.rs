//! A used file has errors of its own.
//!
//! What a file with errors means is not certain: a reaction that it was to bring may be
//! missing or wrong. Nothing that uses it is solved until it is put right. The errors
//! are told where they are, when that file is checked or opened.
//!
//! Before:
//!
//! ```lyate
//! use "amines.lyate"
//! ```
//!
//! ```lyate amines.lyate
//! reaction CH3NH3+ <=> CH3NH2 + 2 H+, pKa = 10.64, source "amine data sheet"
//! ```
//!
//! After:
//!
//! ```lyate
//! use "mended.lyate"
//! ```
//!
//! ```lyate mended.lyate
//! reaction CH3NH3+ <=> CH3NH2 + H+, pKa = 10.64, source "amine data sheet"
//! ```

use crate::problem::defect::DefectKind;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::text::span::Place;
use crate::text::tree::{Statement, Use};

rule!("imported-file-broken", Error, "imported_file_broken.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for defect in context.defects() {
        let DefectKind::ImportBroken { path, count } = &defect.kind else { continue };
        let written = match context.statement(defect.at).map(|w| &w.parsed.statement) {
            Some(Statement::Use(Use::File { path })) => path.value.clone(),
            _ => path.display().to_string(),
        };
        let errors = if *count == 1 { "an error".into() } else { format!("{count} errors") };
        let message = format!("`{written}` has {errors} of its own");
        let shown = if *count == 1 { "it" } else { "them" };
        let help = format!("`lyate check {}` shows {shown}", path.display());
        found.push(RULE.at(defect.at, message).with_help(help));
    }
}
