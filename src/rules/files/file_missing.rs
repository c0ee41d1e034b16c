//! A used file is not there, or cannot be read.
//!
//! A path in `use` or `blend` is taken from the folder of the file that it stands in. Without
//! the file, its reactions or its water are missing, and the problem is not the one that was
//! meant; so nothing is solved.
//!
//! Before:
//!
//! ```lyate
//! use "amine.lyate"
//! ```
//!
//! After:
//!
//! ```lyate
//! use "amines.lyate"
//! ```
//!
//! where beside it there is
//!
//! ```lyate amines.lyate
//! reaction CH3NH3+ <=> CH3NH2 + H+, pKa = 10.64, source "amine data sheet"
//! ```

use crate::problem::defect::DefectKind;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::text::span::Place;

rule!("file-missing", Error, "file_missing.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for defect in context.defects() {
        if let DefectKind::FileMissing { path, why } = &defect.kind {
            let message = format!("`{}` cannot be read: {why}", path.display());
            found.push(
                RULE.at(defect.at, message)
                    .with_help("a path is taken from the folder of this file"),
            );
        }
    }
}
