//! What became of each solid: formed, dissolved, absent, or only what its saturation is.

use super::figures::{concentration, decimals, log10_of_exp, scientific, significant};
use super::solution::in_phase;
use super::style::{Paint, Style};
use super::table::{Cell, Side, Table};
use crate::chemistry::formula::Phase;
use crate::chemistry::quantity::Scale;
use crate::equilibrium::quantities::Solved;
use crate::problem::model::{Presence, Problem, Solid};

/// What became of a solid of the problem.
#[derive(Clone, Copy, Debug, PartialEq)]
enum Fate {
    /// So much formed, mol per litre or kilogram.
    Formed(f64),
    /// So much of what is in excess dissolved.
    Dissolved(f64),
    /// It is not there; its saturation index, where what it is made of is present.
    Absent(Option<f64>),
}

fn fate(problem: &Problem, solved: &Solved, solid: &Solid) -> Fate {
    let amount = solved.precipitated(problem, solid.species).unwrap_or(0.0);
    let index = index(problem, solved, solid.species);
    match solid.presence {
        _ if amount > 0.0 => Fate::Formed(amount),
        Presence::Excess => Fate::Dissolved(-amount),
        Presence::Forms => Fate::Absent(index),
    }
}

/// The saturation index; none where something that the solid is made of is absent.
fn index(problem: &Problem, solved: &Solved, species: usize) -> Option<f64> {
    let index = log10_of_exp(solved.ln_activity(problem, species)?);
    index.is_finite().then_some(index)
}

/// `43.1 mg/L forms`, `12.4 mg/L dissolves`, `does not form, SI −0.41`.
pub fn fate_words(problem: &Problem, solved: &Solved, solid: &Solid) -> String {
    match fate(problem, solved, solid) {
        Fate::Formed(amount) => format!("{} forms", mass(problem, solid, amount)),
        Fate::Dissolved(amount) => format!("{} dissolves", mass(problem, solid, amount)),
        Fate::Absent(Some(index)) => format!("does not form, SI {}", decimals(index, 2)),
        Fate::Absent(None) => "does not form, part of it is absent".into(),
    }
}

/// An amount by mass, as `43.1 mg/L`; in moles where it has no molar mass.
fn mass(problem: &Problem, solid: &Solid, amount: f64) -> String {
    let formula = &problem.scope.species[solid.species];
    let per = match problem.scale {
        Scale::PerLitre => "L",
        Scale::PerKilogram => "kg",
    };
    match formula.molar_mass() {
        Some(grams) => format!("{} mg/{per}", significant(1000.0 * grams * amount, 3)),
        None => concentration(amount, problem.scale),
    }
}

/// Every solid that belongs to the problem, those that it states first.
pub fn table(problem: &Problem, solved: &Solved, style: Style) -> String {
    let units = match problem.scale {
        Scale::PerLitre => ("mol/L", "mg/L"),
        Scale::PerKilogram => ("mol/kg", "mg/kg"),
    };
    let mut table = Table::new(&[
        ("solid", Side::Left),
        ("saturation index", Side::Right),
        (units.0, Side::Right),
        (units.1, Side::Right),
        ("", Side::Left),
    ]);
    for solid in &problem.solids {
        let name = problem.solid_name(solid);
        let index = index(problem, solved, solid.species);
        let index = index.map_or(String::new(), |index| decimals(index, 2));
        let (amount, remark) = match fate(problem, solved, solid) {
            Fate::Formed(n) if solid.presence == Presence::Excess => {
                (Some(n), Cell::from("forms, in excess already"))
            }
            Fate::Formed(n) => (Some(n), Cell::painted(Paint::Heading, "forms")),
            Fate::Dissolved(n) => (Some(n), Cell::from("dissolves, the rest in excess")),
            Fate::Absent(Some(_)) => (None, Cell::from("does not form")),
            Fate::Absent(None) => (None, Cell::from("one of its parts is absent")),
        };
        let grams = problem.scope.species[solid.species].molar_mass();
        let mass = amount.zip(grams).map(|(n, grams)| significant(1000.0 * grams * n, 4));
        table.row([
            name.into(),
            index.into(),
            amount.map_or(String::new(), |n| scientific(n, 4)).into(),
            mass.unwrap_or_default().into(),
            remark,
        ]);
    }
    for s in in_phase(problem, |phase| matches!(phase, Phase::Solid(_))) {
        if problem.solids.iter().any(|solid| solid.species == s) {
            continue;
        }
        let (value, remark) = match index(problem, solved, s) {
            None => (String::new(), Cell::from("one of its parts is absent")),
            Some(index) if index > 0.005 => {
                let words = "supersaturated: it may precipitate";
                (decimals(index, 2), Cell::painted(Paint::Doubtful, words))
            }
            Some(index) => (decimals(index, 2), Cell::default()),
        };
        let name = problem.scope.species[s].name.as_str();
        table.row([name.into(), value.into(), Cell::default(), Cell::default(), remark]);
    }
    if table.is_empty() { String::new() } else { table.render(style) }
}
