//! Equilibria with coefficients that depend on the whole composition: against solutions in
//! many digits, on random waters and brines, and the derivatives of the answers.
//! `LYATE_PROBLEMS=100000 cargo test --release --test equilibrium_interaction --
//! --nocapture` is the long form.

mod equilibrium_support;

use std::sync::Arc;
use std::sync::atomic::AtomicBool;

use equilibrium_support::{IDEAL, Random, chemistry_like, hold_ph, row, species};
use lyate::chemistry::formula::{Formula, Groups};
use lyate::chemistry::interaction::Interaction;
use lyate::equilibrium::sensitivity::{Response, Sensitivity};
use lyate::equilibrium::solve::solve;
use lyate::equilibrium::system::{
    Activity, Answer, Failure, Fixed, IonicStrength, Species, System,
};
use serde::Deserialize;

fn count(short: u64) -> u64 {
    let long = std::env::var("LYATE_PROBLEMS").ok().and_then(|n| n.parse::<u64>().ok());
    long.map_or(short, |n| n.max(1))
}

fn run(system: &System, start: Option<&Answer>) -> Result<Answer, Failure> {
    solve(system, start, &AtomicBool::new(false))
}

fn by_composition(names: &[&str], a_phi: f64) -> Activity {
    let read = |name: &&str| Formula::parse(name, &Groups::new()).unwrap();
    let formulas: Vec<Formula> = names.iter().map(read).collect();
    Activity::ByComposition(Arc::new(Interaction::with_a_phi(&formulas, a_phi)))
}

/// What is wrong with an answer, if anything: rows, or coefficients that are not those of
/// its own composition.
fn wrong(system: &System, answer: &Answer) -> Option<String> {
    if answer.residual > 2e-12 {
        return Some(format!("closed only to {:e}", answer.residual));
    }
    let Activity::ByComposition(interaction) = &system.activity else { return None };
    let own = interaction.coefficients(&answer.concentrations);
    let pairs = own.ln_gamma.iter().zip(&answer.ln_gammas).zip(&answer.concentrations);
    for (i, ((own, ln), c)) in pairs.enumerate() {
        if *c > 0.0 && (own - ln).abs() > 2e-12 * ln.abs().max(1.0) {
            return Some(format!("ln γ of species {i} is {ln}, its composition gives {own}"));
        }
    }
    let off = (own.ln_water - answer.ln_water).abs();
    (off > 2e-12).then(|| format!("ln activity of water off by {off:e}"))
}

#[derive(Deserialize)]
struct Reference {
    name: String,
    a_phi: f64,
    totals: Vec<f64>,
    ln_water: String,
    species: Vec<Member>,
}

#[derive(Deserialize)]
struct Member {
    name: String,
    row: Vec<(usize, i64)>,
    ln_k: f64,
    water: f64,
    ln_gamma: String,
    ln_c: String,
}

/// tests/reference/interaction.py solved them by another method, from the equations as
/// they are published, ion by ion.
#[test]
fn answers_agree_with_many_digit_arithmetic() {
    let text = include_str!("reference/interaction.json");
    let references: Vec<Reference> = serde_json::from_str(text).expect("the file is JSON");
    assert_eq!(references.len(), 13);
    for reference in &references {
        let names: Vec<&str> = reference.species.iter().map(|s| s.name.as_str()).collect();
        let system = System {
            species: reference
                .species
                .iter()
                .map(|member| Species {
                    row: row(&member.row),
                    ln_k: member.ln_k,
                    water: member.water,
                    charge: Formula::parse(&member.name, &Groups::new()).unwrap().charge,
                    ion_size: 0.0,
                })
                .collect(),
            totals: reference.totals.clone(),
            fixed: Vec::new(),
            candidates: Vec::new(),
            activity: by_composition(&names, reference.a_phi),
            ionic_strength: IonicStrength::Computed,
        };
        let answer = run(&system, None).expect(&reference.name);
        let near = |what: &str, found: f64, text: &str, within: f64| {
            let off = (found - text.parse::<f64>().expect("a number")).abs();
            assert!(off < within, "{}, {what}: {found} is off by {off:e}", reference.name);
        };
        near("water", answer.ln_water, &reference.ln_water, 1e-11);
        for (i, member) in reference.species.iter().enumerate() {
            near(&member.name, answer.concentrations[i].ln(), &member.ln_c, 1e-9);
            near(&member.name, answer.ln_gammas[i], &member.ln_gamma, 1e-10);
        }
    }
}

