//! A used file is not text.
//!
//! Problem files are plain text in UTF-8. A spreadsheet, a word-processor document or a
//! file in an older encoding is none of that, and a file that is partly read could lose
//! a reaction without a word; so all of it is left out.
//!
//! Before:
//!
//! ```lyate
//! use "plant.xlsx"
//! ```
//!
//! where the file is a spreadsheet:
//!
//! ```lyate plant.xlsx
//! PK\x03\x04\xFF\xFE
//! ```
//!
//! After:
//!
//! ```lyate
//! use "plant.lyate"
//! ```
//!
//! where `plant.lyate` is plain text:
//!
//! ```lyate plant.lyate
//! reaction NH4+ <=> NH3 + H+, pKa = 9.25, source "plant constants, sheet 3"
//! ```

use crate::problem::defect::DefectKind;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::text::span::Place;

rule!("file-not-text", Error, "file_not_text.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for defect in context.defects() {
        if let DefectKind::FileNotText { path, at_byte } = &defect.kind {
            let message =
                format!("`{}` is not UTF-8 text from its byte {} on", path.display(), at_byte + 1);
            found.push(RULE.at(defect.at, message).with_help("save it as plain text in UTF-8"));
        }
    }
}
