//! A problem over a range of pH, everything else as it is solved: what a diagram of log
//! concentration or of fractions is drawn from.
//!
//! The ionic strength stays that of the answer. Then all constants are those of the one
//! water that the diagram is about: away from curves at its system points the lines are
//! straight, and no activity model is asked beyond its range at the ends of the pH scale.
//! At the answer's own pH the state is the answer.

use std::f64::consts::LN_10;
use std::sync::atomic::AtomicBool;

use num_rational::Rational64;
use num_traits::{One, Signed, ToPrimitive};

use super::phases::{Near, equilibrate};
use super::system::{Answer, Failure, Fixed, IonicStrength, System};
use crate::balance::Balance;
use crate::balance::recipe::Recipe;
use crate::problem::scope::PROTON;

/// pH between the states that are solved first.
const STEP: f64 = 0.25;
/// How often a step may be halved.
const HALVINGS: u32 = 5;
/// log10 of a concentration, or share of a component in a solid, that a line may stray from
/// the states between which it is drawn.
const STRAIGHT: f64 = 0.002;
/// Below this log10 concentration nobody looks.
const FAINT: f64 = -24.0;

/// States by rising pH.
#[derive(Clone, Debug)]
pub struct Sweep {
    /// The system with the pH held.
    pub system: System,
    /// None where there is no state, or none was found.
    pub states: Vec<(f64, Option<Answer>)>,
}

/// Two forms of a component that are equally much where one gives way to the other.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct SystemPoint {
    pub component: usize,
    /// Rows of the stoichiometry; the acid holds more protons.
    pub acid: usize,
    pub base: usize,
    /// The pKa at the sweep's ionic strength, for concentrations of the two forms. Where more
    /// than one proton goes at once, the mean of their pKa.
    pub ph: f64,
    /// log10 of the component's total in mol per litre or kilogram.
    pub log_total: f64,
}

/// Solves a system at pH values between two, close enough together that straight lines
/// between them are true to 0.002 in log10 of every concentration, and in every solid's share.
/// A held pH gives way.
///
/// # Errors
/// Only [`Failure::Cancelled`]: where a state is missing, the sweep has a gap.
pub fn over_ph(
    system: &System,
    ionic_strength: Option<f64>,
    from: f64,
    to: f64,
    cancel: &AtomicBool,
) -> Result<Sweep, Failure> {
    let mut system = system.clone();
    if let Some(given) = ionic_strength {
        system.ionic_strength = IonicStrength::Given(given);
    }
    let row = vec![(PROTON, Rational64::one())];
    let (supply, concentration_of) = (row.clone(), None);
    let free = Fixed { row: row.clone(), ln_value: 0.0, water: 0.0, concentration_of, supply };
    let held = match system.fixed.iter().position(|fixed| fixed.row == row) {
        Some(index) => {
            system.fixed[index] = free;
            index
        }
        None => {
            system.fixed.push(free);
            system.fixed.len() - 1
        }
    };
    let mut walk = Walk { system, held, cancel, last: None, formed: Vec::new() };
    let steps = ((to - from) / STEP).ceil().clamp(1.0, 400.0) as u32;
    let mut states: Vec<(f64, Option<Answer>)> = Vec::new();
    for n in 0..=steps {
        let ph = from + (to - from) * f64::from(n) / f64::from(steps);
        let state = walk.state(ph)?;
        if let Some(before) = states.pop() {
            walk.between(before, (ph, state), HALVINGS, &mut states)?;
        } else {
            states.push((ph, state));
        }
    }
    Ok(Sweep { system: walk.system, states })
}

struct Walk<'a> {
    system: System,
    /// Which of the fixed values is the pH.
    held: usize,
    cancel: &'a AtomicBool,
    last: Option<Answer>,
    /// Where the solids that formed stand in the last answer.
    formed: Vec<Option<usize>>,
}