/// Charge, name.
const CATIONS: [(i64, &str); 9] = [
    (1, "Na+"),
    (1, "K+"),
    (2, "Ca^2+"),
    (2, "Mg^2+"),
    (1, "NH4+"),
    (1, "Li+"),
    (2, "Zn^2+"),
    (3, "Fe^3+"),
    (2, "Ba^2+"),
];
const ANIONS: [(i64, &str); 9] = [
    (-1, "Cl-"),
    (-2, "SO4^2-"),
    (-2, "CO3^2-"),
    (-1, "NO3-"),
    (-1, "F-"),
    (-1, "CH3COO-"),
    (-1, "ClO4-"),
    (-3, "PO4^3-"),
    (-1, "I-"),
];
/// From the ions above and protons: name, parts, protons, log10 K (from memory, and no
/// matter here), water.
const FORMED: [(&str, &[&str], i64, f64, f64); 17] = [
    ("HSO4-", &["SO4^2-"], 1, 1.99, 0.0),
    ("HCO3-", &["CO3^2-"], 1, 10.33, 0.0),
    ("CO2", &["CO3^2-"], 2, 16.68, -1.0),
    ("NH3", &["NH4+"], -1, -9.24, 0.0),
    ("HF", &["F-"], 1, 3.18, 0.0),
    ("CH3COOH", &["CH3COO-"], 1, 4.76, 0.0),
    ("HPO4^2-", &["PO4^3-"], 1, 12.35, 0.0),
    ("H2PO4-", &["PO4^3-"], 2, 19.55, 0.0),
    ("H3PO4", &["PO4^3-"], 3, 21.7, 0.0),
    ("MgOH+", &["Mg^2+"], -1, -11.8, 1.0),
    ("MgCO3", &["Mg^2+", "CO3^2-"], 0, 2.93, 0.0),
    ("CaCO3", &["Ca^2+", "CO3^2-"], 0, 3.15, 0.0),
    ("FeOH^2+", &["Fe^3+"], -1, -2.2, 1.0),
    ("Fe(OH)2+", &["Fe^3+"], -2, -5.7, 2.0),
    ("FeSO4+", &["Fe^3+", "SO4^2-"], 0, 4.0, 0.0),
    ("ZnOH+", &["Zn^2+"], -1, -9.0, 1.0),
    ("ZnCl+", &["Zn^2+", "Cl-"], 0, 0.4, 0.0),
];

/// Waters and brines of up to ten ions, those without parameters among them, up to an
/// ionic strength of about 6, the acid or base that closes the charge included as it comes.
fn water(random: &mut Random) -> System {
    let mut ions: Vec<(i64, &str)> = Vec::new();
    for table in [&CATIONS, &ANIONS] {
        for _ in 0..1 + random.below(5) {
            let ion = table[random.below(table.len())];
            if !ions.contains(&ion) {
                ions.push(ion);
            }
        }
    }
    let charges: Vec<i64> = std::iter::once(1).chain(ions.iter().map(|ion| ion.0)).collect();
    let mut names = vec!["H+", "OH-"];
    let mut list = vec![species(&[(0, 1)], 0.0, &charges), species(&[(0, -1)], -13.995, &charges)];
    list[1].water = 1.0;
    for (j, ion) in ions.iter().enumerate() {
        names.push(ion.1);
        list.push(species(&[(j + 1, 1)], 0.0, &charges));
    }
    for (name, parts, protons, log_k, water) in FORMED {
        let place = |part: &&str| ions.iter().position(|ion| ion.1 == *part);
        let Some(places) = parts.iter().map(place).collect::<Option<Vec<usize>>>() else {
            continue;
        };
        let mut entries = vec![(0, protons)];
        entries.extend(places.iter().map(|j| (j + 1, 1)));
        let shift = random.uniform(-0.3, 0.3);
        let mut formed = species(&entries, log_k + shift, &charges);
        formed.water = water;
        names.push(name);
        list.push(formed);
    }
    let mut totals = vec![0.0; ions.len() + 1];
    for total in totals.iter_mut().skip(1) {
        *total = 10f64.powf(random.uniform(-5.0, 0.5));
    }
    // Most charges carried by other ions, some by strong acid or base.
    let charge =
        |totals: &[f64]| -> f64 { (1..totals.len()).map(|j| charges[j] as f64 * totals[j]).sum() };
    if random.chance(0.7) {
        let left = charge(&totals);
        let j = 1 + random.below(ions.len());
        let other = totals[j] - left / charges[j] as f64;
        if other > 0.0 {
            totals[j] = other * random.uniform(0.9, 1.1);
        }
    }
    let left = charge(&totals);
    let strength: f64 = 0.5
        * ((1..totals.len()).map(|j| (charges[j] * charges[j]) as f64 * totals[j]).sum::<f64>()
            + left.abs());
    let wanted = 10f64.powf(random.uniform(-4.0, 6f64.log10()));
    totals.iter_mut().for_each(|total| *total *= wanted / strength);
    totals[0] = -charge(&totals);
    System {
        species: list,
        totals,
        fixed: Vec::new(),
        candidates: Vec::new(),
        activity: by_composition(&names, 0.3915),
        ionic_strength: IonicStrength::Computed,
    }
}

