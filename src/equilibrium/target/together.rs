//! Several goals at once: Newton over all amounts, from several places; and where that finds
//! nothing, for two, from where the one is met along the other.

use nalgebra::{DMatrix, DVector};

use super::nearest::Missed;
use super::root::{Mark, close_in};
use super::{Bench, COARSE, Dosing, Goal, MET, Met, Search, Unknown, amounts, one, passed};
use crate::equilibrium::system::{Failure, System};

/// Amounts that are set out from, mol per litre or kilogram.
const PLACES: [f64; 3] = [1e-3, 1e-1, 1e-5];
/// With more goals than this, each amount is the same at the start.
const MIXED: usize = 3;
/// So many of the places where one goal is met are tried for both.
const NEAREST: usize = 12;
/// Where steps of no more than this share of an amount no longer help, it is found.
const NEAR: f64 = 1e-7;
/// Steps of Newton's method from one place.
const STEPS: u32 = 40;

pub(super) fn find<B: Bench>(
    bench: &B,
    dosing: &Dosing,
    goals: &[Goal],
    start: Option<&[f64]>,
) -> Result<Search<B::State>, Failure> {
    let count = goals.len();
    let held = goals.iter().all(|goal| !goal.slope);
    let mut space = Space { bench, dosing, goals, held, near: None, trials: 0 };
    // What is wrong with the water as it is comes first.
    space.near = Some(bench.solve(dosing.system(&vec![0.0; count]), None)?);
    let mut below_zero: Option<Vec<f64>> = None;
    let given = start.filter(|start| start.len() == count).map(<[f64]>::to_vec);
    for place in given.into_iter().chain(places(count)) {
        let Some(doses) = space.newton(&place)? else { continue };
        if doses.iter().all(|dose| *dose >= 0.0) {
            if let Some(found) = space.met(doses)? {
                return Ok(found);
            }
        } else {
            below_zero.get_or_insert(doses);
        }
    }
    // Even where Newton came below zero there can be another answer above it.
    if count == 2 {
        for (first, inner) in [(0, 0), (0, 1), (1, 0), (1, 1)] {
            for place in space.nested(first, inner)? {
                if let Some(doses) = space.newton(&place)?
                    && doses.iter().all(|dose| *dose >= 0.0)
                    && let Some(found) = space.met(doses)?
                {
                    return Ok(found);
                }
            }
        }
    }
    Ok(Search::Missed(Missed::Together { amounts: below_zero }))
}

/// Where to set out from: all amounts alike first, then each mixture of them.
fn places(count: usize) -> Vec<Vec<f64>> {
    let mut places: Vec<Vec<f64>> = PLACES.iter().map(|place| vec![*place; count]).collect();
    if count <= MIXED {
        for mixture in 0..PLACES.len().pow(count as u32) {
            let digit = |i: usize| mixture / PLACES.len().pow(i as u32) % PLACES.len();
            let place: Vec<f64> = (0..count).map(|i| PLACES[digit(i)]).collect();
            if !places.contains(&place) {
                places.push(place);
            }
        }
    }
    places
}

/// One of the goals, as the only one.
struct Of<'a, B> {
    bench: &'a B,
    goal: usize,
}

impl<B: Bench> Bench for Of<'_, B> {
    type State = B::State;

    fn solve(&self, system: System, near: Option<&Self::State>) -> Result<Self::State, Failure> {
        self.bench.solve(system, near)
    }

    fn brought(&self, state: &Self::State, phase: usize) -> f64 {
        self.bench.brought(state, phase)
    }

    fn value(&self, _: usize, state: &Self::State) -> Option<f64> {
        self.bench.value(self.goal, state)
    }
}

struct Space<'a, B: Bench> {
    bench: &'a B,
    dosing: &'a Dosing,
    goals: &'a [Goal],
    /// Whether goals are held in trials, those that can be.
    held: bool,
    near: Option<B::State>,
    trials: u32,
}

