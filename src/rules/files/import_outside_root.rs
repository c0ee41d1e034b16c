//! A used file lies outside the folder that imports may not leave.
//!
//! A problem uses files of its own project only: those below the nearest folder with
//! `.git` or `lyate.toml`, or the folder that an editor or `--root` names. So a project
//! can be moved, reviewed and archived as a whole, and a file from elsewhere reads
//! nothing of yours.
//!
//! Before:
//!
//! ```lyate
//! use "../../elsewhere/amines.lyate"
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

use crate::problem::defect::DefectKind;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::text::span::Place;

rule!("import-outside-root", Error, "import_outside_root.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for defect in context.defects() {
        if let DefectKind::ImportOutsideRoot { path, root } = &defect.kind {
            let message = format!("`{}` lies outside {}", path.display(), root.display());
            found.push(RULE.at(defect.at, message).with_help(
                "copy it into the project, or put an empty `lyate.toml` into the folder \
                 above both, or name that folder with `--root`",
            ));
        }
    }
}
