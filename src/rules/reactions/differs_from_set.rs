//! A file's own constant differs from that of a set or file that it uses.
//!
//! A file's own reaction goes before a used one, so that a plant can keep its own value.
//! Where the two are more than 0.05 apart in log K, it is worth a look whether that is
//! meant: the own value may be for another ionic strength, or the older one.
//!
//! Before:
//!
//! ```lyate
//! use ammonia
//! reaction NH4+ <=> NH3 + H+, pKa = 9.40, source "plant constants, sheet 3"
//! ```
//!
//! After:
//!
//! ```lyate
//! use ammonia
//! reaction NH4+ <=> NH3 + H+, pKa = 9.25, source "plant constants, sheet 3"
//! ```

use crate::problem::defect::DefectKind;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::text::span::Place;

rule!("differs-from-set", Note, "differs_from_set.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for defect in context.defects() {
        let DefectKind::DiffersFromSet { own, set, origin } = &defect.kind else { continue };
        // As it is written: a pKa against a pKa.
        let word = context.text(defect.at).split('=').next().unwrap_or_default().trim();
        let (word, sign) = if word.starts_with("pK") { (word, -1.0) } else { ("log K", 1.0) };
        let message = format!(
            "{word} is {} here and {} in {origin}: they differ by {:.2}",
            logarithm(sign * own),
            logarithm(sign * set),
            (own - set).abs(),
        );
        found.push(RULE.at(defect.at, message).with_help("this file's own value is in force"));
    }
}

fn logarithm(value: f64) -> String {
    format!("{value:.2}").replace('-', "−")
}
