//! Targets on random waters: a dose is hidden, a quantity of the mixture is asked for, and a
//! dose must be found that gives it. `LYATE_PROBLEMS=100000 cargo test --release --test
//! equilibrium_target -- --nocapture` is the long form.

mod equilibrium_support;

use std::sync::atomic::AtomicBool;

use equilibrium_support::{DAVIES, LN_10, Random, chemistry_like, row};
use lyate::equilibrium::sensitivity::buffer_capacity;
use lyate::equilibrium::solve::solve;
use lyate::equilibrium::system::{Answer, Failure, Fixed, IonicStrength, System};
use lyate::equilibrium::target::{Bench, Dosing, Goal, Met, Missed, Search, Unknown, find};

fn count(short: u64) -> u64 {
    let long = std::env::var("LYATE_PROBLEMS").ok().and_then(|n| n.parse::<u64>().ok());
    long.map_or(short, |n| n.max(1))
}

/// A quantity of a random water.
#[derive(Clone, Copy, Debug, PartialEq)]
enum Quantity {
    Ph,
    /// log10 of the activity of a species, as of a saturation index.
    Index(usize),
    Concentration(usize),
    Total(usize),
    IonicStrength,
    BufferCapacity,
}

impl Quantity {
    fn of(self, system: &System, answer: &Answer) -> Option<f64> {
        let value = match self {
            Quantity::Ph => answer.ph(),
            Quantity::Index(i) => (answer.concentrations[i].ln() + answer.ln_gammas[i]) / LN_10,
            Quantity::Concentration(i) => answer.concentrations[i],
            Quantity::Total(j) => system
                .species
                .iter()
                .zip(&answer.concentrations)
                .map(|(species, c)| {
                    let own = species.row.iter().find(|(column, _)| *column == j);
                    own.map_or(0.0, |(_, n)| *n.numer() as f64) * c
                })
                .sum(),
            Quantity::IonicStrength => answer.ionic_strength,
            Quantity::BufferCapacity => buffer_capacity(system, answer)?,
        };
        value.is_finite().then_some(value)
    }

    /// A goal as the product makes it of a file's target.
    fn goal(self, system: &System, wanted: f64) -> Goal {
        let held = |row: Vec<_>, ln_value: f64| Fixed {
            supply: row,
            row: Vec::new(),
            ln_value,
            water: 0.0,
            concentration_of: None,
        };
        let held = match self {
            Quantity::Ph => Some(held(row(&[(0, 1)]), -wanted * LN_10)),
            Quantity::Index(i) => {
                let species = &system.species[i];
                Some(held(species.row.clone(), wanted * LN_10 - species.ln_k))
            }
            Quantity::Concentration(i) => {
                let species = &system.species[i];
                let held = held(species.row.clone(), wanted.ln() - species.ln_k);
                Some(Fixed { concentration_of: Some(i), ..held })
            }
            _ => None,
        };
        let held = held.map(|held| Fixed { row: held.supply.clone(), ..held });
        let logarithmic = matches!(self, Quantity::Ph | Quantity::Index(_));
        let slope = self == Quantity::BufferCapacity;
        Goal { wanted, held, logarithmic, slope, single: false }
    }
}

struct Trials<'a> {
    quantities: &'a [Quantity],
}

impl Bench for Trials<'_> {
    type State = (System, Answer);

    fn solve(&self, system: System, near: Option<&Self::State>) -> Result<Self::State, Failure> {
        let near = near.map(|(_, answer)| answer);
        let answer = solve(&system, near, &AtomicBool::new(false))?;
        Ok((system, answer))
    }

    fn brought(&self, (_, answer): &Self::State, phase: usize) -> f64 {
        answer.amounts[phase]
    }

    fn value(&self, goal: usize, (system, answer): &Self::State) -> Option<f64> {
        self.quantities[goal].of(system, answer)
    }
}

fn water(random: &mut Random) -> System {
    let components = 2 + random.below(7);
    let species = 5 + random.below(26);
    chemistry_like(random, components, species)
}

