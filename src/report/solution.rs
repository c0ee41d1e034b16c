//! What `lyate solve --output json` writes: stable, versioned by its `schema` field.
//!
//! A number that could not be had is absent; lists that do not apply are empty.

use num_traits::ToPrimitive;
use serde::Serialize;

use super::cautions::{self, CautionJson};
use super::curve::{CurveJson, Traced};
use super::dose::{self, DoseJson};
use super::expectation::{Standing, verdict};
use super::sheet::{Ledger, Sheet};
use super::sheet_json::SheetJson;
use super::source::{FileReport, Source, Stated};
use super::uncertainty::{self, UncertaintyJson};
use super::waters::{IonBalanceJson, PortionJson, blend_json, ion_balance_json};
use crate::chemistry::formula::Phase;
use crate::equilibrium::quantities::Solved;
use crate::equilibrium::system::Failure;
use crate::problem::model::{Problem, Sought};
use crate::problem::scope::PROTON;
use crate::rules::check::{Checked, locate_place};
use crate::rules::ion_balance::per_litre;
use crate::rules::outcome::State;

#[derive(Serialize)]
struct Report<'a> {
    schema: u32,
    file: &'a str,
    problem: Option<&'a str>,
    solutions: Vec<Solution<'a>>,
}

#[derive(Serialize)]
struct Solution<'a> {
    case: Option<&'a str>,
    status: &'static str,
    #[serde(flatten)]
    answer: Option<Answer<'a>>,
}

#[derive(Serialize)]
struct Answer<'a> {
    /// Kelvin.
    temperature: f64,
    activity_model: &'static str,
    scale: &'static str,
    #[serde(skip_serializing_if = "Option::is_none")]
    ph: Option<f64>,
    #[serde(skip_serializing_if = "Option::is_none")]
    ph_uncertainty: Option<f64>,
    #[serde(skip_serializing_if = "Option::is_none")]
    pe: Option<f64>,
    /// V against the standard hydrogen electrode.
    #[serde(skip_serializing_if = "Option::is_none")]
    potential: Option<f64>,
    #[serde(skip_serializing_if = "Option::is_none")]
    ionic_strength: Option<f64>,
    #[serde(skip_serializing_if = "Option::is_none")]
    alkalinity: Option<f64>,
    #[serde(skip_serializing_if = "Option::is_none")]
    acidity: Option<f64>,
    #[serde(skip_serializing_if = "Option::is_none")]
    hardness: Option<f64>,
    #[serde(skip_serializing_if = "Option::is_none")]
    buffer_capacity: Option<f64>,
    charge_imbalance: ChargeImbalance,
    #[serde(skip_serializing_if = "Option::is_none")]
    ion_balance: Option<IonBalanceJson>,
    #[serde(skip_serializing_if = "Vec::is_empty")]
    blend: Vec<PortionJson<'a>>,
    species: Vec<Species<'a>>,
    components: Vec<Component<'a>>,
    solids: Vec<Solid<'a>>,
    gases: Vec<Gas<'a>>,
    doses: Vec<DoseJson>,
    balances: Vec<SheetJson>,
    expectations: Vec<Expectation<'a>>,
    curves: Vec<CurveJson<'a>>,
    uncertainties: Vec<UncertaintyJson<'a>>,
    cautions: Vec<CautionJson<'a>>,
}

#[derive(Serialize)]
struct ChargeImbalance {
    meq_per_litre: f64,
    percent: f64,
}

#[derive(Serialize)]
struct Species<'a> {
    name: &'a str,
    charge: i32,
    concentration: f64,
    #[serde(skip_serializing_if = "Option::is_none")]
    activity: Option<f64>,
}

#[derive(Serialize)]
struct Component<'a> {
    name: &'a str,
    total: f64,
    #[serde(skip_serializing_if = "Option::is_none")]
    free_concentration: Option<f64>,
    balance_error: f64,
}

#[derive(Serialize)]
struct Solid<'a> {
    name: &'a str,
    #[serde(skip_serializing_if = "Option::is_none")]
    saturation_index: Option<f64>,
    precipitated: f64,
}

#[derive(Serialize)]
struct Gas<'a> {
    name: &'a str,
    #[serde(skip_serializing_if = "Option::is_none")]
    partial_pressure_atm: Option<f64>,
}

#[derive(Serialize)]
struct Expectation<'a> {
    quantity: &'a str,
    #[serde(skip_serializing_if = "Option::is_none")]
    value: Option<f64>,
    #[serde(skip_serializing_if = "Option::is_none")]
    standard_uncertainty: Option<f64>,
    /// That the true value meets it.
    #[serde(skip_serializing_if = "Option::is_none")]
    probability: Option<f64>,
    met: bool,
    line: usize,
}

/// The answers to these problems of the file, as indented JSON. `curves` are those of each.
///
/// # Errors
/// Those of the serialiser; none are known for this data.
pub fn json(
    file: &FileReport,
    problems: &[Stated],
    curves: &[Vec<Traced>],
) -> serde_json::Result<String> {
    let title = file.checked().and_then(|checked| checked.outcomes.first());
    serde_json::to_string_pretty(&Report {
        schema: 1,
        file: &file.source.name,
        problem: title.and_then(|base| base.problem.title.as_deref()),
        solutions: problems
            .iter()
            .zip(curves)
            .map(|(stated, curves)| Solution {
                case: stated.case,
                status: status(&stated.outcome.state),
                answer: file.checked().zip(stated.outcome.solved()).map(|(checked, solved)| {
                    answer(&file.source, checked, *stated, solved, curves)
                }),
            })
            .collect(),
    })
}

