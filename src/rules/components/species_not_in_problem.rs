//! A species is spoken of that the problem does not hold.
//!
//! A species belongs to a problem when the reactions in scope lead to it from the listed
//! components, `H+` and `H2O`. This one is out of reach: a component that it is made of is
//! not listed, no reaction makes it, or its name is misspelt.
//!
//! It matters because a statement about it says nothing: a limit on a species that is not
//! there would be met by any water at all.
//!
//! Before:
//!
//! ```lyate
//! use aqueous
//! component NH3, Cl-
//! add NH4Cl 5 mmol/L
//! expect [HSO4-] < 1 µmol/L
//! ```
//!
//! After:
//!
//! ```lyate
//! use aqueous
//! component NH3, Cl-, SO4^2-
//! add NH4Cl     5 mmol/L
//! add (NH4)2SO4 2 mmol/L
//! expect [HSO4-] < 1 µmol/L
//! ```

use super::listing;
use crate::problem::defect::{Defect, DefectKind};
use crate::problem::reaction::Origin;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::rules::words::names;
use crate::text::span::Place;
use crate::text::tree::Statement;

rule!("species-not-in-problem", Error, "species_not_in_problem.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for defect in context.defects() {
        let DefectKind::DoesNotBelong { name, missing, nearest } = &defect.kind else { continue };
        if is_told_elsewhere(context, name, missing) {
            continue;
        }
        found.push(finding(context, defect, (name, missing, nearest.as_deref())));
    }
}

fn finding(
    context: &Context,
    defect: &Defect,
    (name, missing, nearest): (&str, &[String], Option<&str>),
) -> Finding<Place> {
    let alone = missing.iter().all(|other| other == name);
    let message = if missing.is_empty() {
        format!("`{name}` is not in this problem: no component and no reaction names it")
    } else if alone {
        format!("`{name}` is not in this problem: it is not listed as a component")
    } else {
        let missing = names(missing, "and");
        format!("`{name}` is not in this problem: its component {missing} is not listed")
    };
    let mut finding = RULE.at(defect.at, message);
    if let Some(nearest) = nearest {
        finding = finding.with_fix(format!("write `{nearest}`"), false, defect.at, nearest);
    }
    if missing.is_empty() {
        let forms = other_forms(context, name);
        if nearest.is_none() && !forms.is_empty() {
            finding = finding.with_help(format!("its forms here: {}", names(&forms, "and")));
        }
        return finding;
    }
    let wanted = missing.join(", ");
    match listing::add(context, &wanted) {
        Some(edit) => finding.with_edits(format!("list `{wanted}` as a component"), false, vec![edit]),
        None => finding.with_help(format!("write `component {wanted}`")),
    }
}

/// The solids of the problem that differ from this one in the name of their form alone.
fn other_forms(context: &Context, name: &str) -> Vec<String> {
    let Some((formula, _)) = name.split_once("(s") else { return Vec::new() };
    let species = context.problem.scope.species.iter();
    let forms = species.filter(|s| s.name.split_once("(s").is_some_and(|(f, _)| f == formula));
    forms.map(|s| s.name.clone()).collect()
}

/// Whether a statement that might have brought the species is broken and has its own finding.
fn is_told_elsewhere(context: &Context, name: &str, missing: &[String]) -> bool {
    let concerns = |text: &str| text.contains(name) || missing.iter().any(|m| text.contains(m));
    let scope = &context.problem.scope;
    let broken = context.statements.iter().any(|written| {
        let text = &written.parsed.text;
        match written.statement() {
            Statement::Use(_) => scope
                .defects
                .iter()
                .any(|d| d.at.section == written.part && d.at.statement == written.index),
            Statement::Component { .. } | Statement::Reaction(_) | Statement::Group { .. } => {
                !written.parsed.is_read_whole() && concerns(text)
            }
            Statement::Broken => {
                let word = text.split_whitespace().next().unwrap_or_default();
                !matches!(word, "expect" | "balance" | "total" | "add" | "hold") && concerns(text)
            }
            _ => false,
        }
    });
    let defective = scope
        .reactions
        .iter()
        .filter(|reaction| matches!(reaction.origin, Origin::Own(_)))
        .filter(|reaction| !reaction.conserved || reaction.constant.is_none())
        .flat_map(|reaction| &reaction.participants)
        .any(|participant| {
            let other = &participant.formula.name;
            other == name || missing.contains(other)
        });
    broken || defective
}