/// Strong base or acid, or a neutral salt, acid or base of one component; now and then from a
/// stock that dilutes.
fn reagent(random: &mut Random, system: &System, strong: bool) -> Unknown {
    let brings = if random.chance(0.3) { random.uniform(0.02, 1.0) } else { 0.0 };
    let row = match random.below(if strong { 2 } else { 5 }) {
        0 => vec![(0, -1.0)],
        1 => vec![(0, 1.0)],
        _ => {
            let j = 1 + random.below(system.totals.len() - 1);
            let free = system.species.iter().find(|s| s.row == row(&[(j, 1)]));
            let charge = free.map_or(0.0, |species| f64::from(species.charge));
            // As chloride or sodium salt, or with protons or hydroxide for its ions.
            let protons = if random.chance(0.5) { -charge } else { random.between(-1, 1) as f64 };
            vec![(0, protons), (j, 1.0)]
        }
    };
    Unknown { row, brings }
}

fn quantity(random: &mut Random, system: &System) -> Quantity {
    let species = random.below(system.species.len());
    match random.below(8) {
        0..=2 => Quantity::Ph,
        3 => Quantity::Index(species),
        4 => Quantity::Concentration(species),
        5 => Quantity::Total(1 + random.below(system.totals.len() - 1)),
        6 => Quantity::IonicStrength,
        _ => Quantity::BufferCapacity,
    }
}

struct Survey {
    name: &'static str,
    asked: u32,
    trials: Vec<u32>,
    several: u32,
    failures: Vec<String>,
    /// Where the last digit of the dose moves the quantity by more than the bound.
    steep: u32,
}

impl Survey {
    fn new(name: &'static str) -> Self {
        Self { name, asked: 0, trials: Vec::new(), several: 0, failures: Vec::new(), steep: 0 }
    }

    fn finish(mut self, allowed: usize) {
        self.trials.sort_unstable();
        assert!(!self.trials.is_empty(), "{}: nothing was found", self.name);
        let at = |q: f64| self.trials[((self.trials.len() - 1) as f64 * q) as usize];
        println!(
            "{}: {} asked, {} met ({} with others, {} as near as a dose's digits allow), {} not; \
             states solved: median {}, 99 % {}, worst {}",
            self.name,
            self.asked,
            self.trials.len(),
            self.several,
            self.steep,
            self.failures.len(),
            at(0.5),
            at(0.99),
            at(1.0)
        );
        let shown = self.failures.iter().take(20).cloned().collect::<Vec<_>>().join("\n");
        assert!(self.failures.len() <= allowed, "{shown}");
    }

    /// Checks the doses by solving the mixture afresh, nothing held and from no start.
    fn check(
        &mut self,
        seed: u64,
        dosing: &Dosing,
        quantities: &[Quantity],
        goals: &[Goal],
        found: Result<Search<(System, Answer)>, Failure>,
    ) {
        self.asked += 1;
        let met: Met<_> = match found {
            Ok(Search::Met(met)) => *met,
            other => {
                let what = match other {
                    Ok(Search::Missed(missed)) => format!("{missed:?}"),
                    Ok(_) => String::new(),
                    Err(failure) => format!("{failure:?}"),
                };
                self.failures.push(format!("{} {seed}: {quantities:?} {what}", self.name));
                return;
            }
        };
        self.several += u32::from(!met.others.is_empty());
        for (k, goal) in goals.iter().enumerate() {
            let value = |doses: &[f64]| {
                let system = dosing.system(doses);
                let answer = run(&system)?;
                quantities[k].of(&system, &answer)
            };
            let off = |doses: &[f64]| value(doses).map_or(f64::INFINITY, |v| goal.off(v).abs());
            let left = off(&met.doses);
            if left <= 1e-10 {
                continue;
            }
            // A step of some last digits of the totals and of the dose.
            let slack: f64 = (0..met.doses.len())
                .map(|i| {
                    let mut moved = met.doses.clone();
                    let size: f64 = dosing.base.totals.iter().map(|t| t.abs()).sum();
                    moved[i] += 1e-14 * (moved[i] + size);
                    off(&moved)
                })
                .fold(0.0, f64::max);
            if left <= 2.0 * slack {
                self.steep += 1;
            } else {
                let doses = &met.doses;
                let what = format!("{:?} at {doses:?} is off by {left:e}", quantities[k]);
                self.failures.push(format!("{} {seed}: {what} ({slack:e})", self.name));
                return;
            }
        }
        self.trials.push(met.trials);
    }
}

fn run(system: &System) -> Option<Answer> {
    solve(system, None, &AtomicBool::new(false)).ok()
}

