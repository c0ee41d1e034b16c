//! What `lyate derive --output json` writes: stable, versioned by its `schema` field.
//! Coefficients and factors are exact: whole numbers, or fractions as text such as `1/2`.

use num_rational::Rational64;
use serde_json::{Value, json};

use super::{Derivation, Mass, Protons, simplified};
use crate::balance::proton::Reason;
use crate::report::sheet::{Entry, Sheet, side};
use crate::report::source::FileReport;

pub fn json(file: &FileReport, title: Option<&str>, derivations: &[Derivation]) -> String {
    let value = json!({
        "schema": 1,
        "file": file.source.name,
        "problem": title,
        "derivations": derivations.iter().map(one).collect::<Vec<_>>(),
    });
    format!("{value:#}")
}

fn one(derivation: &Derivation) -> Value {
    let mut value = json!({
        "case": derivation.case,
        "mass_balances": derivation.masses.iter().map(mass).collect::<Vec<_>>(),
        "charge_balance": sheet(&derivation.charge),
        "ph_held": derivation.ph_held,
    });
    if let Some(ph) = derivation.ph {
        value["ph"] = json!(ph);
    }
    if let Some(condition) = &derivation.protons {
        value["proton_condition"] = protons(condition);
    }
    value
}

fn sheet(sheet: &Sheet) -> Value {
    let entries = |entries: &[Entry]| entries.iter().map(entry).collect::<Vec<_>>();
    let mut value = json!({
        "equation": sheet.equation(),
        "left": entries(&sheet.left),
        "right": entries(&sheet.right),
    });
    if let Some((left, right)) = simplified(sheet) {
        value["simplified"] = format!("{} = {}", side(&left), side(&right)).into();
    }
    value
}

fn entry(entry: &Entry) -> Value {
    let mut value = json!({
        "term": entry.words,
        "coefficient": exact(entry.coefficient),
        "dominant": entry.dominant,
    });
    if let Some(amount) = entry.value {
        value["value"] = json!(amount);
    }
    if let Some(shift) = entry.ph_shift {
        value["ph_shift_without"] = json!(shift);
    }
    value
}

fn mass(mass: &Mass) -> Value {
    let mut value = sheet(&mass.sheet);
    value["component"] = mass.component.as_str().into();
    let sources = mass
        .sources
        .iter()
        .flatten()
        .map(|source| json!({"term": source.words, "coefficient": exact(source.coefficient)}));
    value["total_from"] = sources.collect();
    value
}

fn protons(protons: &Protons) -> Value {
    let mut value = sheet(&protons.sheet);
    value["charge_factor"] = protons.charge_factor.into();
    let factors = protons.mass_factors.iter().zip(protons.lambdas());
    value["mass_factors"] = factors
        .map(|((component, factor), (_, lambda))| {
            json!({"component": component, "factor": exact(*factor), "lambda": exact(lambda)})
        })
        .collect();
    let references = protons.references.iter().map(|reference| {
        let (reason, amount) = match reference.reason {
            Reason::Held => ("held", None),
            Reason::Chosen => ("chosen", None),
            Reason::Added(amount) => ("added", Some(amount)),
            Reason::SmallestConstant => ("smallest-constant", None),
        };
        let mut value =
            json!({"form": reference.form, "charge": reference.charge, "reason": reason});
        if let Some(amount) = amount {
            value["amount"] = json!(amount);
        }
        value
    });
    value["reference_level"] = references.collect();
    let alternatives = protons.alternatives.iter().map(|other| {
        json!({
            "form": other.form,
            "amount": other.amount,
            "instead_of": other.instead_of,
            "equation": other.sheet.equation(),
        })
    });
    value["alternatives"] = alternatives.collect();
    value
}

fn exact(value: Rational64) -> Value {
    if value.is_integer() { value.to_integer().into() } else { value.to_string().into() }
}
