//! `lyate library`: the built-in sets, and what is known of their constants.

use std::sync::Arc;

use super::chosen::nearest;
use super::reply::{Complaint, Reply};
use super::terminal::style;
use crate::chemistry::formula::{Formula, canonical};
use crate::chemistry::quantity::to_kelvin;
use crate::chemistry::unit::Unit;
use crate::problem::builtin::definitions;
use crate::problem::import::Definitions;
use crate::problem::reaction::Reaction;
use crate::problem::sets::{self, Set};
use crate::report::{library, library_json};
use crate::text::tree::{Document, Statement};

/// List the built-in sets of constants, or show one of them with its sources
///
/// Without a set, lists all of them with what they hold. With a set, shows its constants
/// and where they come from; with a species beside it, everything about the reactions of
/// that species.
#[derive(clap::Args)]
#[command(
    verbatim_doc_comment,
    after_help = "\
Examples:
  lyate library
  lyate library minerals
  lyate library minerals CaCO3 --at \"12 °C\"

Exit code:
  0  shown
  2  there is no such set, edition or species"
)]
pub struct Arguments {
    /// The set, such as minerals
    set: Option<String>,
    /// Only reactions of this species, or of solids and gases with this formula
    #[arg(requires = "set")]
    species: Option<String>,
    /// The temperature of the constants, with its unit
    #[arg(long, value_name = "TEMPERATURE", default_value = "25 °C", allow_hyphen_values = true)]
    at: String,
    /// This edition; otherwise the newest
    #[arg(long, value_name = "N")]
    edition: Option<u32>,
    /// How to tell it
    #[arg(long, value_name = "FORM", value_enum, default_value_t = Form::Text)]
    output: Form,
}

#[derive(Clone, Copy, PartialEq, Eq, clap::ValueEnum)]
enum Form {
    /// For people
    Text,
    /// For programs; log_k is of the reaction as written
    Json,
}

pub fn run(arguments: &Arguments) -> Result<Reply, Complaint> {
    let kelvin = temperature(&arguments.at)?;
    let is_json = arguments.output == Form::Json;
    let Some(name) = &arguments.set else {
        if let Some(edition) = arguments.edition
            && sets::all().all(|set| set.edition != edition)
        {
            return Err(no_edition(edition));
        }
        return Ok(Reply::new(
            if is_json {
                library_json::sets(arguments.edition) + "\n"
            } else {
                library::sets(arguments.edition, style())
            },
            0,
        ));
    };
    let set = find(name, arguments.edition)?;
    let found = definitions(set);
    let reactions: Vec<&Reaction> = match &arguments.species {
        Some(species) => of_species(&found, set, species)?,
        None => found.reactions.iter().map(Arc::as_ref).collect(),
    };
    let text = match (is_json, &arguments.species) {
        (true, _) => library_json::reactions(set, &reactions, kelvin) + "\n",
        (false, None) => library::set(set, kelvin, style()),
        (false, Some(_)) => library::reactions(set, &reactions, kelvin, style()),
    };
    Ok(Reply::new(text, 0))
}

fn no_edition(edition: u32) -> Complaint {
    let newest = sets::all().map(|set| set.edition).max().unwrap_or_default();
    Complaint(format!("there is no edition {edition} of the sets; the newest is {newest}"))
}

fn find(name: &str, edition: Option<u32>) -> Result<&'static Set, Complaint> {
    if let Some(set) = sets::find(name, edition) {
        return Ok(set);
    }
    Err(match (sets::find(name, None), edition) {
        (Some(newest), Some(edition)) => Complaint(format!(
            "the set {name} has no edition {edition}; its newest is {}",
            newest.edition
        )),
        _ => Complaint(match nearest(name, sets::names().into_iter()) {
            Some(nearest) => format!("there is no set {name}; did you mean {nearest}?"),
            None => {
                format!("there is no set {name}; the sets are {}", sets::names().join(", "))
            }
        }),
    })
}

/// Reactions that name a species, or a formula in any phase: `CaCO3` finds the ion pair
/// and every form of the solid.
fn of_species<'a>(
    found: &'a Definitions,
    set: &Set,
    species: &str,
) -> Result<Vec<&'a Reaction>, Complaint> {
    // As it is spelt in the sets: `SO₄²⁻` for `SO4^2-`.
    let wanted = Formula::parse(species, &found.groups)
        .map_or_else(|_| canonical(species), |formula| formula.name);
    let names = |formula: &Formula| {
        formula.name == wanted
            || formula.name.split("(s").next() == Some(wanted.as_str())
            || formula.name.strip_suffix("(g)") == Some(wanted.as_str())
    };
    let named: Vec<&Reaction> = found
        .reactions
        .iter()
        .filter(|reaction| reaction.participants.iter().any(|p| names(&p.formula)))
        .map(Arc::as_ref)
        .collect();
    if !named.is_empty() {
        return Ok(named);
    }
    let all = found.reactions.iter().flat_map(|reaction| &reaction.participants);
    let all = all.map(|participant| participant.formula.name.as_str());
    Err(Complaint(match nearest(&wanted, all) {
        Some(nearest) => {
            format!("no reaction of the set {} has {wanted}; did you mean {nearest}?", set.name)
        }
        None => format!(
            "no reaction of the set {} has {wanted}; `lyate library {0}` lists all of them",
            set.name
        ),
    }))
}

/// A temperature as a problem file writes it, in kelvin.
fn temperature(text: &str) -> Result<f64, Complaint> {
    let read = || {
        let document = Document::parse(format!("temperature {}", text.trim()));
        let mut statements = document.statements();
        let placed = statements.next()?;
        let alone = statements.next().is_none() && placed.parsed.problems.is_empty();
        let Statement::Temperature { value } = &placed.parsed.statement else { return None };
        let unit = Unit::parse(&value.unit.as_ref()?.value).ok()?;
        let kelvin = to_kelvin(value.number.value, unit).ok()?;
        (alone && kelvin > 0.0).then_some(kelvin)
    };
    read().ok_or_else(|| {
        Complaint(format!("--at {text}: write a temperature with its unit, as in --at \"40 °C\""))
    })
}
