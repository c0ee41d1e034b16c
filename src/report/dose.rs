//! Doses in words: the amount that was found, as it is weighed or pumped.

use serde::Serialize;

use super::figures::{concentration, decimals, scale_unit, significant};
use super::style::Style;
use super::table::{Side, Table};
use crate::chemistry::quantity::Scale;
use crate::equilibrium::dose::{measures, per_litre};
use crate::problem::model::{Problem, Reagent, Target, Unknown};

/// What was found for each target, for one litre or kilogram of the water treated.
pub fn found(problem: &Problem) -> impl Iterator<Item = (&Target, f64)> {
    problem.targets.iter().zip(problem.found.iter().flatten().copied())
}

/// `L`, or `kg` of water.
fn per(problem: &Problem) -> &'static str {
    match problem.scale {
        Scale::PerLitre => "L",
        Scale::PerKilogram => "kg",
    }
}

/// A mass in the unit that leaves one to three digits before the point.
fn mass(grams: f64, per: &str) -> String {
    let (factor, unit) = match grams.abs() {
        g if g >= 1.0 || g == 0.0 => (1.0, "g"),
        g if g >= 1e-3 => (1e3, "mg"),
        _ => (1e6, "µg"),
    };
    format!("{} {unit}/{per}", significant(grams * factor, 3))
}

fn volume(millilitres: f64, per: &str) -> String {
    let (factor, unit) = match millilitres.abs() {
        v if v >= 1e3 => (1e-3, "L"),
        v if v >= 1e-2 || v == 0.0 => (1.0, "mL"),
        _ => (1e3, "µL"),
    };
    format!("{} {unit}/{per}", significant(millilitres * factor, 3))
}

/// `0.935 mL/L of 30 % NaOH`; as a mass where its density is not known; none of a pure reagent.
pub fn stock_words(problem: &Problem, reagent: &Reagent) -> Option<String> {
    let stock = reagent.stock.as_ref()?;
    let measures = measures(reagent, reagent.amount);
    let per = per(problem);
    let much = match (measures.stock_millilitres, measures.stock_grams) {
        (Some(millilitres), _) => volume(millilitres, per),
        (None, grams) => mass(grams?, per),
    };
    Some(format!("{much} of {}", stock.words))
}

/// The doses as a table; empty where none was looked for.
pub fn table(problem: &Problem, style: Style) -> String {
    let mut table = Table::new(&[
        ("", Side::Left),
        ("amount", Side::Left),
        ("pure", Side::Left),
        ("as bought", Side::Left),
        ("", Side::Left),
    ]);
    for (target, amount) in found(problem) {
        let (pure, bought, weight) = match target.unknown {
            Unknown::Reagent(index) => {
                let reagent = &problem.reagents[index];
                let measures = measures(reagent, reagent.amount);
                let weight = measures.stock_grams.filter(|_| measures.stock_millilitres.is_some());
                let density = reagent.stock.as_ref().and_then(|stock| stock.density);
                let weight = weight.zip(density).map(|(grams, density)| {
                    format!("{}, {} kg/L", mass(grams, per(problem)), decimals(density, 3))
                });
                (measures.grams, stock_words(problem, reagent), weight)
            }
            Unknown::Total(j) => {
                let grams = problem.scope.components[j].formula.molar_mass();
                (grams.map(|grams| grams * amount), None, None)
            }
        };
        table.row([
            problem.unknown_name(target.unknown).into(),
            concentration(amount, problem.scale).into(),
            pure.map_or_else(String::new, |grams| mass(grams, per(problem))).into(),
            bought.unwrap_or_default().into(),
            weight.unwrap_or_default().into(),
        ]);
    }
    if table.is_empty() {
        return String::new();
    }
    let mut text = table.render(style);
    text += &match problem.dilution() {
        1.0 => format!("  for each {} of the water treated\n", unit_words(problem)),
        dilution => format!(
            "  for each {} of the water treated, which becomes {} {}\n",
            unit_words(problem),
            significant(dilution, 6),
            per(problem)
        ),
    };
    text
}

fn unit_words(problem: &Problem) -> &'static str {
    match problem.scale {
        Scale::PerLitre => "litre",
        Scale::PerKilogram => "kilogram",
    }
}

/// `9.31 mmol/L NaOH, 0.935 mL/L of 30 % NaOH`.
pub fn line(problem: &Problem, target: &Target, amount: f64) -> String {
    let name = problem.unknown_name(target.unknown);
    let mut line = format!("{} {name}", concentration(amount, problem.scale));
    if let Unknown::Reagent(index) = target.unknown
        && let Some(words) = stock_words(problem, &problem.reagents[index])
    {
        line += &format!(", {words}");
    }
    line
}

/// A dose for programs.
#[derive(Serialize)]
pub struct DoseJson {
    /// The reagent; absent where a component's total was found.
    #[serde(skip_serializing_if = "Option::is_none")]
    reagent: Option<String>,
    #[serde(skip_serializing_if = "Option::is_none")]
    total: Option<String>,
    /// The quantity that it meets the target of.
    quantity: String,
    /// On the problem's scale, for one litre or kilogram of the water treated.
    amount: f64,
    unit: &'static str,
    /// Of the pure substance, per litre of the water treated.
    #[serde(skip_serializing_if = "Option::is_none")]
    grams_per_litre: Option<f64>,
    #[serde(skip_serializing_if = "Option::is_none")]
    stock: Option<StockJson>,
}

#[derive(Serialize)]
struct StockJson {
    strength: String,
    /// kg/L
    #[serde(skip_serializing_if = "Option::is_none")]
    density: Option<f64>,
    #[serde(skip_serializing_if = "Option::is_none")]
    millilitres_per_litre: Option<f64>,
    #[serde(skip_serializing_if = "Option::is_none")]
    grams_per_litre: Option<f64>,
}

pub fn json(problem: &Problem) -> Vec<DoseJson> {
    let onto = per_litre(problem);
    let of = |(target, amount): (&Target, f64)| {
        let (reagent, component) = match target.unknown {
            Unknown::Reagent(index) => (problem.reagents.get(index), None),
            Unknown::Total(j) => (None, Some(&problem.scope.components[j].formula)),
        };
        let measures = reagent.map(|reagent| measures(reagent, reagent.amount));
        let stock = reagent.and_then(|reagent| reagent.stock.as_ref()).zip(measures);
        DoseJson {
            reagent: reagent.map(|reagent| reagent.formula.name.clone()),
            total: component.map(|formula| formula.name.clone()),
            quantity: target.words.clone(),
            amount,
            unit: scale_unit(problem.scale),
            grams_per_litre: match component {
                Some(formula) => formula.molar_mass().map(|mass| mass * amount * onto),
                None => measures.and_then(|measures| measures.grams).map(|grams| grams * onto),
            },
            stock: stock.map(|(stock, measures)| StockJson {
                strength: stock.strength.clone(),
                density: stock.density,
                millilitres_per_litre: measures.stock_millilitres.map(|volume| volume * onto),
                grams_per_litre: measures.stock_grams.map(|grams| grams * onto),
            }),
        }
    };
    found(problem).map(of).collect()
}
