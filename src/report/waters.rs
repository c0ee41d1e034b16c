//! What is told of a water as a laboratory reports it, and of the waters it is blended from:
//! its ion balance and its hardness, and the share, pH and alkalinity of each.

use serde::Serialize;

use super::figures::{celsius, decimals, equivalents, significant};
use super::style::{Paint, Style};
use super::table::{Cell, Side, Table};
use crate::chemistry::quantity::CALCIUM_CARBONATE;
use crate::chemistry::unit::GERMAN_DEGREE;
use crate::equilibrium::quantities::Solved;
use crate::problem::blend::Portion;
use crate::problem::model::Problem;
use crate::rules::ion_balance::{CRITERION_SOURCE, Criterion, IonBalance, per_litre};

/// The waters of a blend, and what comes of them.
pub fn blend(problem: &Problem, solved: &Solved, style: Style) -> String {
    let Some(blend) = &problem.blend else { return String::new() };
    let mut table = Table::new(&[
        ("share", Side::Right),
        ("", Side::Left),
        ("°C", Side::Right),
        ("pH", Side::Right),
        ("alkalinity", Side::Right),
    ]);
    for portion in &blend.portions {
        let water = &portion.water;
        table.row([
            share_words(portion.share).into(),
            source_words(portion).into(),
            degrees(water.kelvin).into(),
            decimals(water.ph, 3).into(),
            equivalents(water.alkalinity, water.scale).into(),
        ]);
    }
    table.row([
        Cell::default(),
        "this water".into(),
        degrees(problem.kelvin).into(),
        decimals(solved.ph(), 3).into(),
        equivalents(solved.alkalinity(problem), problem.scale).into(),
    ]);
    table.render(style)
}

/// `"river.lyate", case "winter"`.
pub fn source_words(portion: &Portion) -> String {
    match &portion.case {
        Some(case) => format!("\"{}\", case \"{case}\"", portion.file),
        None => format!("\"{}\"", portion.file),
    }
}

/// `70 %`, `33.3 %`.
pub fn share_words(share: f64) -> String {
    let words = decimals(100.0 * share, 2);
    format!("{} %", words.trim_end_matches('0').trim_end_matches('.'))
}

fn degrees(kelvin: f64) -> String {
    celsius(kelvin).trim_end_matches(" °C").to_owned()
}

#[derive(Serialize)]
pub struct PortionJson<'a> {
    file: &'a str,
    #[serde(skip_serializing_if = "Option::is_none")]
    case: Option<&'a str>,
    /// Of one.
    share: f64,
    /// Kelvin.
    temperature: f64,
    ph: f64,
    /// eq per litre or kilogram.
    alkalinity: f64,
}

pub fn blend_json(problem: &Problem) -> Vec<PortionJson<'_>> {
    let portions = problem.blend.iter().flat_map(|blend| &blend.portions);
    portions
        .map(|portion| PortionJson {
            file: &portion.file,
            case: portion.case.as_deref(),
            share: portion.share,
            temperature: portion.water.kelvin,
            ph: portion.water.ph,
            alkalinity: portion.water.alkalinity,
        })
        .collect()
}

/// A hardness in mol as the trade reports it: `168 mg/L as CaCO3, 9.4 °dH`.
pub fn hardness_words(problem: &Problem, hardness: f64) -> String {
    let per_litre = hardness * per_litre(problem);
    let degrees = 2.0 * per_litre / GERMAN_DEGREE;
    let milligrams = 1000.0 * CALCIUM_CARBONATE * per_litre;
    format!("{} mg/L as CaCO3, {} °dH", significant(milligrams, 3), significant(degrees, 3))
}

/// Ion by ion in meq/L, the sums and what lies between them; empty where the pH is not held
/// or the file is no analysis.
pub fn ion_balance(problem: &Problem, solved: &Solved, style: Style) -> String {
    let Some(balance) = IonBalance::of(problem, solved) else { return String::new() };
    let mut table = Table::new(&[
        ("cation", Side::Left),
        ("meq/L", Side::Right),
        ("anion", Side::Left),
        ("meq/L", Side::Right),
    ]);
    let cells = |ion: Option<&(String, f64)>| match ion {
        Some((name, meq)) => [name.as_str().into(), significant(*meq, 4).into()],
        None => [Cell::default(), Cell::default()],
    };
    for index in 0..balance.cations.len().max(balance.anions.len()) {
        let [cation, of_cation] = cells(balance.cations.get(index));
        let [anion, of_anion] = cells(balance.anions.get(index));
        table.row([cation, of_cation, anion, of_anion]);
    }
    table.row([
        "sum".into(),
        significant(balance.cation_sum, 4).into(),
        "sum".into(),
        significant(balance.anion_sum, 4).into(),
    ]);
    let accepted = balance.is_accepted();
    let (paint, word) =
        if accepted { (Paint::Good, "accepts") } else { (Paint::Doubtful, "asks for") };
    let verdict = format!("{CRITERION_SOURCE} {word} {}", balance.criterion().words());
    format!(
        "{}cations less anions: {} meq/L, {} %; {}\n",
        table.render(style),
        significant(balance.difference(), 3),
        decimals(balance.percent(), 2),
        style.paint(paint, &verdict),
    )
}

#[derive(Serialize)]
pub struct IonBalanceJson {
    cations_meq_per_litre: f64,
    anions_meq_per_litre: f64,
    difference_meq_per_litre: f64,
    percent: f64,
    criterion: CriterionJson,
    accepted: bool,
    cations: Vec<Ion>,
    anions: Vec<Ion>,
}

#[derive(Serialize)]
struct CriterionJson {
    #[serde(skip_serializing_if = "Option::is_none")]
    meq_per_litre: Option<f64>,
    #[serde(skip_serializing_if = "Option::is_none")]
    percent: Option<f64>,
    source: &'static str,
}

#[derive(Serialize)]
struct Ion {
    name: String,
    meq_per_litre: f64,
}

pub fn ion_balance_json(problem: &Problem, solved: &Solved) -> Option<IonBalanceJson> {
    let balance = IonBalance::of(problem, solved)?;
    let (meq_per_litre, percent) = match balance.criterion() {
        Criterion::MilliequivalentsPerLitre(limit) => (Some(limit), None),
        Criterion::Percent(limit) => (None, Some(limit)),
    };
    let list = |ions: &[(String, f64)]| {
        let ion = |(name, meq): &(String, f64)| Ion { name: name.clone(), meq_per_litre: *meq };
        ions.iter().map(ion).collect()
    };
    Some(IonBalanceJson {
        cations_meq_per_litre: balance.cation_sum,
        anions_meq_per_litre: balance.anion_sum,
        difference_meq_per_litre: balance.difference(),
        percent: balance.percent(),
        criterion: CriterionJson { meq_per_litre, percent, source: CRITERION_SOURCE },
        accepted: balance.is_accepted(),
        cations: list(&balance.cations),
        anions: list(&balance.anions),
    })
}
