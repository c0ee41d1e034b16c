//! Files use one another in a circle.
//!
//! If a file uses another that leads back to it, there is no order to read them in.
//! What both need belongs in a third file that both use. In the same way no water can be
//! blended into itself, by whatever way.
//!
//! Before:
//!
//! ```lyate
//! use "shared.lyate"
//! ```
//!
//! ```lyate shared.lyate
//! use "problem.lyate"
//! ```
//!
//! After:
//!
//! ```lyate
//! use "amines.lyate"
//! ```
//!
//! ```lyate amines.lyate
//! reaction CH3NH3+ <=> CH3NH2 + H+, pKa = 10.64, source "amine data sheet"
//! ```

use std::path::{Path, PathBuf};

use crate::problem::defect::DefectKind;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::text::span::Place;
use crate::text::tree::Statement;

rule!("import-cycle", Error, "import_cycle.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for defect in context.defects() {
        if let DefectKind::ImportCycle { chain } = &defect.kind {
            let message = match &chain[..] {
                [_, _] => "the file uses itself".to_owned(),
                _ => format!("files use one another in a circle: {}", drawn(chain)),
            };
            let blends = context
                .statement(defect.at)
                .is_some_and(|written| matches!(written.statement(), Statement::Blend { .. }));
            found.push(RULE.at(defect.at, message).with_help(if blends {
                "a water cannot be a part of itself: blend the waters that it is made of"
            } else {
                "put what both need into a file of its own, and use that"
            }));
        }
    }
}

/// The files by their paths below the folder that all of them are in.
fn drawn(chain: &[PathBuf]) -> String {
    let mut folder = chain.first().and_then(|path| path.parent()).unwrap_or(Path::new(""));
    while !chain.iter().all(|path| path.starts_with(folder)) {
        folder = folder.parent().unwrap_or(Path::new(""));
    }
    let names: Vec<String> = chain
        .iter()
        .map(|path| path.strip_prefix(folder).unwrap_or(path).display().to_string())
        .collect();
    names.join(" → ")
}
