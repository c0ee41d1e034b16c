//! A built-in set, or an edition of one, is not known.
//!
//! `use aqueous` brings a built-in set of reactions by its name, `use aqueous 1` a fixed
//! edition of it. Another file is used by its path in quotes. Without the set its
//! reactions are missing, and species that only they bring do not belong.
//!
//! Before:
//!
//! ```lyate
//! use aqueus
//! ```
//!
//! After:
//!
//! ```lyate
//! use aqueous
//! ```

use crate::problem::defect::DefectKind;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::text::span::Place;
use crate::text::tree::{Statement, Use};

rule!("unknown-set", Error, "unknown_set.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for defect in context.defects() {
        match &defect.kind {
            DefectKind::UnknownSet { name, known } => {
                let finding = RULE
                    .at(defect.at, format!("there is no built-in set `{name}`"))
                    .with_help(
                        "`lyate library` lists the sets; another file is used by its path in quotes",
                    );
                found.push(match nearest(name, known) {
                    Some(near) => finding.with_fix(format!("write `{near}`"), false, defect.at, near),
                    None => finding,
                });
            }
            DefectKind::UnknownEdition { name, edition, newest } => {
                let at = edition_at(context, defect.at).unwrap_or(defect.at);
                let message = format!("the set `{name}` has no edition {edition}");
                found.push(
                    RULE.at(at, message).with_help(format!("its newest edition is {newest}")).with_fix(
                        format!("write `{newest}`"),
                        false,
                        at,
                        newest.to_string(),
                    ),
                );
            }
            _ => {}
        }
    }
}

fn nearest<'k>(name: &str, known: &[&'k str]) -> Option<&'k str> {
    if name.len() > 64 {
        return None;
    }
    let lower = name.to_lowercase();
    known
        .iter()
        .map(|known| (strsim::damerau_levenshtein(known, &lower), *known))
        .filter(|(distance, known)| *distance <= known.len() / 3)
        .min()
        .map(|(_, known)| known)
}

fn edition_at(context: &Context, at: Place) -> Option<Place> {
    match &context.statement(at)?.parsed.statement {
        Statement::Use(Use::Set { edition: Some(edition), .. }) => {
            Some(Place { span: edition.span, ..at })
        }
        _ => None,
    }
}