impl Walk<'_> {
    /// The state at a pH; its amounts are those of the held values and, behind them, of each
    /// solid that may form.
    fn state(&mut self, ph: f64) -> Result<Option<Answer>, Failure> {
        self.system.fixed[self.held].ln_value = -ph * LN_10;
        let near = self.last.as_ref().map(|answer| Near { answer, formed: &self.formed });
        let started = near.is_some();
        let found = match equilibrate(self.system.clone(), near, self.cancel) {
            Err(Failure::NotConverged { .. }) if started => {
                equilibrate(self.system.clone(), None, self.cancel)
            }
            found => found,
        };
        match found {
            Ok(found) => {
                let mut answer = found.answer.clone();
                let at = |k: usize| found.answer.amounts.get(k).copied().unwrap_or(0.0);
                answer.amounts.truncate(self.system.fixed.len());
                answer.amounts.extend(found.formed.iter().map(|place| place.map_or(0.0, at)));
                (self.last, self.formed) = (Some(found.answer), found.formed);
                Ok(Some(answer))
            }
            Err(Failure::Cancelled) => Err(Failure::Cancelled),
            Err(_) => Ok(None),
        }
    }

    /// Adds the states from one to another, both included, with those between that it takes.
    fn between(
        &mut self,
        from: (f64, Option<Answer>),
        to: (f64, Option<Answer>),
        halvings: u32,
        states: &mut Vec<(f64, Option<Answer>)>,
    ) -> Result<(), Failure> {
        let nothing = from.1.is_none() && to.1.is_none();
        if halvings == 0 || nothing {
            states.extend([from, to]);
            return Ok(());
        }
        let ph = 0.5 * (from.0 + to.0);
        let middle = self.state(ph)?;
        if let (Some(one), Some(state), Some(other)) = (&from.1, &middle, &to.1)
            && strays(&self.system, one, state, other) <= STRAIGHT
        {
            states.extend([from, (ph, middle), to]);
            return Ok(());
        }
        self.between(from, (ph, middle), halvings - 1, states)?;
        if let Some(middle) = states.pop() {
            self.between(middle, to, halvings - 1, states)?;
        }
        Ok(())
    }
}

/// How far a state lies from the straight lines between its neighbours, in log10 of
/// concentrations and in shares of what is in solids.
fn strays(system: &System, one: &Answer, middle: &Answer, other: &Answer) -> f64 {
    let logs = |answer: &Answer, i: usize| answer.concentrations[i].log10();
    let dissolved = (0..middle.concentrations.len())
        .map(|i| (logs(one, i), logs(middle, i), logs(other, i)))
        .filter(|(a, b, c)| a.max(*b).max(*c) > FAINT)
        .map(|(a, b, c)| (b - 0.5 * (a + c)).abs());
    let solids = system.candidates.iter().enumerate().map(|(k, candidate)| {
        let amount = |answer: &Answer| formed(system, answer, k);
        let stray = (amount(middle) - 0.5 * (amount(one) + amount(other))).abs();
        // Of the protons and electrons, a solid may hold more than there are.
        let total = |&(j, n): &(usize, Rational64)| system.totals[j] / n.to_f64().unwrap_or(1.0);
        let totals = candidate.row.iter().map(total).filter(|total| *total > 0.0);
        stray / totals.fold(f64::INFINITY, f64::min)
    });
    dissolved.chain(solids).filter(|stray| stray.is_finite()).fold(0.0, f64::max)
}

/// mol per litre or kilogram of a solid that may form which is there in a state of a sweep.
fn formed(system: &System, state: &Answer, candidate: usize) -> f64 {
    let brought = state.amounts.get(system.fixed.len() + candidate);
    brought.map_or(0.0, |brought| 0.0 - brought)
}

impl Sweep {
    /// The states that were found.
    pub fn found(&self) -> impl Iterator<Item = (f64, &Answer)> {
        self.states.iter().filter_map(|(ph, state)| Some((*ph, state.as_ref()?)))
    }

    /// mol per litre or kilogram of a solid that may form which is there in a state.
    pub fn formed(&self, state: &Answer, candidate: usize) -> f64 {
        formed(&self.system, state, candidate)
    }

    /// Whether some of a component is in a solid.
    fn is_precipitated(&self, state: &Answer, component: usize) -> bool {
        let mut candidates = self.system.candidates.iter().enumerate();
        candidates.any(|(k, candidate)| {
            candidate.row.iter().any(|&(j, _)| j == component) && self.formed(state, k) > 0.0
        })
    }

    /// The state nearest to a pH.
    fn near(&self, ph: f64) -> Option<&Answer> {
        let nearest = self.found().min_by(|a, b| (a.0 - ph).abs().total_cmp(&(b.0 - ph).abs()))?;
        Some(nearest.1)
    }
}

