//! The built-in sets in data.

use serde_json::{Value, json};

use super::constant::{Moved, word};
use crate::problem::builtin::definitions;
use crate::problem::reaction::Reaction;
use crate::problem::sets::{self, Set};
use crate::problem::sort::Sort;

/// Every set of an edition, or of all of them.
pub fn sets(edition: Option<u32>) -> String {
    let shown = sets::all().filter(|set| edition.is_none_or(|edition| edition == set.edition));
    let sets: Vec<Value> = shown
        .map(|set| {
            let mut value = head(set);
            for sort in Sort::ALL {
                let of = |reaction: &&std::sync::Arc<Reaction>| reaction.sort() == sort;
                value["counts"][name(sort)] =
                    definitions(set).reactions.iter().filter(of).count().into();
            }
            value
        })
        .collect();
    format!("{:#}", json!({ "schema": 1, "sets": sets }))
}

/// Reactions of a set, with their constants at a temperature in kelvin.
pub fn reactions(set: &Set, reactions: &[&Reaction], kelvin: f64) -> String {
    let mut value = head(set);
    value["schema"] = 1.into();
    value["temperature"] = rounded(kelvin - 273.15).into();
    value["reactions"] = reactions.iter().map(|reaction| told(reaction, kelvin)).collect();
    format!("{value:#}")
}

fn head(set: &Set) -> Value {
    json!({
        "name": set.name,
        "edition": set.edition,
        "summary": set.summary(),
        "components": set.components().collect::<Vec<_>>(),
    })
}

/// Temperatures in °C; `log_k` is of the reaction as written.
fn told(reaction: &Reaction, kelvin: f64) -> Value {
    let mut value = json!({
        "reaction": reaction.equation,
        "sort": name(reaction.sort()),
        "constant": word(reaction).0,
        "source": reaction.source,
        "set": reaction.origin.words(),
    });
    if let Some(told) = super::constant::Told::new(reaction, kelvin) {
        value["log_k"] = match (told.moved, reaction.log_k(kelvin)) {
            (Moved::NoValue, _) | (_, None) => Value::Null,
            (_, Some((log_k, _))) => log_k.into(),
        };
        if let Some(note) = told.moved.note(kelvin) {
            value["note"] = note.into();
        }
    }
    if let Some(uncertainty) = reaction.constant.as_ref().and_then(|c| c.uncertainty) {
        value["uncertainty"] = uncertainty.into();
    }
    if let Some(enthalpy) = reaction.enthalpy {
        value["enthalpy"] = enthalpy.into();
    }
    if let Some(heat_capacity) = reaction.heat_capacity {
        value["heat_capacity"] = heat_capacity.into();
    }
    if let Some((low, high)) = reaction.valid {
        value["valid"] = json!([rounded(low - 273.15), rounded(high - 273.15)]);
    }
    value
}

/// Without the digits that the change from kelvin leaves behind.
fn rounded(celsius: f64) -> f64 {
    (celsius * 1e6).round() / 1e6
}

fn name(sort: Sort) -> &'static str {
    match sort {
        Sort::Acid => "acid",
        Sort::Complex => "complex",
        Sort::Solid => "solid",
        Sort::Gas => "gas",
        Sort::Couple => "couple",
        Sort::Other => "other",
    }
}
