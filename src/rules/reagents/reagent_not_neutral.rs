//! A reagent carries a charge.
//!
//! What comes out of a bag, a drum or a bottle is neutral: an ion is always put in together
//! with a counter-ion. With the ion alone the water would be charged, and the pH that closes
//! the charge balance would be far from the real one.
//!
//! Name the salt, the acid or the base that is dosed. For an analysis that gives ions one by
//! one, write a `total` for each.
//!
//! Before:
//!
//! ```lyate
//! use aqueous
//! component NH3, SO4^2-
//! add NH4+    4 mmol/L
//! add SO4^2-  2 mmol/L
//! ```
//!
//! After:
//!
//! ```lyate
//! use aqueous
//! component NH3, SO4^2-
//! add (NH4)2SO4 2 mmol/L
//! ```

use crate::problem::defect::DefectKind;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::rules::words::signed;
use crate::text::span::Place;

rule!("reagent-not-neutral", Error, "reagent_not_neutral.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for defect in context.defects() {
        let DefectKind::ReagentNotNeutral { name, charge } = &defect.kind else { continue };
        let left = signed((*charge).into());
        let message = format!("`{name}` is put in alone and leaves a charge of {left}");
        let kind = if *charge > 0 { "an anion" } else { "a cation" };
        let mut finding = RULE.at(defect.at, message);
        finding = match salt(name, *charge) {
            Some((salt, counter_ion)) => {
                let known = context.problem.scope.component(counter_ion).is_some();
                if known {
                    let title = format!("put it in as `{salt}`");
                    finding = finding.with_fix(title, false, defect.at, salt.clone());
                }
                finding.with_help(format!(
                    "put it in with {kind} that it comes with, such as `{salt}`, or give its `total`"
                ))
            }
            None => finding.with_help("what brings electrons is a substance; else give `total e-`"),
        };
        found.push(finding);
    }
}

/// The chloride or the sodium salt of an ion, with the ion that was added.
fn salt(name: &str, charge: i64) -> Option<(String, &'static str)> {
    if name == "e-" {
        return None;
    }
    let bare = name.split('^').next().unwrap_or(name).trim_end_matches(['+', '-']);
    let count = match charge.unsigned_abs() {
        1 => String::new(),
        n => n.to_string(),
    };
    Some(if charge > 0 {
        (format!("{bare}Cl{count}"), "Cl-")
    } else {
        (format!("Na{count}{bare}"), "Na+")
    })
}
