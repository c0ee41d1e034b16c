//! Targets: `hold … by`, a value that the amount of one reagent or a component's total is to
//! be found for.

use num_traits::{ToPrimitive, Zero};

use super::amounts;
use super::case::CaseResolver;
use super::defect::DefectKind;
use super::effective::{Written, subject_key};
use super::expect;
use super::input::Input;
use super::model::{Amount, AmountSource, Problem, Reagent, ShownUnit, Sought, Target, Unknown};
use super::scope::PROTON;
use super::sparse::coefficient;
use super::uncertain::Carries;
use crate::text::span::{Place, Spanned};
use crate::text::tree::{By, Name, Quantity, Statement, Strength, Subject};

/// Reads the targets in force. What `add` or `total` said of the amount that one makes unknown
/// is replaced.
pub fn read(case: &mut CaseResolver, problem: &mut Problem) {
    for written in case.statements {
        let Statement::Hold { subject, value, by: Some(by) } = written.statement() else {
            continue;
        };
        let read = target(case, problem, written, (subject, value, by));
        case.all_amounts_read &= read.is_some();
    }
}

/// None where it could not be read.
fn target(
    case: &mut CaseResolver,
    problem: &mut Problem,
    written: &Written,
    (subject, value, by): (&Spanned<Subject>, &Quantity, &Spanned<By>),
) -> Option<()> {
    let (at, by_at) = (written.place(subject.span), written.place(by.span));
    if let Subject::Dose(_) = subject.value {
        let subject = subject_key(&subject.value);
        case.resolver.report(at, DefectKind::CannotBeHeld { subject });
        return None;
    }
    let unknown = match &by.value {
        By::Reagent(name, strength) => {
            let index = reagent(case, problem, written, name, strength.as_deref())?;
            Unknown::Reagent(index)
        }
        By::Total(name) => {
            let component = case.component(written, name)?;
            if component == PROTON {
                let kind = DefectKind::NothingFree { subject: "total H+".into(), given: None };
                case.resolver.report(by_at, kind);
                return None;
            }
            Unknown::Total(component)
        }
    };
    let sought = expect::sought(case, problem, written, subject)?;
    let read = expect::value(case, problem, written, value, sought)?;
    let sought = match sought {
        Sought::ChargeImbalance { .. } => Sought::ChargeImbalance { equivalents: read.equivalents },
        other => other,
    };
    possible(case, written.place(value.span), value, sought, read.value)?;
    let words = subject_key(&subject.value);
    if let Some(other) = problem.targets.iter().find(|other| other.unknown == unknown) {
        let name = problem.unknown_name(unknown);
        case.resolver.report(by_at, DefectKind::FoundTwice { name, other: other.by });
        return None;
    }
    let is_ph = |sought: Sought| matches!(sought, Sought::Ph | Sought::Poh);
    let same = |other: &&Target| other.sought == sought || is_ph(other.sought) && is_ph(sought);
    if let Some(other) = problem.targets.iter().find(same) {
        case.resolver.report(at, DefectKind::HeldTwice { subject: words, other: other.at });
        return None;
    }
    if stands_still(problem, sought, unknown) {
        let by = problem.unknown_name(unknown);
        case.resolver.report(by_at, DefectKind::NotMoved { subject: words, by });
        return None;
    }
    let index = problem.targets.len();
    let carries = match sought {
        Sought::Ph | Sought::Poh | Sought::Pe | Sought::SaturationIndex(_) => Carries::Logarithm,
        Sought::Alkalinity | Sought::ChargeImbalance { .. } => Carries::Signed,
        _ => Carries::Positive,
    };
    let input = (Input::Target(index), carries);
    case.keep_uncertainty(problem, (written, value), input, &read, words.clone());
    match unknown {
        Unknown::Reagent(reagent) => {
            let reagent = &mut problem.reagents[reagent];
            (reagent.amount, reagent.brings, reagent.target) = (0.0, 0.0, Some(index));
        }
        Unknown::Total(j) => {
            let source = AmountSource::Found(index);
            problem.amounts[j] = Amount { total: None, at: Some(by_at), source };
        }
    }
    problem.targets.push(Target {
        at,
        by: by_at,
        words,
        sought,
        wanted: read.value,
        unit: read.words.map(|words| ShownUnit { words, factor: read.per_unit }),
        unknown,
    });
    Some(())
}

