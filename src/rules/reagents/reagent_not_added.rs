//! A balance counts a reagent that is not put in.
//!
//! `added X` in a written balance is the amount of the reagent X that `add` puts in, so that
//! the balance stays right when the dose changes. Here no `add` speaks of X: the name
//! differs, or the reagent was taken out.
//!
//! The balance would count a strong acid or base that is not there.
//!
//! Before:
//!
//! ```lyate
//! use aqueous
//! component NH3, Cl-, Na+
//! add NH4Cl 5 mmol/L
//! add NaOH  2 mmol/L
//! balance protons
//!     [H+] + added KOH = [OH-] + [NH3]
//! ```
//!
//! After:
//!
//! ```lyate
//! use aqueous
//! component NH3, Cl-, Na+
//! add NH4Cl 5 mmol/L
//! add NaOH  2 mmol/L
//! balance protons
//!     [H+] + added NaOH = [OH-] + [NH3]
//! ```

use crate::chemistry::formula::canonical;
use crate::problem::defect::DefectKind;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::text::span::Place;
use crate::text::tree::Statement;

rule!("reagent-not-added", Error, "reagent_not_added.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for defect in context.defects() {
        let DefectKind::NotAdded { name } = &defect.kind else { continue };
        let added: Vec<String> = context
            .statements
            .iter()
            .filter_map(|written| match written.statement() {
                Statement::Add { reagent, .. } => Some(canonical(reagent)),
                _ => None,
            })
            .collect();
        // Put in, by a statement that has its own finding.
        if added.contains(name) {
            continue;
        }
        let statement = context.statement(defect.at).map(|written| written.statement());
        let is_dose = matches!(statement, Some(Statement::Expect { .. }));
        let (what, help) = if is_dose {
            ("dose", format!("write `hold … by {name}` to find it"))
        } else {
            ("added", format!("write `add {name} …`"))
        };
        let message = format!("`{name}` is not put in, so there is no `{what} {name}`");
        let mut finding = RULE.at(defect.at, message).with_help(help);
        let nearest = added
            .iter()
            .map(|other| (strsim::osa_distance(other, name), other))
            .filter(|(distance, _)| *distance <= 2)
            .min();
        if let Some((_, nearest)) = nearest {
            let title = format!("write `{nearest}`");
            finding = finding.with_fix(title, false, defect.at, nearest.clone());
        }
        found.push(finding);
    }
}
