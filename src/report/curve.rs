//! A problem along a curve: a few rows for people, all points for programs.

use std::f64::consts::LN_10;
use std::sync::atomic::AtomicBool;

use serde::Serialize;

use super::dose::found;
use super::expectation::value_words;
use super::figures::{concentration, decimals, scale_unit, significant};
use super::solution::in_phase;
use super::style::{Paint, Style};
use super::summary::counted;
use super::table::{Cell, Side, Table};
use crate::chemistry::formula::Phase;
use crate::equilibrium::curve::{CurvePoint, Unsolved, along, at_point};
use crate::equilibrium::quantities::Solved;
use crate::equilibrium::system::Failure;
use crate::problem::curve::{Curve, Sweep};
use crate::problem::model::{Expectation, Problem, Sought};
use crate::rules::outcome::Outcome;

/// So many points are shown to people, both ends among them.
const SHOWN: usize = 11;

/// The limits of activity models are round figures: what shows as one of them is not past it.
const TOUCHES: f64 = 1.005;

/// A curve with its points solved.
pub struct Traced {
    curve: Curve,
    points: Vec<CurvePoint>,
}

/// The curves of a problem that is solved; none of one that is not.
pub fn traced(outcome: &Outcome) -> Vec<Traced> {
    let problem = &outcome.problem;
    let curves = problem.curves.iter().filter(|_| outcome.solved().is_some());
    curves
        .map(|curve| Traced {
            curve: curve.clone(),
            // Nothing cancels it.
            points: along(problem, curve, &AtomicBool::new(false)).unwrap_or_default(),
        })
        .collect()
}

impl Traced {
    /// Whether every point has an answer.
    pub fn is_solved(&self) -> bool {
        self.points.iter().all(|point| point.state.is_ok())
    }

    /// `Curve over NaOH, 101 points`.
    pub fn title(&self) -> String {
        format!("Curve over {}, {}", self.curve.words, counted(self.points.len(), "point"))
    }

    /// Some of the points as a table, and every point without an answer.
    pub fn text(&self, problem: &Problem, style: Style) -> String {
        let solids: Vec<usize> = solids(problem).collect();
        let over_ph = self.curve.over == Sweep::Ph;
        let mut heads = vec![(self.head(), Side::Right)];
        if !over_ph {
            heads.push(("pH".into(), Side::Right));
        }
        heads.push(("ionic strength".into(), Side::Right));
        heads.push(("buffer capacity per pH".into(), Side::Right));
        let expected = expected(problem);
        heads.extend(expected.iter().map(|one| (one.words.clone(), Side::Right)));
        for &s in &solids {
            heads.push((format!("SI {}", problem.scope.species[s].name), Side::Right));
        }
        let heads: Vec<(&str, Side)> = heads.iter().map(|(head, s)| (head.as_str(), *s)).collect();
        let mut table = Table::new(&heads);
        for point in self.shown() {
            let mut cells = vec![Cell::from(self.value(point.x))];
            match at_point(problem, &self.curve, point) {
                None => cells.push(Cell::painted(Paint::Bad, "not solved")),
                Some((moved, solved)) => {
                    let capacity = solved.value(&moved, Sought::BufferCapacity);
                    if !over_ph {
                        cells.push(decimals(solved.ph(), 3).into());
                    }
                    cells.push(concentration(solved.answer.ionic_strength, moved.scale).into());
                    let words = capacity.map(|value| concentration(value, moved.scale));
                    cells.push(words.unwrap_or_default().into());
                    cells.extend(expected.iter().map(|one| {
                        let value = solved.value(&moved, one.sought);
                        Cell::from(value.map_or(String::new(), |v| value_words(&moved, one, v)))
                    }));
                    cells.extend(solids.iter().map(|&s| {
                        let index = saturation_index(&moved, &solved, s);
                        Cell::from(index.map_or(String::new(), |index| decimals(index, 2)))
                    }));
                }
            }
            table.cells(cells);
        }
        let mut text = table.render(style);
        for run in self.points.chunk_by(|a, b| a.state.as_ref().err() == b.state.as_ref().err()) {
            let (Some(first), Some(last)) = (run.first(), run.last()) else { continue };
            if let Err(why) = &first.state {
                let from = self.with_unit(first.x);
                let place = match run.len() {
                    1 => format!("at {from}"),
                    count => format!("from {from} to {} ({count} points)", self.with_unit(last.x)),
                };
                let line = format!("not solved {place}: {}", why_not(problem, why));
                text += &format!("  {}\n", style.paint(Paint::Bad, &line));
            }
        }
        text + &doses_kept(problem) + &self.past_model(problem, style)
    }