/// The word for what became of a problem.
pub fn status(state: &State) -> &'static str {
    match state {
        State::Solved(_) => "solved",
        State::NothingStated | State::NotWellPosed => "not-well-posed",
        State::Failed(Failure::Infeasible { .. } | Failure::Endless { .. })
        | State::OutOfReach(_) => "no-solution",
        State::Failed(Failure::Dependent { .. }) => "not-well-posed",
        State::Failed(Failure::NotConverged { .. } | Failure::Cancelled) => "not-converged",
    }
}

fn answer<'a>(
    source: &Source,
    checked: &Checked,
    stated: Stated<'a>,
    solved: &Solved,
    curves: &'a [Traced],
) -> Answer<'a> {
    let Stated { section, outcome, .. } = stated;
    let problem = &outcome.problem;
    let finite = |value: Option<f64>| value.filter(|value| value.is_finite());
    let value = |sought: Sought| finite(solved.value(problem, sought));
    let ledger = Ledger::new(outcome);
    let mut sheets = vec![ledger.charge()];
    sheets.extend(ledger.masses());
    sheets.extend(ledger.protons().map(|(sheet, _)| sheet));
    Answer {
        temperature: problem.kelvin,
        activity_model: problem.activity.name(),
        scale: super::figures::scale_unit(problem.scale),
        ph: value(Sought::Ph),
        ph_uncertainty: outcome.ph_uncertainty(),
        pe: value(Sought::Pe),
        potential: value(Sought::Potential),
        ionic_strength: value(Sought::IonicStrength),
        alkalinity: value(Sought::Alkalinity),
        acidity: value(Sought::Acidity),
        hardness: value(Sought::Hardness),
        buffer_capacity: value(Sought::BufferCapacity),
        charge_imbalance: charge_imbalance(problem, solved),
        ion_balance: ion_balance_json(problem, solved),
        blend: blend_json(problem),
        species: species(problem, solved),
        components: components(problem, solved),
        solids: in_phase(problem, |phase| matches!(phase, Phase::Solid(_)))
            .map(|s| Solid {
                name: &problem.scope.species[s].name,
                saturation_index: value(Sought::SaturationIndex(s)),
                precipitated: solved.precipitated(problem, s).unwrap_or(0.0),
            })
            .collect(),
        gases: in_phase(problem, |phase| *phase == Phase::Gas)
            .map(|s| Gas {
                name: &problem.scope.species[s].name,
                partial_pressure_atm: value(Sought::Pressure(s)),
            })
            .collect(),
        doses: dose::json(problem),
        balances: sheets.iter().map(Sheet::json).collect(),
        expectations: problem
            .expectations
            .iter()
            .map(|expectation| {
                let verdict = verdict(outcome, expectation);
                Expectation {
                    quantity: &expectation.words,
                    value: finite(verdict.value),
                    standard_uncertainty: verdict.standard_uncertainty,
                    probability: verdict.probability,
                    met: verdict.standing == Standing::Met,
                    line: source
                        .region(&locate_place(&checked.document, section, expectation.at))
                        .line,
                }
            })
            .collect(),
        curves: curves.iter().map(|traced| traced.json(problem)).collect(),
        uncertainties: uncertainty::json(source, checked, section, outcome),
        cautions: cautions::json(outcome),
    }
}

/// The species of the problem in a phase.
pub fn in_phase(problem: &Problem, fits: impl Fn(&Phase) -> bool) -> impl Iterator<Item = usize> {
    let scope = &problem.scope;
    (0..scope.species.len()).filter(move |&s| scope.belongs(s) && fits(&scope.species[s].phase))
}

/// Per litre on either scale: per kilogram converts with the density of water.
fn charge_imbalance(problem: &Problem, solved: &Solved) -> ChargeImbalance {
    let (cations, anions) = solved.charges();
    ChargeImbalance {
        meq_per_litre: 1000.0 * per_litre(problem) * (cations - anions),
        percent: solved.imbalance_percent(),
    }
}

fn species<'a>(problem: &'a Problem, solved: &Solved) -> Vec<Species<'a>> {
    let scope = &problem.scope;
    let rows = scope.stoichiometry.species.iter().zip(&scope.dissolved);
    rows.zip(&solved.answer.concentrations)
        .map(|((row, &s), &concentration)| Species {
            name: &row.name,
            charge: row.charge,
            concentration,
            activity: solved
                .value(problem, Sought::Activity(s))
                .filter(|activity| activity.is_finite()),
        })
        .collect()
}

fn components<'a>(problem: &'a Problem, solved: &Solved) -> Vec<Component<'a>> {
    let scope = &problem.scope;
    let listed = scope.components.iter().enumerate().skip(PROTON + 1);
    listed
        .map(|(j, component)| {
            let dissolved = solved.dissolved(j);
            let brought = solved.system.fixed.iter().zip(&solved.answer.amounts);
            let brought: f64 = brought
                .flat_map(|(fixed, &amount)| {
                    fixed.supply.iter().filter(|&&(k, _)| k == j).map(move |(_, n)| (n, amount))
                })
                .map(|(n, amount)| n.to_f64().unwrap_or(0.0) * amount)
                .sum();
            Component {
                name: &component.formula.name,
                total: solved.total(j),
                free_concentration: scope
                    .row_of(component.species)
                    .and_then(|row| solved.answer.concentrations.get(row).copied()),
                balance_error: dissolved - solved.system.totals[j] - brought,
            }
        })
        .collect()
}