/// The reagent that `by` names, among those of the problem. `add` has said what it is and how
/// it is bought; a strength after `by` goes before that.
fn reagent(
    case: &mut CaseResolver,
    problem: &mut Problem,
    written: &Written,
    name: &Name,
    strength: Option<&Strength>,
) -> Option<usize> {
    let formula = amounts::neutral(case, written, name, false)?;
    let stock = match strength {
        Some(strength) => {
            let (stock, _) = case.stock(written, strength, &formula)?;
            // The moles that bring a water to its target are the same however strong they come.
            case.resolver.carries_nothing(written, &strength.value);
            if let Some(density) = &strength.density {
                case.resolver.carries_nothing(written, density);
            }
            Some(stock)
        }
        None => None,
    };
    let known = problem.reagents.iter().position(|r| r.formula.name == formula.name);
    if let Some(index) = known {
        let reagent = &mut problem.reagents[index];
        reagent.stock = stock.or(reagent.stock.take());
        return Some(index);
    }
    let at = written.place(name.span);
    let (row, giving) = amounts::row(case, written, name, &formula, None)?;
    problem.reagents.push(Reagent {
        formula,
        at,
        amount: 0.0,
        brings: 0.0,
        stock,
        target: None,
        row,
        giving,
    });
    Some(problem.reagents.len() - 1)
}

/// Whether a value can be met by any water at all; a defect where not.
fn possible(
    case: &mut CaseResolver,
    at: Place,
    quantity: &Quantity,
    sought: Sought,
    value: f64,
) -> Option<()> {
    let above_zero = match sought {
        Sought::Concentration(_) => Some("a concentration is above zero"),
        Sought::Activity(_) => Some("an activity is above zero"),
        Sought::Pressure(_) => Some("a pressure is above zero"),
        Sought::IonicStrength => Some("an ionic strength is above zero"),
        Sought::BufferCapacity => Some("a buffer capacity is above zero"),
        Sought::Total(_) => Some("a total is above zero"),
        _ => None,
    };
    // More than all of it is no uncertainty of a value.
    let uncertain = quantity
        .uncertainty
        .as_ref()
        .is_some_and(|uncertainty| uncertainty.percent && uncertainty.number.value > 100.0);
    let why = match (sought, above_zero) {
        (_, Some(why)) if value <= 0.0 => why,
        (Sought::Fraction { .. }, _) if !(0.0 < value && value < 1.0) => {
            "a share lies between 0 and 100 %"
        }
        (Sought::ChargeImbalance { equivalents: false }, _) if value.abs() >= 100.0 => {
            "an imbalance lies between −100 and 100 %"
        }
        (Sought::Ph | Sought::Poh, _) if !(-2.0..=16.0).contains(&value) => {
            "a pH is looked for between −2 and 16"
        }
        _ if uncertain => "an uncertainty is less than all of it",
        _ => return Some(()),
    };
    case.resolver.report(at, DefectKind::ImpossibleValue { why });
    None
}

/// Whether the unknown has no part in a quantity whatever the water.
fn stands_still(problem: &Problem, sought: Sought, unknown: Unknown) -> bool {
    let Sought::Total(j) = sought else { return false };
    match unknown {
        Unknown::Total(other) => j != other,
        Unknown::Reagent(index) => {
            let reagent = &problem.reagents[index];
            let held = coefficient(&reagent.row, j);
            let dilutes = reagent.stock.as_ref().is_some_and(|stock| stock.litres() > 0.0);
            !dilutes && (held.is_zero() || held.to_f64() == Some(0.0))
        }
    }
}
