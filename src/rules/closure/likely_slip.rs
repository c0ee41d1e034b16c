//! What would most simply explain an ion balance that does not close: a unit or a basis
//! taken for another, an ion entered as none, or one ion too low. Only ever a suggestion.

use crate::chemistry::formula::{Formula, canonical};
use crate::chemistry::quantity::{Basis, to_amount};
use crate::chemistry::unit::{Dimension, Unit};
use crate::equilibrium::quantities::Solved;
use crate::problem::model::AmountSource;
use crate::problem::scope::PROTON;
use crate::rules::context::Context;
use crate::rules::figures::significant;
use crate::rules::ion_balance::{Criterion, IonBalance, per_litre};
use crate::text::tree::{Quantity, Statement};

/// The ions that a difference is most often put to, by sign of their charge (common
/// practice: sodium, the last to be measured, or chloride).
const USUAL: [(&str, f64); 2] = [("Na+", 1.0), ("Cl-", -1.0)];

/// In a few words, the end of a sentence; none where nothing simple explains it.
pub fn likely_slip(context: &Context, solved: &Solved, balance: &IonBalance) -> Option<String> {
    // A zero stands there for all to see; another reading may close a balance by chance.
    entered_as_none(context, balance)
        .or_else(|| other_reading(context, solved, balance))
        .or_else(|| one_ion(context, balance))
}

/// A total that closes the balance when its figure is read in another unit or basis.
fn other_reading(context: &Context, solved: &Solved, balance: &IonBalance) -> Option<String> {
    let problem = context.problem;
    let milli = 1000.0 * per_litre(problem);
    let mut best: Option<(f64, String)> = None;
    for written in context.statements {
        let Statement::Total { component, value } = written.statement() else { continue };
        let Some(j) = problem.scope.component(&canonical(&component.value)) else { continue };
        if problem.amounts[j].source != AmountSource::Total || value.number.value <= 0.0 {
            continue;
        }
        let charge = milli * charge_brought(context, solved, j);
        if charge == 0.0 {
            continue;
        }
        let formula = &problem.scope.components[j].formula;
        for (ratio, words) in readings(context, formula, value) {
            let (cations, anions) = if charge > 0.0 {
                (balance.cation_sum + (ratio - 1.0) * charge, balance.anion_sum)
            } else {
                (balance.cation_sum, balance.anion_sum - (ratio - 1.0) * charge)
            };
            let off = (cations - anions).abs() / (cations + anions);
            // Twice as near as what is asked for: chance alone closes some balances.
            let closes = Criterion::at(anions).accepts(anions + 2.0 * (cations - anions), anions);
            if closes && best.as_ref().is_none_or(|(least, _)| off < *least) {
                let name = &formula.name;
                best = Some((off, format!("it would close with the {name} {words}")));
            }
        }
    }
    best.map(|(_, words)| words)
}

/// Charge that a component brings at the held pH, eq per litre or kilogram; complexes with
/// other components left out.
fn charge_brought(context: &Context, solved: &Solved, component: usize) -> f64 {
    let species = &context.problem.scope.stoichiometry.species;
    let own = species.iter().zip(&solved.answer.concentrations).filter(|(species, _)| {
        species.row.iter().any(|&(j, _)| j == component)
            && species.row.iter().all(|&(j, _)| j == component || j == PROTON)
    });
    own.map(|(species, c)| f64::from(species.charge) * c).sum()
}

/// Other readings of a figure: how many times as much they make it, and their words.
fn readings(context: &Context, formula: &Formula, value: &Quantity) -> Vec<(f64, String)> {
    let Some(unit) = value.unit.as_ref().and_then(|unit| Unit::parse(&unit.value).ok()) else {
        return Vec::new();
    };
    let groups = &context.problem.scope.groups;
    let basis = |text: &str| Basis::parse(text, groups).ok();
    let written = value.basis.as_ref().and_then(|name| basis(&name.value));
    let amount = |unit: Unit, basis: Option<&Basis>| {
        to_amount(value.number.value, unit, basis, formula).ok().map(|amount| amount.value)
    };
    let Some(now) = amount(unit, written.as_ref()) else { return Vec::new() };
    let mut found = Vec::new();
    let mut say = |other: Option<f64>, words: String| {
        if let Some(other) = other.filter(|other| *other != now) {
            found.push((other / now, words));
        }
    };
    match unit.dimension {
        Dimension::MassPerLitre | Dimension::MassPerKilogram => {
            for text in ["CaCO3", "N", "P", "S", "C"] {
                let other = basis(text);
                if other.is_some() && other != written {
                    let words = format!("read as {} as {text}", unit.name);
                    say(amount(unit, other.as_ref()), words);
                }
            }
            if written.is_some() {
                say(amount(unit, None), format!("read as {} of the ion itself", unit.name));
            }
            if written == Some(Basis::CalciumCarbonate) && formula.charge == -2 {
                let words = "doubled, as an alkalinity by HCO3- counts one equivalent to each";
                say(Some(2.0 * now), words.to_owned());
            }
        }
        Dimension::AmountPerLitre if unit.name == "mmol/L" => {
            say(amount_of("meq/L", value, formula), "read as meq/L".to_owned());
        }
        Dimension::EquivalentsPerLitre if unit.name == "meq/L" => {
            say(amount_of("mmol/L", value, formula), "read as mmol/L".to_owned());
        }
        _ => {}
    }
    found
}

fn amount_of(unit: &str, value: &Quantity, formula: &Formula) -> Option<f64> {
    let unit = Unit::parse(unit).ok()?;
    Some(to_amount(value.number.value, unit, None, formula).ok()?.value)
}

/// An ion of the side that lacks charge, listed and given as zero.
fn entered_as_none(context: &Context, balance: &IonBalance) -> Option<String> {
    let problem = context.problem;
    let wanted = -balance.difference();
    let zero = (1..problem.amounts.len()).find(|&j| {
        let amount = &problem.amounts[j];
        amount.source == AmountSource::Total
            && amount.total == Some(0.0)
            && f64::from(problem.scope.components[j].formula.charge) * wanted > 0.0
    })?;
    let formula = &problem.scope.components[zero].formula;
    let size = in_milligrams(formula, wanted.abs())?;
    Some(format!("{} is entered as none, and {size} of it would close the balance", formula.name))
}

/// More of the ion that such a difference is most often put to, where it is listed.
fn one_ion(context: &Context, balance: &IonBalance) -> Option<String> {
    let wanted = -balance.difference();
    let (name, _) = USUAL.iter().find(|(_, sign)| sign * wanted > 0.0)?;
    let scope = &context.problem.scope;
    let formula = &scope.components[scope.component(name)?].formula;
    let size = in_milligrams(formula, wanted.abs())?;
    Some(format!("{size} more of {name}, most often the ion in doubt, would close it"))
}

/// `23 mg/L`, from meq/L of an ion.
fn in_milligrams(formula: &Formula, meq: f64) -> Option<String> {
    let mass = formula.molar_mass()? / f64::from(formula.equivalents()?);
    Some(format!("{} mg/L", significant(meq * mass, 2)))
}
