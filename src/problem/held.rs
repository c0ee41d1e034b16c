//! Held values: what each fixes, and which total it makes unknown.

use num_traits::Zero;

use super::case::CaseResolver;
use super::defect::{DefectKind, Expected};
use super::effective::{Written, subject_key};
use super::input::Input;
use super::model::{AmountSource, Held, HeldWhat, Problem, Sought};
use super::quantity::Read;
use super::scope::PROTON;
use super::sparse::coefficient;
use super::uncertain::Carries;
use crate::chemistry::constant::pe_of_potential;
use crate::chemistry::formula::Phase;
use crate::text::tree::{Name, Quantity, Statement, Subject};

pub fn read(case: &mut CaseResolver, problem: &mut Problem) {
    read_values(case, problem);
    // A target of what is held already has nothing to find.
    for target in &problem.targets {
        let held = problem.held.iter().find(|held| is_same(case, held.what, target.sought));
        if let Some(held) = held {
            let kind = DefectKind::HeldTwice { subject: target.words.clone(), other: held.at };
            case.resolver.report(target.at, kind);
        }
    }
}

/// Whether a held value and a target are about one quantity.
fn is_same(case: &CaseResolver, held: HeldWhat, sought: Sought) -> bool {
    let is_proton = |species: usize| case.scope.species[species].is_proton();
    match (held, sought) {
        (HeldWhat::Ph(_), Sought::Ph | Sought::Poh) | (HeldWhat::Pe(_), Sought::Pe) => true,
        (HeldWhat::Ph(_), Sought::Activity(species)) => is_proton(species),
        (HeldWhat::Pressure { species, .. }, Sought::Pressure(other))
        | (HeldWhat::Activity { species, .. }, Sought::Activity(other))
        | (HeldWhat::Concentration { species, .. }, Sought::Concentration(other)) => {
            species == other
        }
        _ => false,
    }
}

fn read_values(case: &mut CaseResolver, problem: &mut Problem) {
    for written in case.statements {
        let Statement::Hold { subject, value, by } = written.statement() else { continue };
        // With `by` it is a target and no held value.
        if by.is_some() {
            continue;
        }
        let found = what(case, written, &subject.value, value, subject.span);
        let Some((what, carries, read)) = found else {
            case.all_amounts_read = false;
            continue;
        };
        let at = written.place(subject.span);
        if let Some(other) = problem.held.iter().find(|held| fixes_the_same(held.what, what)) {
            let (subject, other) = (subject_key(&subject.value), other.at);
            case.resolver.report(at, DefectKind::HeldTwice { subject, other });
            continue;
        }
        let releases = match what {
            HeldWhat::Ph(_) | HeldWhat::Pe(_) | HeldWhat::Pressure { .. } => None,
            HeldWhat::Activity { species, .. } | HeldWhat::Concentration { species, .. } => {
                match released(case, problem, species) {
                    Ok(component) => {
                        problem.amounts[component].source = AmountSource::Held(problem.held.len());
                        Some(component)
                    }
                    Err(given) => {
                        let subject = subject_key(&subject.value);
                        case.resolver.report(at, DefectKind::NothingFree { subject, given });
                        continue;
                    }
                }
            }
        };
        let input = Input::Held(problem.held.len());
        let words = format!("hold {}", subject_key(&subject.value));
        case.keep_uncertainty(problem, (written, value), (input, carries), &read, words);
        if let (HeldWhat::Ph(_), Carries::Positive) = (what, carries)
            && let Some(kept) = problem.uncertain.last_mut().filter(|kept| kept.input == input)
        {
            // An activity of H+ is held as its pH.
            kept.standard_uncertainty /= read.value * std::f64::consts::LN_10;
        }
        problem.held.push(Held { at, words: subject_key(&subject.value), what, releases });
    }
}

/// Whether two held values speak of one quantity, such as pH and pOH.
fn fixes_the_same(one: HeldWhat, two: HeldWhat) -> bool {
    use HeldWhat::{Activity, Concentration, Pe, Ph, Pressure};
    match (one, two) {
        (Ph(_), Ph(_)) | (Pe(_), Pe(_)) => true,
        (
            Pressure { species: a, .. }
            | Activity { species: a, .. }
            | Concentration { species: a, .. },
            Pressure { species: b, .. }
            | Activity { species: b, .. }
            | Concentration { species: b, .. },
        ) => a == b,
        _ => false,
    }
}

/// The component of this species that has no total yet; else where one is given.
fn released(
    case: &CaseResolver,
    problem: &Problem,
    species: usize,
) -> Result<usize, Option<crate::text::span::Place>> {
    let row = case.scope.belonging.made[species].as_ref().map(|made| made.row.clone());
    let row = row.unwrap_or_default();
    // Electrons last: what is not said of them is that none were given or taken.
    let electron = case.scope.component("e-");
    let others = || {
        let of_matter = row.iter().filter(move |&&(j, _)| j != PROTON && Some(j) != electron);
        of_matter.chain(row.iter().filter(move |&&(j, _)| Some(j) == electron))
    };
    others()
        .find(|&&(j, _)| problem.amounts[j].source == AmountSource::Nothing)
        .map(|&(j, _)| j)
        .ok_or_else(|| others().find_map(|&(j, _)| problem.amounts[j].at))
}