struct Survey {
    name: &'static str,
    iterations: Vec<u32>,
    strengths: Vec<f64>,
    failures: Vec<String>,
}

impl Survey {
    fn new(name: &'static str) -> Self {
        Self { name, iterations: Vec::new(), strengths: Vec::new(), failures: Vec::new() }
    }

    fn take(
        &mut self,
        seed: u64,
        system: &System,
        result: Result<Answer, Failure>,
    ) -> Option<Answer> {
        let what = match result {
            Ok(answer) => match wrong(system, &answer) {
                None => {
                    self.iterations.push(answer.iterations);
                    self.strengths.push(answer.ionic_strength);
                    return Some(answer);
                }
                Some(what) => what,
            },
            Err(failure) => format!("{failure:?}"),
        };
        self.failures.push(format!("{} {seed}: {what}", self.name));
        None
    }

    fn finish(mut self, allowed: usize) {
        self.iterations.sort_unstable();
        self.strengths.sort_unstable_by(f64::total_cmp);
        assert!(!self.iterations.is_empty(), "{}: nothing was solved", self.name);
        let last = self.iterations.len() - 1;
        let place = |q: f64| (last as f64 * q) as usize;
        println!(
            "{}: {} solved, {} failed; iterations median {}, 99 % {}, worst {}; ionic strength \
             median {:.3}, most {:.2}",
            self.name,
            self.iterations.len(),
            self.failures.len(),
            self.iterations[place(0.5)],
            self.iterations[place(0.99)],
            self.iterations[last],
            self.strengths[place(0.5)],
            self.strengths[last],
        );
        let shown = self.failures.iter().take(20).cloned().collect::<Vec<_>>().join("\n");
        assert!(self.failures.len() <= allowed, "{shown}");
    }
}

#[test]
fn waters_and_brines_solve() {
    let mut survey = Survey::new("waters and brines");
    for seed in 0..count(100) {
        let system = water(&mut Random::new(seed));
        survey.take(seed, &system, run(&system, None));
    }
    survey.finish(0);
}

#[test]
fn a_near_answer_leads_to_the_same_state() {
    let mut survey = Survey::new("from a near answer");
    for seed in 0..count(30) {
        let random = &mut Random::new(seed);
        let system = water(random);
        let mut near = system.clone();
        near.totals.iter_mut().for_each(|total| *total *= random.uniform(0.8, 1.2));
        let Ok(start) = run(&near, None) else { continue };
        let Ok(cold) = run(&system, None) else { continue };
        if let Some(warm) = survey.take(seed, &system, run(&system, Some(&start)))
            && (warm.ph() - cold.ph()).abs() > 1e-9
        {
            survey.failures.push(format!("{seed}: pH {} and {}", warm.ph(), cold.ph()));
        }
    }
    survey.finish(0);
}

