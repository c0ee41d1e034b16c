//! The constants of the built-in sets against published ones, copied into
//! `tests/reference/constants.json` in the form and with the source in which they were
//! found, apart from the sets.

mod library_support;

use std::collections::{BTreeMap, BTreeSet};

use library_support::{all_sets, newest, scope_of};
use lyate::problem::builtin::definitions;
use lyate::problem::reaction::{Reaction, STANDARD};
use lyate::problem::scope::Scope;
use num_traits::ToPrimitive;
use serde_json::Value;

/// Half a unit of the last digit of a constant printed to hundredths, and what turning it
/// round by pKw = 13.995 (for 13.9947) adds at four hydroxides.
const TOLERANCE: f64 = 0.0065;
/// Half a unit of an enthalpy printed to tenths, kJ/mol.
const ENTHALPY_TOLERANCE: f64 = 0.06;

/// What two published courses of one constant with temperature may differ by between 0 and
/// 50 °C, apart from their difference at 25 °C.
const LARGEST_DRIFT: f64 = 0.05;

fn reference() -> Value {
    serde_json::from_str(include_str!("reference/constants.json")).unwrap()
}

fn entries(reference: &Value, of: &str) -> Vec<Value> {
    reference[of].as_array().unwrap().clone()
}

fn species(entry: &Value) -> BTreeMap<&str, f64> {
    let species = entry["species"].as_object().unwrap();
    species.iter().map(|(name, n)| (name.as_str(), n.as_f64().unwrap())).collect()
}

/// log10 K of a reaction by the formation constants of its species, at a temperature in
/// kelvin; none where one of them is in no set. So the form in which the sets write a
/// reaction does not matter.
fn log_k(scope: &Scope, species: &BTreeMap<&str, f64>, kelvin: f64) -> Option<f64> {
    let mut sum = 0.0;
    for (name, n) in species {
        let made = scope.belonging.made[scope.find(name)?].as_ref()?;
        sum += n * made.log_beta(|r| scope.reactions[r].log_k(kelvin).map_or(f64::NAN, |k| k.0));
    }
    Some(sum)
}

#[test]
fn each_constant_is_one_that_was_published() {
    let scope = scope_of(&all_sets(&["redox"]));
    let reference = reference();
    let mut wrong = Vec::new();
    let (mut met, mut apart) = (0, 0);
    for entry in entries(&reference, "constants") {
        let id = entry["id"].as_str().unwrap();
        if entry["apart"].is_string() {
            apart += 1;
            continue;
        }
        let Some(ours) = log_k(&scope, &species(&entry), STANDARD) else {
            wrong.push(format!("{id}: no set has it: {}", entry["species"]));
            continue;
        };
        let values = entry["values"].as_array().unwrap();
        let near = values.iter().any(|value| is_near(&entry, value, ours));
        // An entry that carries enthalpies alone.
        if near || values.is_empty() {
            met += 1;
        } else {
            let printed: Vec<_> = values.iter().map(|v| v["log_k"].to_string()).collect();
            wrong.push(format!("{id}: {ours:.4}, printed {}", printed.join(" ")));
        }
    }
    assert!(wrong.is_empty(), "{met} met\n{}", wrong.join("\n"));
    assert!(met > 250 && apart < 10, "{met} met, {apart} apart");
}

/// What a source says first of how its constant is known: `read` or `recalled`.
fn status(reaction: &Reaction) -> &'static str {
    let source = reaction.source.as_deref().unwrap_or_default();
    let words = source.split(|c: char| !c.is_alphabetic());
    words
        .filter_map(|word| match word {
            "read" => Some("read"),
            "recalled" => Some("recalled"),
            _ => None,
        })
        .next()
        .unwrap_or("")
}

/// Half a unit of the last digit that the table prints.
fn is_near(entry: &Value, value: &Value, ours: f64) -> bool {
    let tolerance = entry["tolerance"].as_f64().unwrap_or(TOLERANCE);
    (value["log_k"].as_f64().unwrap() - ours).abs() <= tolerance
}

/// The species of a reaction without those of water, as a key for any of its forms.
fn bare(names: impl Iterator<Item = (String, bool)>) -> BTreeSet<(String, bool)> {
    names.filter(|(name, _)| !["H2O", "H+", "OH-"].contains(&name.as_str())).collect()
}

#[test]
fn what_a_source_calls_read_was_read() {
    let reference = reference();
    let entries = entries(&reference, "constants");
    let mut by_species: BTreeMap<_, Vec<&Value>> = BTreeMap::new();
    for entry in &entries {
        let names = species(entry);
        let key = bare(names.iter().map(|(name, n)| ((*name).to_owned(), *n > 0.0)));
        by_species.entry(key).or_default().push(entry);
    }
    let scope = scope_of(&all_sets(&["redox"]));
    let mut wrong = Vec::new();
    let (mut read, mut recalled, mut beyond) = (0, 0, 0);
    for set in newest() {
        for reaction in &definitions(set).reactions {
            let participants = reaction.participants.iter();
            let key = bare(
                participants
                    .map(|p| (p.formula.name.clone(), p.coefficient.to_f64().unwrap() > 0.0)),
            );
            let equation = &reaction.equation;
            match (status(reaction), by_species.get(&key)) {
                ("", _) => wrong.push(format!("{equation} does not say how it is known")),
                ("recalled", Some(_)) => recalled += 1,
                ("recalled", None) => beyond += 1,
                (_, None) => wrong.push(format!("{equation} is called read, and is in no table")),
                (_, Some(entries)) => {
                    let seen = entries.iter().any(|entry| {
                        let ours = log_k(&scope, &species(entry), STANDARD).unwrap();
                        let mut values = entry["values"].as_array().unwrap().iter();
                        values.any(|v| v["how"] == "read" && is_near(entry, v, ours))
                    });
                    if seen {
                        read += 1;
                    } else {
                        wrong.push(format!("{equation} is called read, and was recalled"));
                    }
                }
            }
        }
    }
    assert!(wrong.is_empty(), "{}", wrong.join("\n"));
    assert!(read > 100 && recalled > 50 && beyond > 50, "{read} {recalled} {beyond}");
}