    /// A line that tells of points past the activity model; nothing where there are none.
    fn past_model(&self, problem: &Problem, style: Style) -> String {
        let Some(limit) = problem.activity.range_limit() else { return String::new() };
        let is_past = |point: &&CurvePoint| {
            point.state.as_ref().is_ok_and(|answer| answer.ionic_strength > limit * TOUCHES)
        };
        let past = self.points.iter().filter(is_past).count();
        if past == 0 {
            return String::new();
        }
        let line = format!(
            "past the ionic strength of {limit} {} up to which `{}` is used: {past} of {}",
            scale_unit(problem.scale),
            problem.activity.name(),
            counted(self.points.len(), "point"),
        );
        format!("  {}\n", style.paint(Paint::Doubtful, &line))
    }

    /// Evenly picked, the first and the last among them.
    fn shown(&self) -> impl Iterator<Item = &CurvePoint> {
        let last = self.points.len().saturating_sub(1);
        let count = self.points.len().min(SHOWN);
        (0..count).filter_map(move |row| {
            let index =
                if count < 2 { 0 } else { (2 * row * last + count - 1) / (2 * (count - 1)) };
            self.points.get(index)
        })
    }

    /// `NaOH, mmol/L`.
    fn head(&self) -> String {
        match &self.curve.unit {
            Some(unit) => format!("{}, {}", self.curve.words, unit.words),
            None => self.curve.words.clone(),
        }
    }

    fn value(&self, x: f64) -> String {
        let places = match self.curve.over {
            Sweep::Ph | Sweep::Temperature => return trimmed(&decimals(self.curve.shown(x), 3)),
            Sweep::Reagent(_) | Sweep::Total(_) | Sweep::Blend(_) => 4,
        };
        trimmed(&significant(self.curve.shown(x), places))
    }

    fn with_unit(&self, x: f64) -> String {
        match &self.curve.unit {
            Some(unit) => format!("{} {}", self.value(x), unit.words),
            None => format!("{} {}", self.curve.words, self.value(x)),
        }
    }

    pub fn json<'a>(&'a self, problem: &'a Problem) -> CurveJson<'a> {
        let solids: Vec<usize> = solids(problem).collect();
        let name = |s: &usize| problem.scope.species[*s].name.as_str();
        CurveJson {
            over: &self.curve.words,
            unit: self.curve.unit.as_ref().map(|unit| unit.words.as_str()),
            species: problem.scope.dissolved.iter().map(name).collect(),
            solids: solids.iter().map(name).collect(),
            points: self.points.iter().map(|point| self.point(problem, &solids, point)).collect(),
        }
    }

    fn point(&self, problem: &Problem, solids: &[usize], point: &CurvePoint) -> PointJson {
        let x = self.curve.shown(point.x);
        let Some((moved, solved)) = at_point(problem, &self.curve, point) else {
            let status = match &point.state {
                Err(Unsolved::Failed(Failure::Infeasible { .. })) => "no-solution",
                Err(Unsolved::Failed(Failure::Dependent { .. })) => "not-well-posed",
                Err(Unsolved::NoConstant(_)) => "no-constant",
                _ => "not-converged",
            };
            return PointJson { x, status, answer: None };
        };
        let index = |&s: &usize| saturation_index(&moved, &solved, s);
        let answer = PointAnswer {
            ph: solved.ph(),
            buffer_capacity: solved.value(&moved, Sought::BufferCapacity),
            saturation_indices: solids.iter().map(index).collect(),
            ionic_strength: solved.answer.ionic_strength,
            concentrations: solved.answer.concentrations,
        };
        PointJson { x, status: "solved", answer: Some(answer) }
    }
}