/// Hides doses in random waters and asks for what they give.
fn hidden(survey: &mut Survey, seed: u64, goals: usize, davies: bool) {
    let random = &mut Random::new(seed ^ 0x7a67_0000);
    let mut base = water(random);
    if davies {
        base.activity = DAVIES;
        base.totals.iter_mut().for_each(|total| *total *= 0.1);
    }
    let unknowns: Vec<Unknown> = (0..goals).map(|_| reagent(random, &base, false)).collect();
    let dilution = if random.chance(0.2) { 1.0 + random.uniform(0.0, 0.1) } else { 1.0 };
    let most = if davies { -1.0 } else { 0.0 };
    let doses: Vec<f64> = (0..goals).map(|_| 10f64.powf(random.uniform(-6.0, most))).collect();
    let quantities: Vec<Quantity> = (0..goals).map(|_| quantity(random, &base)).collect();
    let dosing = Dosing { base, dilution, unknowns };
    let system = dosing.system(&doses);
    let (Some(answer), Some(untouched)) = (run(&system), run(&dosing.system(&vec![0.0; goals])))
    else {
        return;
    };
    if answer.ionic_strength.max(untouched.ionic_strength) > 1.0 && davies {
        return;
    }
    let mut asked = Vec::new();
    for quantity in &quantities {
        let Some(wanted) = quantity.of(&system, &answer) else { return };
        let first = quantity.of(&dosing.system(&vec![0.0; goals]), &untouched);
        let goal = quantity.goal(&dosing.base, wanted);
        // What is absent, or does not move, is asked for elsewhere.
        if !goal.wanted.is_finite() || goal.wanted == 0.0 {
            return;
        }
        if first.is_some_and(|first| goal.off(first).abs() < 1e-6) {
            return;
        }
        asked.push(goal);
    }
    // Two that bring the same, or one that is told by how it dilutes alone, are no two doses.
    if goals > 1
        && (dosing.unknowns[0].row == dosing.unknowns[1].row
            || !apart(&dosing, &doses, &quantities, &asked))
    {
        return;
    }
    let found = find(&Trials { quantities: &quantities }, &dosing, &asked, None);
    survey.check(seed, &dosing, &quantities, &asked, found);
}

/// Whether the goals depend on the doses in ways that can be told apart.
fn apart(dosing: &Dosing, doses: &[f64], quantities: &[Quantity], goals: &[Goal]) -> bool {
    let off = |doses: &[f64]| -> Option<Vec<f64>> {
        let system = dosing.system(doses);
        let answer = run(&system)?;
        let values = quantities.iter().zip(goals);
        values.map(|(quantity, goal)| Some(goal.off(quantity.of(&system, &answer)?))).collect()
    };
    let slope = |i: usize| {
        let mut moved = doses.to_vec();
        moved[i] *= 1.0 + 1e-5;
        off(&moved).map(|off| off.iter().map(|o| o / 1e-5).collect::<Vec<f64>>())
    };
    let (Some(a), Some(b)) = (slope(0), slope(1)) else { return false };
    let size = |v: &[f64]| v.iter().map(|x| x * x).sum::<f64>().sqrt();
    let cross = (a[0] * b[1] - a[1] * b[0]).abs();
    size(&a) > 1e-3 && size(&b) > 1e-3 && cross > 1e-2 * size(&a) * size(&b)
}

#[test]
fn hidden_doses_are_met() {
    let mut survey = Survey::new("one target, ideal");
    for seed in 0..count(120) {
        hidden(&mut survey, seed, 1, false);
    }
    survey.finish(0);
}

#[test]
fn hidden_doses_are_met_with_davies() {
    let mut survey = Survey::new("one target, Davies");
    for seed in 0..count(80) {
        hidden(&mut survey, seed, 1, true);
    }
    survey.finish(0);
}

#[test]
fn two_hidden_doses_are_met() {
    let mut survey = Survey::new("two targets, ideal");
    for seed in 0..count(60) {
        hidden(&mut survey, seed, 2, false);
    }
    survey.finish(0);
}

/// Acid and base for a pH: as files that ask for a dose mostly do.
#[test]
fn a_ph_by_acid_or_base_takes_few_states() {
    let mut survey = Survey::new("pH by strong acid or base");
    for seed in 0..count(150) {
        let random = &mut Random::new(seed ^ 0x00ac_1d00);
        let mut base = water(random);
        if random.chance(0.5) {
            base.activity = DAVIES;
            base.totals.iter_mut().for_each(|total| *total *= 0.1);
        }
        let dosing = Dosing { unknowns: vec![reagent(random, &base, true)], base, dilution: 1.0 };
        let dose = 10f64.powf(random.uniform(-6.0, -0.5));
        let Some(answer) = run(&dosing.system(&[dose])) else { continue };
        if answer.ionic_strength > 1.0 || run(&dosing.system(&[0.0])).is_none() {
            continue;
        }
        let quantities = [Quantity::Ph];
        let goal = Goal { single: true, ..Quantity::Ph.goal(&dosing.base, answer.ph()) };
        let found =
            find(&Trials { quantities: &quantities }, &dosing, std::slice::from_ref(&goal), None);
        survey.check(seed, &dosing, &quantities, &[goal], found);
    }
    survey.finish(0);
}

