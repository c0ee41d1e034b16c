//! What the answer must meet: each `expect` with its quantity and its limit in base units.

use super::case::CaseResolver;
use super::defect::{DefectKind, Expected};
use super::effective::{Written, subject_key};
use super::model::{Expectation, Limit, ShownUnit, Sought};
use super::quantity::{Read, with_unit_of};
use crate::chemistry::formula::{Formula, Phase};
use crate::text::span::Spanned;
use crate::text::tree::{Name, Quantity, Relation, Statement, Subject};

pub fn read(case: &mut CaseResolver) -> Vec<Expectation> {
    let mut expectations = Vec::new();
    for written in case.statements {
        let Statement::Expect { subject, relation, source, .. } = written.statement() else {
            continue;
        };
        let Some(mut sought) = sought(case, written, subject) else { continue };
        let formula = match sought {
            Sought::Concentration(species) => Some(case.scope.species[species].clone()),
            Sought::Total(component) => Some(case.scope.components[component].formula.clone()),
            _ => None,
        };
        let expected = takes(sought);
        let mut value =
            |quantity: &Quantity| read_as(case, written, quantity, expected, formula.as_deref());
        let limit = match relation {
            Relation::Equal(quantity) => value(quantity).map(|read| {
                let tolerance = read
                    .uncertainty
                    .unwrap_or(read.per_unit * quantity.number.half_digit * (1.0 + 1e-9));
                (Limit::Within { value: read.value, tolerance }, read)
            }),
            Relation::Less(q) => {
                value(q).map(|r| (Limit::Below { value: r.value, or_equal: false }, r))
            }
            Relation::LessOrEqual(q) => {
                value(q).map(|r| (Limit::Below { value: r.value, or_equal: true }, r))
            }
            Relation::Greater(q) => {
                value(q).map(|r| (Limit::Above { value: r.value, or_equal: false }, r))
            }
            Relation::GreaterOrEqual(q) => {
                value(q).map(|r| (Limit::Above { value: r.value, or_equal: true }, r))
            }
            Relation::Between(low, high) => value(&with_unit_of(low, high))
                .zip(value(high))
                .map(|(low, high)| (Limit::Between { low: low.value, high: high.value }, high)),
        };
        let Some((limit, read)) = limit else { continue };
        if let Sought::ChargeImbalance { equivalents } = &mut sought {
            *equivalents = read.equivalents;
        }
        expectations.push(Expectation {
            at: written.whole(),
            sought,
            words: subject_key(&subject.value),
            limit,
            unit: read.words.map(|words| ShownUnit { words, factor: read.per_unit }),
            source: source.as_ref().map(|source| source.value.clone()),
        });
    }
    expectations
}

fn takes(sought: Sought) -> Expected {
    match sought {
        Sought::Ph
        | Sought::Poh
        | Sought::Pe
        | Sought::Activity(_)
        | Sought::SaturationIndex(_) => Expected::Plain,
        Sought::Potential => Expected::Potential,
        Sought::Concentration(_)
        | Sought::Total(_)
        | Sought::IonicStrength
        | Sought::BufferCapacity => Expected::Concentration,
        Sought::Pressure(_) => Expected::Pressure,
        Sought::Fraction { .. } => Expected::Share,
        Sought::Alkalinity | Sought::Acidity => Expected::Equivalents,
        Sought::Hardness | Sought::CarbonateHardness => Expected::Hardness,
        Sought::ChargeImbalance { .. } => Expected::Imbalance,
    }
}

fn read_as(
    case: &mut CaseResolver,
    written: &Written,
    quantity: &Quantity,
    expected: Expected,
    formula: Option<&Formula>,
) -> Option<Read> {
    match expected {
        Expected::Pressure => case.pressure_read(written, quantity),
        Expected::Plain | Expected::Share => case.number(written, quantity, expected),
        Expected::Imbalance => case.imbalance(written, quantity),
        Expected::Potential => case.potential(written, quantity),
        Expected::Hardness => case.hardness(written, quantity),
        _ => case.concentration(written, quantity, formula, expected),
    }
}

