//! One goal, one unknown amount.

use super::nearest::{Missed, nearest};
use super::root::{Mark, close_in};
use super::{Bench, COARSE, Dosing, FINE, Goal, MET, Met, Search, amounts, most, passed};
use crate::equilibrium::system::Failure;

pub(super) fn find<B: Bench>(
    bench: &B,
    dosing: &Dosing,
    goal: &Goal,
    start: Option<f64>,
) -> Result<Search<B::State>, Failure> {
    let mut line = Line { bench, dosing, goal, held: goal.held.is_some(), near: None, trials: 0 };
    // What is wrong with the water as it is comes first; but a model out of its range there may
    // be in it with a dose.
    let (without, failure) = match line.state(0.0) {
        Ok(untouched) => {
            let value = bench.value(0, &untouched);
            if value.is_some_and(|value| goal.off(value).abs() <= 1e-13) {
                return Ok(met(vec![0.0], untouched, Vec::new(), line.trials));
            }
            (value, None)
        }
        Err(failure @ Failure::NotConverged { .. }) => (None, Some(failure)),
        Err(failure) => return Err(failure),
    };
    let doses = if goal.single { line.single(start)? } else { line.all(COARSE)? };
    let mut found = line.good(doses)?;
    if found.is_empty() {
        // Two amounts close together hide between two looks.
        let doses = line.all(FINE)?;
        found = line.good(doses)?;
    }
    if found.is_empty() && line.held {
        // With ions of high charge the state that is held can be another one than the water's
        // own, at any dose: then the quantity itself is followed.
        line.held = false;
        let doses = line.all(COARSE)?;
        found = line.good(doses)?;
    }
    let mut found = found.into_iter();
    if let Some((dose, state)) = found.next() {
        let others = found.map(|(dose, _)| vec![dose]).collect();
        return Ok(met(vec![dose], state, others, line.trials));
    }
    if let Some(failure) = failure {
        return Err(failure);
    }
    let missed = nearest(&mut line, without)?;
    if let Missed::Short(nearest) = &missed
        && goal.off(nearest.value).abs() <= LEVEL
    {
        let state = line.state(nearest.dose)?;
        return Ok(met(vec![nearest.dose], state, Vec::new(), line.trials));
    }
    Ok(Search::Missed(missed))
}

/// A value that the quantity only comes up to, however much is put in, is met where it is off
/// by no more than this.
const LEVEL: f64 = 1e-10;

fn met<S>(doses: Vec<f64>, state: S, others: Vec<Vec<f64>>, trials: u32) -> Search<S> {
    Search::Met(Box::new(Met { doses, state, others, trials }))
}

/// The amount as a line to walk along.
pub(super) struct Line<'a, B: Bench> {
    pub bench: &'a B,
    pub dosing: &'a Dosing,
    pub goal: &'a Goal,
    /// Whether the goal is held in trials.
    held: bool,
    near: Option<B::State>,
    trials: u32,
}