/// What the file expects of its answer and no other column has, each quantity once: the doses
/// do not move along a curve.
fn expected(problem: &Problem) -> Vec<&Expectation> {
    let mut found: Vec<&Expectation> = Vec::new();
    for one in &problem.expectations {
        let elsewhere = matches!(
            one.sought,
            Sought::Ph
                | Sought::IonicStrength
                | Sought::BufferCapacity
                | Sought::SaturationIndex(_)
                | Sought::Dose(_)
        );
        if !elsewhere && !found.iter().any(|other| other.sought == one.sought) {
            found.push(one);
        }
    }
    found
}

/// What was found for targets is the answer's, and stays so along a curve: the targets are met
/// at the answer alone.
fn doses_kept(problem: &Problem) -> String {
    let kept: Vec<String> = found(problem)
        .map(|(target, amount)| {
            let name = problem.unknown_name(target.unknown);
            format!("{name} {}", concentration(amount, problem.scale))
        })
        .collect();
    if kept.is_empty() {
        return String::new();
    }
    format!("  at every point as found for the answer: {}\n", kept.join(", "))
}

fn solids(problem: &Problem) -> impl Iterator<Item = usize> + '_ {
    in_phase(problem, |phase| matches!(phase, Phase::Solid(_)))
}

/// None where one of its parts is absent.
fn saturation_index(problem: &Problem, solved: &Solved, solid: usize) -> Option<f64> {
    let index = solved.ln_activity(problem, solid)? / LN_10;
    index.is_finite().then_some(index)
}

fn why_not(problem: &Problem, why: &Unsolved) -> String {
    let scope = &problem.scope;
    match why {
        Unsolved::Failed(Failure::Infeasible { component }) => {
            let name = &scope.components[*component].formula.name;
            format!("nothing closes the balance of `{name}` there")
        }
        Unsolved::Failed(Failure::Dependent { .. }) => {
            "what is held there depends on one another".into()
        }
        Unsolved::Failed(Failure::Endless { .. }) => {
            "what is held there lets a solid form without end".into()
        }
        Unsolved::Failed(Failure::NotConverged { .. } | Failure::Cancelled) => {
            "no state was found that closes all balances".into()
        }
        Unsolved::NoConstant(without) => {
            let equation = &scope.reactions[without.reaction].equation;
            format!("the constant of `{equation}` has no value there")
        }
    }
}

/// Without the zeros that say nothing.
fn trimmed(number: &str) -> String {
    if !number.contains('.') || number.contains('e') {
        return number.to_owned();
    }
    number.trim_end_matches('0').trim_end_matches('.').to_owned()
}

/// A curve in data. A number that could not be had is null, or absent.
#[derive(Serialize)]
pub struct CurveJson<'a> {
    over: &'a str,
    /// Of `x`, as written; none for a pH.
    unit: Option<&'a str>,
    /// What the `concentrations` of each point are of.
    species: Vec<&'a str>,
    /// What its `saturation_indices` are of.
    solids: Vec<&'a str>,
    points: Vec<PointJson>,
}

#[derive(Serialize)]
struct PointJson {
    x: f64,
    status: &'static str,
    #[serde(flatten)]
    answer: Option<PointAnswer>,
}

#[derive(Serialize)]
struct PointAnswer {
    ph: f64,
    /// mol per litre or kilogram, as in the answer itself.
    ionic_strength: f64,
    #[serde(skip_serializing_if = "Option::is_none")]
    buffer_capacity: Option<f64>,
    concentrations: Vec<f64>,
    saturation_indices: Vec<Option<f64>>,
}

/// What a curve is, and the pH at its two ends, for one who points at it.
pub fn ends(problem: &Problem, curve: &Curve) -> String {
    let two = Curve { points: 2, ..curve.clone() };
    let points = along(problem, &two, &AtomicBool::new(false)).unwrap_or_default();
    let traced = Traced { curve: two, points };
    let line = |point: &CurvePoint| {
        let place = traced.with_unit(point.x);
        match &point.state {
            Ok(answer) if curve.over != Sweep::Ph => {
                format!("at {place}: pH {}", decimals(answer.ph(), 3))
            }
            Ok(answer) => {
                let strength = concentration(answer.ionic_strength, problem.scale);
                format!("at {place}: ionic strength {strength}")
            }
            Err(why) => format!("at {place}: not solved, {}", why_not(problem, why)),
        }
    };
    let head = format!("**curve over {}** · {}", curve.words, counted(curve.points, "point"));
    std::iter::once(head).chain(traced.points.iter().map(line)).collect::<Vec<_>>().join("\n\n")
}