#[test]
fn an_ionic_strength_that_is_not_zero_is_said() {
    let reference = reference();
    let mut seen = 0;
    for entry in entries(&reference, "constants") {
        let Some(ionic) = entry["ionic_strength"].as_f64().filter(|_| !entry["apart"].is_string())
        else {
            continue;
        };
        let names = species(&entry);
        let all = newest().flat_map(|set| definitions(set).reactions.clone());
        let of = all.filter(|reaction| {
            reaction.participants.len() == names.len()
                && reaction.participants.iter().all(|p| names.contains_key(&*p.formula.name))
        });
        for reaction in of {
            let words = format!("for an ionic strength of {ionic} mol/L");
            let source = reaction.source.as_deref().unwrap_or_default();
            assert!(source.contains(&words), "{}: {source}", reaction.equation);
            seen += 1;
        }
    }
    assert!(seen > 15, "{seen}");
}

#[test]
fn equations_in_t_give_back_their_printed_points() {
    let scope = scope_of(&all_sets(&["redox"]));
    let reference = reference();
    let curves = entries(&reference, "temperature");
    let mut wrong = Vec::new();
    let mut met = BTreeSet::new();
    let mut missed: BTreeMap<String, String> = BTreeMap::new();
    for curve in &curves {
        let species = species(curve);
        let id = curve["id"].as_str().unwrap().to_owned();
        let tolerance = curve["tolerance"].as_f64().unwrap();
        let celsius = curve["celsius"].as_array().unwrap();
        let printed = curve["log_k"].as_array().unwrap();
        let worst = celsius.iter().zip(printed).map(|(celsius, printed)| {
            let kelvin = celsius.as_f64().unwrap() + 273.15;
            (log_k(&scope, &species, kelvin).unwrap() - printed.as_f64().unwrap()).abs()
        });
        let worst = worst.fold(0.0, f64::max);
        let key = curve["species"].to_string();
        if worst <= tolerance {
            met.insert(key);
        } else {
            missed.insert(key, format!("{id} by {worst:.4}"));
        }
    }
    // Where the sets have an equation, it is one of those published for the reaction.
    for (key, words) in missed.iter().filter(|(key, _)| !met.contains(*key)) {
        let names: BTreeMap<String, f64> = serde_json::from_str(key).unwrap();
        let by_equation = scope.reactions.iter().any(|reaction| {
            reaction.participants.len() == names.len()
                && reaction.participants.iter().all(|p| names.contains_key(&p.formula.name))
                && matches!(
                    reaction.constant.as_ref().map(|c| &c.value),
                    Some(lyate::problem::reaction::LogK::OfT(_))
                )
        });
        if by_equation {
            wrong.push(format!("{key}: {words}"));
        }
    }
    assert!(wrong.is_empty(), "{}", wrong.join("\n"));
    assert!(met.len() > 35, "{} curves are met", met.len());
}

/// Where the sets go by an enthalpy, or by another equation for the same acid, they move
/// with temperature as the published equations do. Those that the table calls doubtful are
/// left out; it says why.
#[test]
fn constants_move_with_temperature_as_others_found() {
    let scope = scope_of(&all_sets(&["redox"]));
    let reference = reference();
    let (mut seen, mut doubtful, mut wrong) = (0, 0, Vec::new());
    for curve in entries(&reference, "temperature") {
        let species = species(&curve);
        let celsius = curve["celsius"].as_array().unwrap();
        let printed = curve["log_k"].as_array().unwrap();
        let gap = |index: usize| {
            let kelvin = celsius[index].as_f64().unwrap() + 273.15;
            log_k(&scope, &species, kelvin).unwrap() - printed[index].as_f64().unwrap()
        };
        let at_25 = celsius.iter().position(|c| c.as_f64() == Some(25.0)).unwrap();
        let moved = (0..celsius.len()).map(|index| (gap(index) - gap(at_25)).abs());
        let moved = moved.fold(0.0, f64::max);
        if curve["doubtful"].is_string() {
            doubtful += 1;
        } else if moved > LARGEST_DRIFT {
            wrong.push(format!("{}: {moved:.3}", curve["id"]));
        }
        seen += 1;
    }
    assert!(wrong.is_empty(), "{}", wrong.join("\n"));
    assert!(seen > 75 && doubtful <= 4, "{seen} {doubtful}");
}

#[test]
fn enthalpies_are_published_ones() {
    let reference = reference();
    let mut met = 0;
    for entry in entries(&reference, "constants") {
        let Some(enthalpies) = entry["enthalpies"].as_array() else { continue };
        let names = species(&entry);
        for set in newest() {
            for reaction in &definitions(set).reactions {
                let same = reaction.participants.len() == names.len()
                    && reaction
                        .participants
                        .iter()
                        .all(|p| names.get(&*p.formula.name) == p.coefficient.to_f64().as_ref());
                let Some(ours) = reaction.enthalpy.filter(|_| same) else { continue };
                let ours = ours / 1000.0;
                let near = enthalpies
                    .iter()
                    .any(|e| (e["kj"].as_f64().unwrap() - ours).abs() <= ENTHALPY_TOLERANCE);
                assert!(near, "{}: {ours} kJ/mol, {enthalpies:?}", reaction.equation);
                met += 1;
            }
        }
    }
    assert!(met > 60, "{met}");
}