impl<B: Bench> Line<'_, B> {
    /// Those of the doses that meet the goal, with their states, by rising dose.
    fn good(&mut self, mut doses: Vec<f64>) -> Result<Vec<(f64, B::State)>, Failure> {
        doses.sort_by(f64::total_cmp);
        let mut found: Vec<(f64, B::State)> = Vec::new();
        for dose in doses {
            let Some(state) = passed(self.state(dose))? else { continue };
            let off = self.bench.value(0, &state).map(|value| self.goal.off(value).abs());
            if off.is_some_and(|off| off <= MET) {
                found.push((dose, state));
            }
        }
        Ok(found)
    }

    /// The state with a dose, nothing held.
    fn state(&mut self, dose: f64) -> Result<B::State, Failure> {
        self.trials += 1;
        self.bench.solve(self.dosing.system(&[dose]), self.near.as_ref())
    }

    /// The quantity with a dose; none where there is no such water.
    pub fn value(&mut self, dose: f64) -> Result<Option<f64>, Failure> {
        let Some(state) = passed(self.state(dose))? else { return Ok(None) };
        let value = self.bench.value(0, &state);
        self.near = Some(state);
        Ok(value)
    }

    /// What is to become zero; none where there is no such water.
    fn open(&mut self, dose: f64) -> Result<Option<f64>, Failure> {
        let Some(held) = self.goal.held.as_ref().filter(|_| self.held) else {
            return Ok(self.value(dose)?.map(|value| self.goal.off(value)));
        };
        let mut system = self.dosing.system(&[dose]);
        let phase = system.fixed.len();
        system.fixed.push(held.clone());
        self.trials += 1;
        match self.bench.solve(system, self.near.as_ref()) {
            Ok(state) => {
                let brought = self.bench.brought(&state, phase);
                self.near = Some(state);
                Ok(Some(brought * self.dosing.dilution_with(&[dose])))
            }
            // Something else holds it already.
            Err(Failure::Dependent { .. }) => {
                self.held = false;
                self.open(dose)
            }
            Err(Failure::Cancelled) => Err(Failure::Cancelled),
            Err(_) => Ok(None),
        }
    }

    /// The one amount there can be, from near it: along secants until the sign changes.
    fn single(&mut self, start: Option<f64>) -> Result<Vec<f64>, Failure> {
        let Some(first) = self.open(0.0)? else { return self.all(COARSE) };
        let most = most(&self.dosing.unknowns[0]);
        let held = self.goal.held.as_ref().filter(|_| self.held);
        // What the dose brings of what is held.
        let share = held.and_then(|held| {
            let (j, _) = held.row.first()?;
            let row = &self.dosing.unknowns[0].row;
            Some(row.iter().find(|(column, _)| column == j)?.1)
        });
        let guess = share.map(|share| first / share).filter(|dose| *dose > 0.0);
        let guess = start.filter(|dose| *dose > 0.0).or(guess).unwrap_or(first.abs());
        let mut low: Mark = (0.0, first);
        let mut dose = guess.clamp(f64::MIN_POSITIVE, most);
        for _ in 0..60 {
            let Some(open) = self.open(dose)? else { return self.all(COARSE) };
            let high = (dose, open);
            if open == 0.0 {
                return Ok(vec![dose]);
            }
            if low.1 * high.1 < 0.0 {
                return Ok(close_in(|dose| self.open(dose), low, high)?.into_iter().collect());
            }
            if high.1.abs() >= low.1.abs() || dose >= most {
                return Ok(Vec::new());
            }
            let secant = high.0 - high.1 * (high.0 - low.0) / (high.1 - low.1);
            // A little further than the straight line goes, so that it comes to lie between.
            let next = high.0 + 1.000_1 * (secant - high.0);
            low = high;
            dose = next.clamp(1.000_001 * high.0, 100.0 * high.0).min(most);
        }
        Ok(Vec::new())
    }

    /// Every change of sign over all amounts, and two where a dip just touches zero.
    fn all(&mut self, in_decade: f64) -> Result<Vec<f64>, Failure> {
        let mut marks: Vec<Mark> = Vec::new();
        for dose in amounts(&self.dosing.unknowns[0], in_decade) {
            if let Some(open) = self.open(dose)? {
                marks.push((dose, open));
            }
        }
        let mut dips = Vec::new();
        for three in marks.windows(3) {
            let [left, middle, right] = [three[0], three[1], three[2]];
            let same = left.1 * middle.1 > 0.0 && middle.1 * right.1 > 0.0;
            if same && middle.1.abs() < left.1.abs() && middle.1.abs() < right.1.abs() {
                dips.extend(self.dip(left, middle, right)?);
            }
        }
        marks.extend(dips);
        marks.sort_by(|a, b| a.0.total_cmp(&b.0));
        let mut found = Vec::new();
        for pair in marks.windows(2) {
            let (from, to) = (pair[0], pair[1]);
            if to.1 == 0.0 {
                found.push(to.0);
            } else if from.1 * to.1 < 0.0 {
                found.extend(close_in(|dose| self.open(dose), from, to)?);
            }
        }
        Ok(found)
    }

    /// A place of the other sign in a dip between three marks, by golden sections.
    fn dip(&mut self, left: Mark, middle: Mark, right: Mark) -> Result<Option<Mark>, Failure> {
        let (mut low, mut best, mut high) = (left.0, middle, right.0);
        for _ in 0..24 {
            let wide = if high - best.0 > best.0 - low { high } else { low };
            let dose = best.0 + 0.381_966 * (wide - best.0);
            let Some(open) = self.open(dose)? else { return Ok(None) };
            if open * best.1 <= 0.0 {
                return Ok(Some((dose, open)));
            }
            if open.abs() < best.1.abs() {
                *(if dose > best.0 { &mut low } else { &mut high }) = best.0;
                best = (dose, open);
            } else {
                *(if dose > best.0 { &mut high } else { &mut low }) = dose;
            }
        }
        Ok(None)
    }
}