/// A held pH, a neutral species held by its concentration or activity, an ion too.
#[test]
fn held_values_solve() {
    let mut survey = Survey::new("held values");
    for seed in 0..count(45) {
        let random = &mut Random::new(seed);
        let mut system = water(random);
        let Ok(free) = run(&system, None) else { continue };
        match seed % 3 {
            0 => hold_ph(&mut system, random.uniform(0.0, 13.5)),
            _ => {
                // The value that it has anyway.
                let i = 2 + random.below(system.species.len() - 2);
                let held = &system.species[i];
                let by_concentration = seed % 3 == 1;
                let c = free.concentrations[i].ln();
                if c < -40.0 || (held.charge != 0 && seed % 4 > 0) {
                    continue;
                }
                let component = held.row.iter().map(|e| e.0).find(|j| *j != 0).unwrap_or(0);
                let mut supply = held.row.clone();
                let charge = num_rational::Rational64::from_integer(i64::from(held.charge));
                match supply.iter().position(|e| e.0 == 0) {
                    Some(at) => supply[at].1 -= charge,
                    None => supply.insert(0, (0, -charge)),
                }
                supply.retain(|e| *e.1.numer() != 0);
                let amount = system.totals[component];
                for (j, n) in &supply {
                    system.totals[*j] -= amount * *n.numer() as f64 / *n.denom() as f64;
                }
                system.totals[component] = 0.0;
                let ln_gamma = if by_concentration { 0.0 } else { free.ln_gammas[i] };
                system.fixed.push(Fixed {
                    row: held.row.clone(),
                    ln_value: c + ln_gamma - held.ln_k,
                    water: held.water,
                    concentration_of: by_concentration.then_some(i),
                    supply,
                });
            }
        }
        let is_ion = system.fixed[0].row != system.fixed[0].supply;
        let result = run(&system, None);
        // An ion can be held in several states: any of them will do.
        let Some(answer) = survey.take(seed, &system, result) else { continue };
        if let Some(i) = system.fixed[0].concentration_of
            && (answer.concentrations[i] / free.concentrations[i] - 1.0).abs() > 1e-9
        {
            survey.failures.push(format!("{seed}: not the held concentration"));
        }
        if !is_ion && seed % 3 > 0 && (answer.ph() - free.ph()).abs() > 1e-6 {
            survey.failures.push(format!("{seed}: pH {} and {}", answer.ph(), free.ph()));
        }
    }
    survey.finish(0);
}

/// Any species at all, each taken for an ion of the table by its charge, or for none.
#[test]
fn chemistry_like_problems_solve() {
    let mut survey = Survey::new("chemistry-like");
    let known = [
        (0, &["CO2"][..]),
        (1, &["Na+", "K+", "MgOH+", "NH4+", "Li+"][..]),
        (2, &["Ca^2+", "Mg^2+"][..]),
        (-1, &["Cl-", "HSO4-", "HCO3-", "NO3-", "F-", "Br-", "ClO4-", "CH3COO-", "H2PO4-"][..]),
        (-2, &["SO4^2-", "CO3^2-"][..]),
    ];
    for seed in 0..count(50) {
        let random = &mut Random::new(seed);
        let components = 2 + random.below(7);
        let most = 5 + random.below(36);
        let mut system = chemistry_like(random, components, most);
        let mut left: Vec<(i32, Vec<&str>)> =
            known.iter().map(|(z, names)| (*z, names.to_vec())).collect();
        let unknown: Vec<String> = system
            .species
            .iter()
            .map(|s| match s.charge {
                0 => "Xe".into(),
                1 => "Rb+".into(),
                -1 => "I-".into(),
                z if z > 0 => format!("Xe^{z}+"),
                z => format!("Xe^{}-", -z),
            })
            .collect();
        let names: Vec<&str> = system
            .species
            .iter()
            .enumerate()
            .map(|(i, s)| match i {
                0 => "H+",
                1 => "OH-",
                _ => {
                    let names = left.iter_mut().find(|(z, _)| *z == s.charge);
                    let own = names.and_then(|(_, names)| names.pop());
                    own.filter(|_| random.chance(0.7)).unwrap_or(&unknown[i])
                }
            })
            .collect();
        // To an ionic strength of about 6 if all of it were in free ions.
        let strength: f64 = system
            .species
            .iter()
            .filter(|s| s.row.len() == 1 && s.row[0].0 > 0)
            .map(|s| 0.5 * f64::from(s.charge).powi(2) * system.totals[s.row[0].0])
            .sum();
        if strength > 6.0 {
            system.totals.iter_mut().for_each(|total| *total *= 6.0 / strength);
        }
        system.activity = by_composition(&names, 0.3915);
        survey.take(seed, &system, run(&system, None));
    }
    // Ions of charge three and four with the long-range term alone, some mol/kg of them, can
    // leave no state within reach: 1 in 1,300 (seed 298) is not solved.
    survey.finish((count(50) / 1000) as usize);
}

