//! Solids against tests/reference/solids.py, which tries every set of them in arithmetic of
//! many digits.

use std::sync::atomic::AtomicBool;

use lyate::chemistry::activity::{ActivityKind, ActivityModel};
use lyate::equilibrium::phases::{Assemblage, equilibrate};
use lyate::equilibrium::system::{Candidate, Fixed, IonicStrength, Row, Species, System};
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
    candidates: Vec<Solid>,
    excess: Vec<Solid>,
    answer: Expected,
}

#[derive(Deserialize)]
struct Member {
    row: Vec<(usize, i64)>,
    log_k: f64,
    charge: i32,
}

#[derive(Deserialize)]
struct Solid {
    row: Vec<(usize, i64)>,
    log_value: f64,
}

#[derive(Deserialize)]
struct Expected {
    ph: String,
    concentrations: Vec<String>,
    formed: Vec<Option<String>>,
    indices: Vec<String>,
    excess: Vec<String>,
}

fn row(entries: &[(usize, i64)]) -> Row {
    entries.iter().map(|(j, n)| (*j, Rational64::from_integer(*n))).collect()
}

fn system(problem: &Problem) -> System {
    let species = problem.species.iter().map(|member| Species {
        row: row(&member.row),
        ln_k: member.log_k * LN_10,
        water: 0.0,
        charge: member.charge,
        ion_size: 0.0,
    });
    let kind = if problem.davies { ActivityKind::Davies } else { ActivityKind::Ideal };
    let held = problem.excess.iter().map(|solid| Fixed {
        row: row(&solid.row),
        ln_value: solid.log_value * LN_10,
        water: 0.0,
        concentration_of: None,
        supply: row(&solid.row),
    });
    let candidates = problem.candidates.iter().map(|solid| Candidate {
        row: row(&solid.row),
        ln_value: solid.log_value * LN_10,
        water: 0.0,
    });
    System {
        species: species.collect(),
        totals: problem.totals.clone(),
        fixed: held.collect(),
        candidates: candidates.collect(),
        activity: ActivityModel { kind, a: 0.5098, b: 0.3284 }.into(),
        ionic_strength: IonicStrength::Computed,
    }
}

fn number(text: &str) -> f64 {
    text.parse().expect("a number")
}

fn compare(problem: &Problem, state: &Assemblage) {
    let name = &problem.name;
    let (answer, expected) = (&state.answer, &problem.answer);
    let ph = -answer.ln_components[0] / LN_10;
    let off = (ph - number(&expected.ph)).abs();
    assert!(off < 1e-9, "{name}: pH {ph} is off by {off:e}");
    for (i, (found, text)) in answer.concentrations.iter().zip(&expected.concentrations).enumerate()
    {
        let off = (found / number(text) - 1.0).abs();
        assert!(off < 1e-8, "{name}: species {i} is {found:e}, off by {off:e}");
    }
    let largest = problem.totals.iter().fold(0.0f64, |most, total| most.max(total.abs()));
    for (k, (place, text)) in state.formed.iter().zip(&expected.formed).enumerate() {
        let solid = &problem.candidates[k];
        match (place, text) {
            (Some(place), Some(text)) => {
                let off = (-answer.amounts[*place] - number(text)).abs();
                assert!(off < 1e-12 * largest, "{name}: amount of solid {k} is off by {off:e}");
            }
            (None, None) => {
                let row = solid.row.iter();
                let sum: f64 = row.map(|(j, n)| *n as f64 * answer.ln_components[*j]).sum();
                let index = sum / LN_10 - solid.log_value;
                let off = (index - number(&expected.indices[k])).abs();
                assert!(off < 1e-9, "{name}: saturation index of {k} is off by {off:e}");
            }
            _ => panic!("{name}: solid {k} is {place:?} and should be {text:?}"),
        }
    }
    for (found, text) in answer.amounts.iter().zip(&expected.excess) {
        let off = (-found - number(text)).abs();
        assert!(off < 1e-12 * largest.max(1e-3), "{name}: what is in excess is off by {off:e}");
    }
}

#[test]
fn solids_form_as_every_set_tried_in_many_digits_says() {
    let text = include_str!("reference/solids.json");
    let file: File = serde_json::from_str(text).expect("the reference file is JSON");
    assert!(file.problems.iter().filter(|p| !p.davies).count() >= 30);
    assert!(file.problems.iter().filter(|p| p.davies).count() >= 15);
    let some =
        |n: usize| file.problems.iter().any(|p| p.answer.formed.iter().flatten().count() == n);
    assert!(some(0) && some(1) && some(2) && some(3));
    for problem in &file.problems {
        match equilibrate(system(problem), None, &AtomicBool::new(false)) {
            Ok(state) => compare(problem, &state),
            Err(failure) => panic!("{}: {failure:?}", problem.name),
        }
    }
}