impl<B: Bench> Space<'_, B> {
    /// What is to become zero for each goal; none where there is no such water.
    fn open(&mut self, doses: &[f64]) -> Result<Option<DVector<f64>>, Failure> {
        let dilution = self.dosing.dilution_with(doses);
        if dilution <= 0.0 {
            return Ok(None);
        }
        let mut system = self.dosing.system(doses);
        let mut phases = Vec::new();
        for goal in self.goals {
            let held = goal.held.as_ref().filter(|_| self.held);
            phases.push(held.map(|_| system.fixed.len()));
            system.fixed.extend(held.cloned());
        }
        self.trials += 1;
        let state = match self.bench.solve(system, self.near.as_ref()) {
            Ok(state) => state,
            Err(Failure::Dependent { .. }) if self.held => {
                self.held = false;
                return self.open(doses);
            }
            Err(Failure::Cancelled) => return Err(Failure::Cancelled),
            Err(_) => return Ok(None),
        };
        let open = self.goals.iter().zip(&phases).enumerate().map(|(k, (goal, phase))| {
            Some(match phase {
                Some(phase) => self.bench.brought(&state, *phase) * dilution,
                None => goal.off(self.bench.value(k, &state)?),
            })
        });
        let open: Option<Vec<f64>> = open.collect();
        self.near = Some(state);
        Ok(open.filter(|open| open.iter().all(|o| o.is_finite())).map(DVector::from_vec))
    }

    /// How each goal opens with each amount.
    fn slopes(
        &mut self,
        doses: &[f64],
        open: &DVector<f64>,
    ) -> Result<Option<DMatrix<f64>>, Failure> {
        let mut slopes = DMatrix::zeros(doses.len(), doses.len());
        for i in 0..doses.len() {
            let mut moved = doses.to_vec();
            let step = 1e-5 * doses[i].abs().max(1e-7);
            moved[i] += step;
            let Some(other) = self.open(&moved)? else { return Ok(None) };
            slopes.set_column(i, &((other - open) / step));
        }
        Ok(Some(slopes))
    }

    /// The amounts, of either sign, at which nothing stays open; none where steps do not lead
    /// there. A step is taken as far as what it leaves is less than what it was.
    fn newton(&mut self, from: &[f64]) -> Result<Option<Vec<f64>>, Failure> {
        let mut doses = from.to_vec();
        let Some(mut open) = self.open(&doses)? else { return Ok(None) };
        for _ in 0..STEPS {
            let Some(slopes) = self.slopes(&doses, &open)? else { return Ok(None) };
            let factors = slopes.lu();
            let Some(step) = factors.solve(&-&open) else { return Ok(None) };
            let size = |step: &DVector<f64>, doses: &[f64]| -> f64 {
                let share = |(s, d): (&f64, &f64)| s.abs() / d.abs().max(1e-9);
                step.iter().zip(doses).map(share).fold(0.0, f64::max)
            };
            let before = size(&step, &doses);
            if !before.is_finite() {
                return Ok(None);
            }
            let mut part = 1.0;
            let taken = loop {
                let next: Vec<f64> = doses.iter().zip(&step).map(|(d, s)| d + part * s).collect();
                if let Some(left) = self.open(&next)?
                    && let Some(rest) = factors.solve(&-&left)
                    && (size(&rest, &doses) <= (1.0 - 0.25 * part) * before || before < 1e-12)
                {
                    break Some((next, left));
                }
                part *= 0.5;
                if part < 1e-3 {
                    break None;
                }
            };
            // A small amount beside a large one is known no better than the sums allow; whether
            // it meets the goals is looked at afterwards.
            let Some((next, left)) = taken else { return Ok((before < NEAR).then_some(doses)) };
            (doses, open) = (next, left);
            if part == 1.0 && before < 1e-11 {
                return Ok(Some(doses));
            }
        }
        Ok(None)
    }

    /// The state with these amounts, where it meets every goal.
    fn met(&mut self, doses: Vec<f64>) -> Result<Option<Search<B::State>>, Failure> {
        self.trials += 1;
        let solved = self.bench.solve(self.dosing.system(&doses), self.near.as_ref());
        let Some(state) = passed(solved)? else { return Ok(None) };
        let good = self.goals.iter().enumerate().all(|(k, goal)| {
            self.bench.value(k, &state).is_some_and(|value| goal.off(value).abs() <= MET)
        });
        let trials = self.trials;
        Ok(good.then(|| Search::Met(Box::new(Met { doses, state, others: Vec::new(), trials }))))
    }

    /// Places to set out from, the likeliest first: for each of many amounts of one unknown,
    /// those of the other that meet the first goal; and of these, where the other goal is met
    /// on the way from one to the next, or is least off.
    fn nested(&mut self, first: usize, inner: usize) -> Result<Vec<Vec<f64>>, Failure> {
        let outer = self.dosing.unknowns[1 - inner].clone();
        let mut branches: Vec<Vec<Mark>> = Vec::new();
        let mut near: Vec<(f64, Vec<f64>)> = Vec::new();
        let place = |own: f64, other: f64| {
            if inner == 0 { vec![own, other] } else { vec![other, own] }
        };
        for other in amounts(&outer, COARSE) {
            for (branch, (own, open)) in self.inner(first, inner, other)?.into_iter().enumerate() {
                if branches.len() <= branch {
                    branches.push(Vec::new());
                }
                branches[branch].push((other, open));
                near.push((open.abs(), place(own, other)));
            }
        }
        let mut places = Vec::new();
        for (branch, marks) in branches.iter().enumerate() {
            for pair in marks.windows(2).filter(|pair| pair[0].1 * pair[1].1 <= 0.0) {
                let at = |other: f64, space: &mut Self| {
                    Ok(space.inner(first, inner, other)?.get(branch).copied())
                };
                let open = |other: f64| Ok(at(other, self)?.map(|(_, open)| open));
                if let Some(other) = close_in(open, pair[0], pair[1])?
                    && let Some((own, _)) = at(other, self)?
                {
                    places.push(place(own, other));
                }
            }
        }
        near.sort_by(|a, b| a.0.total_cmp(&b.0));
        places.extend(near.into_iter().take(NEAREST).map(|(_, place)| place));
        Ok(places)
    }

    /// With an amount of the other unknown: each amount of this one that meets the first goal,
    /// and how far the other goal is off with it.
    fn inner(&mut self, first: usize, inner: usize, other: f64) -> Result<Vec<Mark>, Failure> {
        let Unknown { row, brings } = &self.dosing.unknowns[1 - inner];
        let mut dosing = self.dosing.clone();
        for (j, n) in row {
            dosing.base.totals[*j] += n * other;
        }
        dosing.dilution += brings * other;
        dosing.unknowns = vec![self.dosing.unknowns[inner].clone()];
        let found = passed(one::find(
            &Of { bench: self.bench, goal: first },
            &dosing,
            &self.goals[first],
            None,
        ))?;
        let Some(Search::Met(met)) = found else { return Ok(Vec::new()) };
        self.trials += met.trials;
        let mut marks = Vec::new();
        for doses in std::iter::once(&met.doses).chain(&met.others) {
            self.trials += 1;
            let solved = self.bench.solve(dosing.system(doses), Some(&met.state));
            let Some(state) = passed(solved)? else { continue };
            let second = 1 - first;
            let value = self.bench.value(second, &state).filter(|value| value.is_finite());
            marks.extend(doses.first().copied().zip(value.map(|v| self.goals[second].off(v))));
        }
        Ok(marks)
    }
}
