//! A curve of the file, or one that a picture makes for itself, solved at enough points for a
//! smooth line.

use std::sync::atomic::AtomicBool;

use super::chart::{Axis, Mark, MarkKind, Place, Rule};
use super::subject::Subject;
use super::words::Words;
use crate::chemistry::formula::canonical;
use crate::chemistry::quantity::Scale;
use crate::equilibrium::curve::{CurvePoint, along, at_point};
use crate::equilibrium::quantities::Solved;
use crate::problem::curve::{Curve, Sweep};
use crate::problem::model::{Problem, ShownUnit};
use crate::report::figures::{celsius, concentration, percent};
use crate::text::span::{Part, Place as Written, Span};

/// At least so many points make a line.
const POINTS: usize = 401;
/// Where the pH jumps by more than this from one point to the next, so many are put between.
const JUMP: f64 = 0.1;
const FINE: usize = 41;
/// What a curve over pH goes from and to where the file has none.
const PH: (f64, f64) = (2.0, 12.0);

pub struct Run {
    pub curve: Curve,
    /// What is moved, in its unit, with the problem and its answer there.
    points: Vec<(f64, Option<(Problem, Solved)>)>,
}

fn jumps(one: &CurvePoint, other: &CurvePoint) -> bool {
    match (&one.state, &other.state) {
        (Ok(one), Ok(other)) => (one.ph() - other.ph()).abs() > JUMP,
        _ => false,
    }
}

impl Run {
    /// None where the work was cancelled.
    pub fn new(subject: &Subject, curve: Curve, cancel: &AtomicBool) -> Option<Run> {
        let curve = Curve { points: curve.points.max(POINTS), ..curve };
        let problem = subject.problem();
        let points = along(problem, &curve, cancel).ok()?;
        let mut found: Vec<CurvePoint> = Vec::with_capacity(points.len());
        for point in points {
            if let Some(last) = found.last().filter(|last| jumps(last, &point)) {
                let between = Curve { from: last.x, to: point.x, points: FINE, ..curve.clone() };
                let mut between = along(problem, &between, cancel).ok()?;
                between.pop();
                found.extend(between.into_iter().skip(1));
            }
            found.push(point);
        }
        let points = found
            .iter()
            .map(|point| (curve.shown(point.x), at_point(problem, &curve, point)))
            .collect();
        Some(Run { curve, points })
    }

    /// A quantity at every point.
    pub fn places<'a>(
        &'a self,
        value: impl Fn(&Problem, &Solved) -> Option<f64> + 'a,
    ) -> impl Iterator<Item = Option<Place>> + 'a {
        self.points.iter().map(move |(x, state)| {
            let (problem, solved) = state.as_ref()?;
            Some((*x, value(problem, solved)?))
        })
    }

    /// The axis of what is moved: `NaOH, mmol/L`.
    pub fn axis(&self) -> Axis {
        let (from, to) = (self.curve.shown(self.curve.from), self.curve.shown(self.curve.to));
        let mut title = Words::told(&self.curve.words);
        if let Some(unit) = &self.curve.unit {
            title = title.then(&format!(", {}", unit.words), Words::default());
        }
        Axis::new(title, from.min(to), from.max(to))
    }

    /// Where the problem itself stands on the curve, with its words.
    pub fn rule(&self, subject: &Subject) -> Option<Rule> {
        let problem = subject.problem();
        let amount = |value: f64| concentration(value, problem.scale);
        let (x, words) = match self.curve.over {
            Sweep::Ph => (subject.solved.ph(), subject.ph_words()),
            Sweep::Temperature => (problem.kelvin, celsius(problem.kelvin)),
            Sweep::Reagent(reagent) => {
                let value = problem.reagents[reagent].amount;
                (value, amount(value))
            }
            Sweep::Total(component) => {
                let value = problem.amounts[component].total?;
                (value, amount(value))
            }
            Sweep::Blend(portion) => {
                let share = problem.blend.as_ref()?.portions.get(portion)?.share;
                (share, percent(share))
            }
        };
        let label = match self.curve.over {
            Sweep::Ph => words,
            _ => format!("{words}: {}", subject.ph_words()),
        };
        let axis = self.axis();
        let x = self.curve.shown(x);
        axis.holds(x).then(|| Rule { x, label: Words::plain(&label) })
    }

    /// The answer on a line of a quantity.
    pub fn answer(&self, subject: &Subject, value: Option<f64>) -> Option<Mark> {
        let at = (self.rule(subject)?.x, value?);
        Some(Mark { at, label: None, kind: MarkKind::Answer })
    }
}

/// The curve over something else than pH that is asked for by its words, or the first. Where
/// the file has none, one over the reagent that is asked for, from nothing to twice what is
/// put in.
///
/// # Errors
/// Where there is none, with what to write.
pub fn dosed(subject: &Subject, of: Option<&str>) -> Result<Curve, String> {
    let problem = subject.problem();
    let mut curves = problem.curves.iter().filter(|curve| curve.over != Sweep::Ph);
    let Some(of) = of else {
        return curves.next().cloned().ok_or_else(|| {
            "the file has no curve over a reagent: write `curve over NaOH from 0 to 20 mmol/L`, \
             or name a reagent that it adds with `--of`"
                .into()
        });
    };
    let name = canonical(of);
    if let Some(curve) = curves.find(|curve| curve.words == of || curve.words == name) {
        return Ok(curve.clone());
    }
    let reagent = problem.reagents.iter().position(|reagent| reagent.formula.name == name);
    match reagent.map(|index| (index, &problem.reagents[index])) {
        Some((index, reagent)) if reagent.amount > 0.0 => {
            let (unit, factor) = unit(2.0 * reagent.amount, problem.scale);
            Ok(Curve {
                at: reagent.at,
                over: Sweep::Reagent(index),
                words: name,
                from: 0.0,
                to: 2.0 * reagent.amount,
                points: POINTS,
                unit: Some(ShownUnit { words: unit, factor }),
            })
        }
        _ => Err(format!(
            "the file has no curve over {of} and adds none: write `curve over {of} from 0 to \
             20 mmol/L`"
        )),
    }
}

/// The first curve of the file, or one over pH.
pub fn any(subject: &Subject) -> Curve {
    let first = subject.problem().curves.first().cloned();
    first.unwrap_or_else(|| Curve {
        at: Written { section: Part::Base, statement: 0, span: Span::default() },
        over: Sweep::Ph,
        words: "pH".into(),
        from: PH.0,
        to: PH.1,
        points: POINTS,
        unit: None,
    })
}

/// The unit in which an amount has one to three digits before the point, and what one of it
/// is in mol per litre or kilogram.
pub fn unit(amount: f64, scale: Scale) -> (String, f64) {
    let per = match scale {
        Scale::PerLitre => "L",
        Scale::PerKilogram => "kg",
    };
    let (name, factor) = match amount.abs() {
        size if size >= 1.0 => ("mol", 1.0),
        size if size >= 1e-3 => ("mmol", 1e-3),
        size if size >= 1e-6 => ("µmol", 1e-6),
        _ => ("nmol", 1e-9),
    };
    (format!("{name}/{per}"), factor)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn units_leave_one_to_three_digits() {
        assert_eq!(unit(0.024, Scale::PerLitre), ("mmol/L".into(), 1e-3));
        assert_eq!(unit(2e-9, Scale::PerKilogram), ("nmol/kg".into(), 1e-9));
        assert_eq!(unit(1.5, Scale::PerLitre), ("mol/L".into(), 1.0));
    }
}