#[test]
fn without_interactions_it_is_the_ideal_answer() {
    for seed in 0..20 {
        let mut system = water(&mut Random::new(seed));
        let names = vec!["Xe"; system.species.len()];
        system.species.iter_mut().for_each(|s| s.water = 0.0);
        system.activity = by_composition(&names, 0.0);
        let one = run(&system, None).unwrap();
        system.activity = IDEAL;
        let other = run(&system, None).unwrap();
        assert!((one.ph() - other.ph()).abs() < 1e-11, "{seed}: {} {}", one.ph(), other.ph());
    }
}

fn compare(
    what: &str,
    system: &System,
    answer: &Answer,
    response: &Response,
    step: f64,
    change: impl Fn(&mut System, f64),
) {
    let moved = |by: f64| {
        let mut moved = system.clone();
        change(&mut moved, by);
        run(&moved, Some(answer)).expect(what)
    };
    let (up, down) = (moved(step), moved(-step));
    let near = |found: f64, up: f64, down: f64, name: &str| {
        let difference = (up - down) / (2.0 * step);
        let size = difference.abs().max(found.abs());
        let good = (found - difference).abs() <= 1e-4 * size + 1e-11 / step;
        assert!(good, "{what}, {name}: {found} against {difference}");
    };
    for l in 0..system.totals.len() {
        near(response.ln_components[l], up.ln_components[l], down.ln_components[l], "component");
    }
    for i in 0..system.species.len() {
        let ln = |a: &Answer| a.concentrations[i].ln();
        near(response.ln_concentrations[i], ln(&up), ln(&down), "species");
    }
    let ln_i = |a: &Answer| a.ionic_strength.ln();
    near(response.ln_ionic_strength, ln_i(&up), ln_i(&down), "ionic strength");
    for k in 0..system.fixed.len() {
        let scale = answer.amounts[k].abs().max(1e-6);
        near(response.amounts[k] / scale, up.amounts[k] / scale, down.amounts[k] / scale, "held");
    }
}

#[test]
fn derivatives_are_the_differences_of_solves() {
    let mut compared = 0;
    for seed in 0..16 {
        let random = &mut Random::new(seed);
        let mut system = water(random);
        match seed % 4 {
            1 => hold_ph(&mut system, random.uniform(3.0, 11.0)),
            2 => {
                // A neutral species, by its concentration: salting out moves its activity.
                let neutral = system.species.iter().position(|s| s.charge == 0);
                let Some(i) = neutral else { continue };
                let held = system.species[i].clone();
                let j = held.row.iter().map(|e| e.0).find(|j| *j != 0).unwrap_or(0);
                let ln_value = 1e-3f64.ln() - held.ln_k;
                system.totals[j] = 0.0;
                system.fixed.push(Fixed {
                    row: held.row.clone(),
                    ln_value,
                    water: held.water,
                    concentration_of: Some(i),
                    supply: held.row,
                });
            }
            _ => {}
        }
        let Ok(answer) = run(&system, None) else {
            assert_eq!(seed % 4, 2, "{seed}");
            continue;
        };
        let Some(sensitivity) = Sensitivity::new(&system, &answer) else { panic!("{seed}") };
        compared += 1;
        for j in 0..system.totals.len() {
            let total = system.totals[j].abs();
            let Some(mut response) = sensitivity.by_total(j) else { continue };
            // By a share of the total.
            response.ln_components.iter_mut().for_each(|v| *v *= total);
            response.ln_concentrations.iter_mut().for_each(|v| *v *= total);
            response.amounts.iter_mut().for_each(|v| *v *= total);
            response.ln_ionic_strength *= total;
            if system.totals[j] == 0.0 {
                continue;
            }
            compare(&format!("{seed}, total {j}"), &system, &answer, &response, 1e-6, |s, by| {
                s.totals[j] += by * total;
            });
        }
        for i in 0..system.species.len() {
            let Some(response) = sensitivity.by_ln_k(i) else { panic!("{seed}") };
            compare(&format!("{seed}, ln K {i}"), &system, &answer, &response, 1e-5, |s, by| {
                s.species[i].ln_k += by;
            });
        }
        for k in 0..system.fixed.len() {
            let Some(response) = sensitivity.by_fixed(k) else { panic!("{seed}") };
            compare(&format!("{seed}, held {k}"), &system, &answer, &response, 1e-5, |s, by| {
                s.fixed[k].ln_value += by;
            });
        }
    }
    assert!(compared > 10, "{compared}");
}