/// What is held, what a `±` of it would mean, and the value with its `±` in the unit of what
/// is held.
fn what(
    case: &mut CaseResolver,
    written: &Written,
    subject: &Subject,
    value: &Quantity,
    span: crate::text::span::Span,
) -> Option<(HeldWhat, Carries, Read)> {
    match subject {
        Subject::Ph => {
            let read = case.plain(written, value)?;
            Some((HeldWhat::Ph(read.value), Carries::Logarithm, read))
        }
        Subject::Poh => {
            // With pOH held the pH follows from water's own reaction.
            let poh = case.plain(written, value)?;
            let hydroxide = case.scope.find("OH-")?;
            let made = case.scope.belonging.made[hydroxide].as_ref()?;
            let log_k = made.log_beta(|r| {
                case.scope.reactions[r].log_k(case.kelvin).map_or(0.0, |(log_k, _)| log_k)
            });
            let moves_ph = !coefficient(&made.row, PROTON).is_zero();
            moves_ph.then_some((HeldWhat::Ph(-log_k - poh.value), Carries::Logarithm, poh))
        }
        Subject::Pe | Subject::Potential => {
            let pe = match subject {
                Subject::Pe => case.plain(written, value)?,
                _ => {
                    let volts = case.potential(written, value)?;
                    let pe = |volts| pe_of_potential(volts, case.kelvin);
                    let uncertainty = volts.uncertainty.map(pe);
                    Read { value: pe(volts.value), uncertainty, ..volts }
                }
            };
            let carries = match subject {
                Subject::Pe => Carries::Logarithm,
                // Of volts a percentage says something.
                _ => Carries::Signed,
            };
            if case.scope.component("e-").is_none() {
                let kind = DefectKind::DoesNotBelong {
                    name: "e-".into(),
                    missing: vec!["e-".into()],
                    nearest: None,
                };
                case.resolver.report(written.place(span), kind);
                return None;
            }
            Some((HeldWhat::Pe(pe.value), carries, pe))
        }
        Subject::Pressure(name) => {
            let species = phase(case, written, name, true)?;
            let read = case.pressure(written, value)?;
            positive(case, written, value, read.value)?;
            Some((HeldWhat::Pressure { species, atm: read.value }, Carries::Positive, read))
        }
        Subject::Activity(name) => {
            let species = phase(case, written, name, false)?;
            let read = case.plain(written, value)?;
            positive(case, written, value, read.value)?;
            if case.scope.species[species].is_proton() {
                return Some((HeldWhat::Ph(-read.value.log10()), Carries::Positive, read));
            }
            Some((HeldWhat::Activity { species, value: read.value }, Carries::Positive, read))
        }
        Subject::Concentration(name) => {
            let species = phase(case, written, name, false)?;
            let formula = case.scope.species[species].clone();
            let read =
                case.concentration(written, value, Some(&formula), Expected::Concentration)?;
            positive(case, written, value, read.value)?;
            Some((HeldWhat::Concentration { species, value: read.value }, Carries::Positive, read))
        }
        Subject::Total(_)
        | Subject::Fraction(_)
        | Subject::Alkalinity
        | Subject::Acidity
        | Subject::Hardness
        | Subject::CarbonateHardness
        | Subject::IonicStrength
        | Subject::BufferCapacity
        | Subject::SaturationIndex(_)
        | Subject::Precipitated(_)
        | Subject::Dose(_)
        | Subject::ChargeImbalance => {
            let words = subject_key(subject);
            case.resolver.report(written.place(span), DefectKind::CannotBeHeld { subject: words });
            None
        }
    }
}

/// The species of a name, which must be a gas, or must be dissolved.
fn phase(case: &mut CaseResolver, written: &Written, name: &Name, gas: bool) -> Option<usize> {
    let species = case.species(written, name)?;
    let phase = &case.scope.species[species].phase;
    if (*phase == Phase::Gas) == gas && matches!(phase, Phase::Gas | Phase::Aqueous) {
        return Some(species);
    }
    let kind = DefectKind::WrongPhase {
        name: case.scope.species[species].name.clone(),
        needs: if gas { "a gas" } else { "a dissolved species" },
    };
    case.resolver.report(written.place(name.span), kind);
    None
}

fn positive(case: &mut CaseResolver, written: &Written, value: &Quantity, read: f64) -> Option<()> {
    if read > 0.0 {
        return Some(());
    }
    let why = "a held pressure, activity or concentration is above zero";
    case.resolver.report(written.place(value.span), DefectKind::ImpossibleValue { why });
    None
}
