//! What the answer must meet: each `expect` with its quantity and its limit in base units.

use super::case::CaseResolver;
use super::defect::{DefectKind, Expected};
use super::effective::{Written, subject_key};
use super::model::{Expectation, Limit, Problem, ShownUnit, Sought};
use super::quantity::{Read, with_unit_of};
use super::uncertain::Carries;
use crate::chemistry::formula::{Formula, Phase};
use crate::text::span::Spanned;
use crate::text::tree::{Name, Quantity, Relation, Statement, Subject};

pub fn read(case: &mut CaseResolver, problem: &Problem) -> Vec<Expectation> {
    let mut expectations = Vec::new();
    for written in case.statements {
        let Statement::Expect { subject, relation, source, confidence } = written.statement()
        else {
            continue;
        };
        let Some(mut sought) = sought(case, problem, written, subject) else { continue };
        let mut value = |quantity: &Quantity| value(case, problem, written, quantity, sought);
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
        look_at_uncertainty(case, written, sought, relation, &read);
        let confidence = confidence.as_ref().and_then(|q| self::confidence(case, written, q));
        if let Sought::ChargeImbalance { equivalents } = &mut sought {
            *equivalents = read.equivalents;
        }
        expectations.push(Expectation {
            at: written.whole(),
            sought,
            words: subject_key(&subject.value),
            limit,
            confidence,
            unit: read.words.map(|words| ShownUnit { words, factor: read.per_unit }),
            source: source.as_ref().map(|source| source.value.clone()),
        });
    }
    expectations
}

/// The `±` of a wanted value is its tolerance; a limit has none.
fn look_at_uncertainty(
    case: &mut CaseResolver,
    written: &Written,
    sought: Sought,
    relation: &Relation,
    read: &Read,
) {
    let resolver = &mut case.resolver;
    match relation {
        Relation::Equal(quantity) => {
            let logarithm = matches!(
                sought,
                Sought::Ph | Sought::Poh | Sought::Pe | Sought::SaturationIndex(_)
            );
            resolver.carried(written, quantity, Carries::Tolerance { logarithm }, read);
        }
        Relation::Less(quantity)
        | Relation::LessOrEqual(quantity)
        | Relation::Greater(quantity)
        | Relation::GreaterOrEqual(quantity) => resolver.carries_nothing(written, quantity),
        Relation::Between(low, high) => {
            resolver.carries_nothing(written, low);
            resolver.carries_nothing(written, high);
        }
    }
}

/// A probability above a half and below one.
fn confidence(case: &mut CaseResolver, written: &Written, quantity: &Quantity) -> Option<f64> {
    let read = case.number(written, quantity, Expected::Share)?;
    case.resolver.carries_nothing(written, quantity);
    if read.value > 0.5 && read.value < 1.0 {
        return Some(read.value);
    }
    case.resolver.report(written.place(quantity.span), DefectKind::ConfidenceOutOfRange);
    None
}

/// A value that a quantity is held against, in its base units.
pub(super) fn value(
    case: &mut CaseResolver,
    problem: &Problem,
    written: &Written,
    quantity: &Quantity,
    sought: Sought,
) -> Option<Read> {
    let formula = match sought {
        Sought::Concentration(species) | Sought::Precipitated(species) => {
            Some(case.scope.species[species].clone())
        }
        Sought::Total(component) => Some(case.scope.components[component].formula.clone()),
        Sought::Dose(reagent) => {
            let reagent = &problem.reagents[reagent];
            return case.dose(written, quantity, &reagent.formula, reagent.stock.as_deref());
        }
        _ => None,
    };
    read_as(case, written, quantity, takes(sought), formula.as_deref())
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
        | Sought::Precipitated(_)
        | Sought::Total(_)
        | Sought::IonicStrength
        | Sought::BufferCapacity
        | Sought::Dose(_) => Expected::Concentration,
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
        Expected::Pressure => case.pressure(written, quantity),
        Expected::Plain | Expected::Share => case.number(written, quantity, expected),
        Expected::Imbalance => case.imbalance(written, quantity),
        Expected::Potential => case.potential(written, quantity),
        Expected::Hardness => case.hardness(written, quantity),
        _ => case.concentration(written, quantity, formula, expected),
    }
}

pub(super) fn sought(
    case: &mut CaseResolver,
    problem: &Problem,
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
        Subject::Precipitated(name) => {
            let is_solid = |phase: &Phase| matches!(phase, Phase::Solid(_));
            let species = in_phase(case, written, name, is_solid, "a solid")?;
            if !problem.solids.iter().any(|solid| solid.species == species) {
                let name_text = case.scope.species[species].name.clone();
                let kind = DefectKind::SolidNotStated { name: name_text };
                case.resolver.report(written.place(name.span), kind);
                return None;
            }
            Sought::Precipitated(species)
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
        Subject::Dose(name) => {
            let formula = case.resolver.formula(written, name)?;
            let known = problem.reagents.iter().position(|r| r.formula.name == formula.name);
            let Some(reagent) = known else {
                let kind = DefectKind::NotAdded { name: formula.name.clone() };
                case.resolver.report(written.place(name.span), kind);
                return None;
            };
            Sought::Dose(reagent)
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