/// A base lowers no pH, and a pH beyond the stock's own is not to be had.
#[test]
fn what_cannot_be_reached_is_named() {
    let mut named = 0;
    for seed in 0..count(60) {
        let random = &mut Random::new(seed ^ 0x0dd0_0000);
        let base = water(random);
        let base_or_acid = reagent(random, &base, true);
        let raises = base_or_acid.row[0].1 < 0.0;
        let brings = base_or_acid.brings;
        let dosing = Dosing { base, dilution: 1.0, unknowns: vec![base_or_acid] };
        let Some(answer) = run(&dosing.system(&[0.0])) else { continue };
        let ph = answer.ph();
        // A stock dilutes, and may so bring an acid or a base towards the neutral.
        if brings > 0.0 || !(0.0..=14.0).contains(&ph) {
            continue;
        }
        let wanted = if raises { ph - 1.0 } else { ph + 1.0 };
        for single in [true, false] {
            let goal = Goal { single, ..Quantity::Ph.goal(&dosing.base, wanted) };
            let trials = Trials { quantities: &[Quantity::Ph] };
            let missed = match find(&trials, &dosing, &[goal], None) {
                Ok(Search::Missed(Missed::Short(nearest))) => nearest,
                other => panic!("{seed}: {other:?}"),
            };
            assert_eq!(missed.dose, 0.0, "{seed}");
            assert_eq!(missed.raises, raises, "{seed}");
            assert!((missed.value - ph).abs() < 1e-9, "{seed}");
        }
        named += 1;
    }
    assert!(named > 10, "{named}");
}

/// With neither sodium nor anything that binds it, no acid moves it.
#[test]
fn what_does_not_move_is_told_apart() {
    let charges = [1, 1];
    let species =
        |entries: &[(usize, i64)], log_k| equilibrium_support::species(entries, log_k, &charges);
    let base = System {
        species: vec![species(&[(0, 1)], 0.0), species(&[(0, -1)], -14.0), species(&[(1, 1)], 0.0)],
        totals: vec![0.0, 1e-3],
        fixed: Vec::new(),
        candidates: Vec::new(),
        activity: equilibrium_support::IDEAL,
        ionic_strength: IonicStrength::Computed,
    };
    let acid = Unknown { row: vec![(0, 1.0)], brings: 0.0 };
    let dosing = Dosing { base, dilution: 1.0, unknowns: vec![acid] };
    let quantities = [Quantity::Concentration(2)];
    for wanted in [2e-3, 1e-4] {
        let goal = quantities[0].goal(&dosing.base, wanted);
        let found = find(&Trials { quantities: &quantities }, &dosing, &[goal], None);
        let still = matches!(
            found,
            Ok(Search::Missed(Missed::Still { value: Some(value) })) if (value - 1e-3).abs() < 1e-15
        );
        assert!(still, "{found:?}");
    }
}

#[test]
fn a_raised_flag_stops_the_search() {
    struct Cancelled;
    impl Bench for Cancelled {
        type State = ();
        fn solve(&self, _: System, _: Option<&()>) -> Result<(), Failure> {
            Err(Failure::Cancelled)
        }
        fn brought(&self, (): &(), _: usize) -> f64 {
            0.0
        }
        fn value(&self, _: usize, (): &()) -> Option<f64> {
            None
        }
    }
    let random = &mut Random::new(5);
    let base = water(random);
    for count in [1, 2] {
        let unknown = Unknown { row: vec![(0, 1.0)], brings: 0.0 };
        let unknowns = vec![unknown; count];
        let goals = vec![Quantity::Ph.goal(&base, 7.0); count];
        let dosing = Dosing { base: base.clone(), dilution: 1.0, unknowns };
        assert!(matches!(find(&Cancelled, &dosing, &goals, None), Err(Failure::Cancelled)));
    }
}