/// The system points of every component whose total is given and which is, there, all
/// dissolved and mostly in the two forms that meet. What holds two of the component, or
/// another one, has no part.
pub fn system_points(sweep: &Sweep) -> Vec<SystemPoint> {
    let Some((_, state)) = sweep.found().next() else { return Vec::new() };
    let mut points = Vec::new();
    for j in 1..sweep.system.totals.len() {
        let total = sweep.system.totals[j];
        let open = |fixed: &Fixed| fixed.supply.iter().any(|&(k, _)| k == j);
        if total <= 0.0 || sweep.system.fixed.iter().any(open) {
            continue;
        }
        for [acid, base] in succession(&forms(sweep, state, j)) {
            let ph = (acid.height - base.height) / ((acid.protons - base.protons) * LN_10);
            let Some(near) = sweep.near(ph).filter(|near| !sweep.is_precipitated(near, j)) else {
                continue;
            };
            let both = near.concentrations[acid.row] + near.concentrations[base.row];
            if both >= 0.5 * total {
                let (acid, base) = (acid.row, base.row);
                points.push(SystemPoint { component: j, acid, base, ph, log_total: total.log10() });
            }
        }
    }
    let (first, last) = (sweep.states.first(), sweep.states.last());
    if let (Some(&(from, _)), Some(&(to, _))) = (first, last) {
        points.retain(|point| from < point.ph && point.ph < to);
    }
    points
}

/// A species that is one of a component and some protons, more or fewer.
#[derive(Clone, Copy)]
struct Form {
    row: usize,
    protons: f64,
    /// ln concentration where the free component and the proton have activity one.
    height: f64,
}

fn forms(sweep: &Sweep, state: &Answer, component: usize) -> Vec<Form> {
    let species = sweep.system.species.iter().enumerate();
    species
        .filter_map(|(row, species)| {
            let mut protons = 0.0;
            let mut own = false;
            for &(k, n) in &species.row {
                match k {
                    PROTON => protons = n.to_f64()?,
                    k if k == component && n.is_one() => own = true,
                    _ => return None,
                }
            }
            let height = species.ln_k - state.ln_gammas[row];
            (own && height.is_finite()).then_some(Form { row, protons, height })
        })
        .collect()
}

/// The forms that are most of a component, one after another by rising pH, in pairs.
fn succession(forms: &[Form]) -> Vec<[Form; 2]> {
    let most =
        |a: &&Form, b: &&Form| a.protons.total_cmp(&b.protons).then(a.height.total_cmp(&b.height));
    let Some(mut now) = forms.iter().max_by(most) else { return Vec::new() };
    let mut pairs = Vec::new();
    loop {
        let meets = |form: &Form| (now.height - form.height) / (now.protons - form.protons);
        let next = forms
            .iter()
            .filter(|form| form.protons < now.protons)
            .min_by(|a, b| meets(a).total_cmp(&meets(b)).then(a.protons.total_cmp(&b.protons)));
        let Some(next) = next else { return pairs };
        pairs.push([*now, *next]);
        now = next;
    }
}

/// Both sides of a balance in a state, mol per litre or kilogram. None for a side one of
/// whose constants is not known there.
pub fn sides(balance: &Balance, recipe: &Recipe, state: &Answer) -> [Option<f64>; 2] {
    let mut recipe = recipe.clone();
    for (held, &amount) in recipe.held.iter_mut().zip(&state.amounts) {
        held.amount = Some(amount);
    }
    // A solid that forms takes away what it brings less than nothing of.
    let solids = state.amounts.iter().rev().zip(recipe.precipitates.iter_mut().rev());
    for (&amount, solid) in solids {
        solid.amount = Some(0.0 - amount);
    }
    let mut sides = [Some(0.0), Some(0.0)];
    let mut add = |side: usize, value: Option<f64>| {
        sides[side] = sides[side].zip(value).map(|(sum, value)| sum + value);
    };
    for &(row, n) in &balance.terms {
        let value = n.abs().to_f64().map(|n| n * state.concentrations[row]);
        add(usize::from(n.is_negative()), value);
    }
    for &(part, n) in &balance.parts {
        let value = n.abs().to_f64().zip(recipe.value(part)).map(|(n, value)| n * value);
        add(usize::from(n.is_positive()), value);
    }
    sides
}
