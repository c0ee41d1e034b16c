//! Answers against those of tests/reference/equilibrium.py, which another method found in
//! arithmetic of many digits.

use std::sync::atomic::AtomicBool;

use lyate::chemistry::activity::{ActivityKind, ActivityModel};
use lyate::equilibrium::solve::solve;
use lyate::equilibrium::system::{Answer, IonicStrength, Species, System};
use num_rational::Rational64;
use serde::Deserialize;

const LN_10: f64 = std::f64::consts::LN_10;

#[derive(Deserialize)]
struct File {
    problems: Vec<Problem>,
}

#[derive(Deserialize)]
struct Problem {
    name: String,
    species: Vec<Member>,
    totals: Vec<f64>,
    davies: bool,
    answer: Expected,
}

#[derive(Deserialize)]
struct Member {
    row: Vec<(usize, i64)>,
    log_k: f64,
    charge: i32,
}

#[derive(Deserialize)]
struct Expected {
    ph: String,
    concentrations: Vec<String>,
    ionic_strength: Option<String>,
}

fn problems() -> Vec<Problem> {
    let text = include_str!("reference/equilibrium.json");
    let file: File = serde_json::from_str(text).expect("the reference file is JSON");
    file.problems
}

fn system(problem: &Problem) -> System {
    let species = problem.species.iter().map(|member| Species {
        row: member.row.iter().map(|(j, n)| (*j, Rational64::from_integer(*n))).collect(),
        ln_k: member.log_k * LN_10,
        charge: member.charge,
        water: 0.0,
        ion_size: 0.0,
    });
    let kind = if problem.davies { ActivityKind::Davies } else { ActivityKind::Ideal };
    System {
        species: species.collect(),
        totals: problem.totals.clone(),
        fixed: Vec::new(),
        candidates: Vec::new(),
        activity: ActivityModel { kind, a: 0.5098, b: 0.3284 }.into(),
        ionic_strength: IonicStrength::Computed,
    }
}

fn number(text: &str) -> f64 {
    text.parse().expect("a number")
}

fn compare(problem: &Problem, answer: &Answer, how: &str) {
    let name = &problem.name;
    let ph = -answer.ln_components[0] / LN_10;
    let off = (ph - number(&problem.answer.ph)).abs();
    assert!(off < 1e-9, "{name}, {how}: pH {ph} is off by {off:e}");
    for (i, (found, text)) in
        answer.concentrations.iter().zip(&problem.answer.concentrations).enumerate()
    {
        let off = (found / number(text) - 1.0).abs();
        assert!(off < 1e-8, "{name}, {how}: species {i} is {found:e}, off by {off:e}");
    }
    if let Some(text) = &problem.answer.ionic_strength {
        let off = (answer.ionic_strength / number(text) - 1.0).abs();
        assert!(off < 1e-9, "{name}, {how}: ionic strength off by {off:e}");
    }
}

#[test]
fn answers_agree_with_many_digit_arithmetic() {
    let problems = problems();
    assert_eq!(problems.iter().filter(|p| p.davies).count(), 12);
    assert_eq!(problems.iter().filter(|p| !p.davies).count(), 32);
    let cancel = AtomicBool::new(false);
    for problem in &problems {
        match solve(&system(problem), None, &cancel) {
            Ok(answer) => compare(problem, &answer, "cold"),
            Err(failure) => panic!("{}: {failure:?}", problem.name),
        }
    }
}

#[test]
fn a_start_from_other_water_gives_the_same_answers() {
    let cancel = AtomicBool::new(false);
    for problem in &problems() {
        let system = system(problem);
        let mut other = system.clone();
        other.totals.iter_mut().skip(1).for_each(|total| *total *= 1.2);
        let start = solve(&other, None, &cancel).expect("solved before");
        match solve(&system, Some(&start), &cancel) {
            Ok(answer) => compare(problem, &answer, "warm"),
            Err(failure) => panic!("{}: {failure:?}", problem.name),
        }
    }
}