fn sought(
    case: &mut CaseResolver,
    written: &Written,
    subject: &Spanned<Subject>,
) -> Option<Sought> {
    let is_aqueous = |phase: &Phase| *phase == Phase::Aqueous;
    let dissolved = |case: &mut CaseResolver, name: &Name| {
        let species = in_phase(case, written, name, is_aqueous, "a dissolved species")?;
        // Water and the electron have an activity and no concentration.
        if case.scope.row_of(species).is_none() {
            let name_text = case.scope.species[species].name.clone();
            let kind = DefectKind::WrongPhase { name: name_text, needs: "a dissolved species" };
            case.resolver.report(written.place(name.span), kind);
            return None;
        }
        Some(species)
    };
    Some(match &subject.value {
        Subject::Ph => Sought::Ph,
        Subject::Poh => Sought::Poh,
        Subject::Pe | Subject::Potential => {
            if case.scope.component("e-").is_none() {
                let kind = DefectKind::DoesNotBelong {
                    name: "e-".into(),
                    missing: vec!["e-".into()],
                    nearest: None,
                };
                case.resolver.report(written.place(subject.span), kind);
                return None;
            }
            if subject.value == Subject::Pe { Sought::Pe } else { Sought::Potential }
        }
        Subject::Concentration(name) => Sought::Concentration(dissolved(case, name)?),
        Subject::Activity(name) => {
            let needs = "a dissolved species";
            Sought::Activity(in_phase(case, written, name, is_aqueous, needs)?)
        }
        Subject::Pressure(name) => {
            let is_gas = |phase: &Phase| *phase == Phase::Gas;
            Sought::Pressure(in_phase(case, written, name, is_gas, "a gas")?)
        }
        Subject::SaturationIndex(name) => {
            let is_solid = |phase: &Phase| matches!(phase, Phase::Solid(_));
            Sought::SaturationIndex(in_phase(case, written, name, is_solid, "a solid")?)
        }
        Subject::Total(name) => Sought::Total(case.component(written, name)?),
        Subject::Fraction(name) => {
            let species = dissolved(case, name)?;
            let made = case.scope.belonging.made[species].as_ref()?;
            let electron = case.scope.component("e-");
            let counts = |&j: &usize| j != super::scope::PROTON && Some(j) != electron;
            let others: Vec<_> = made.row.iter().map(|&(j, _)| j).filter(counts).collect();
            match others[..] {
                [component, ..] => Sought::Fraction { species, component },
                [] => {
                    let species = case.scope.species[species].name.clone();
                    let kind = DefectKind::HasNoShare { name: species };
                    case.resolver.report(written.place(name.span), kind);
                    return None;
                }
            }
        }
        Subject::Alkalinity => Sought::Alkalinity,
        Subject::Acidity => Sought::Acidity,
        Subject::Hardness => Sought::Hardness,
        Subject::CarbonateHardness => Sought::CarbonateHardness,
        Subject::IonicStrength => Sought::IonicStrength,
        Subject::BufferCapacity => Sought::BufferCapacity,
        Subject::ChargeImbalance => Sought::ChargeImbalance { equivalents: false },
        Subject::Dose(_) => {
            case.resolver.report(written.whole(), DefectKind::NotYetSupported { what: "dose" });
            return None;
        }
    })
}

fn in_phase(
    case: &mut CaseResolver,
    written: &Written,
    name: &Name,
    fits: impl Fn(&Phase) -> bool,
    needs: &'static str,
) -> Option<usize> {
    let species = case.species(written, name)?;
    if fits(&case.scope.species[species].phase) {
        return Some(species);
    }
    let name_text = case.scope.species[species].name.clone();
    let kind = DefectKind::WrongPhase { name: name_text, needs };
    case.resolver.report(written.place(name.span), kind);
    None
}
