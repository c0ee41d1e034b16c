//! Curves: every point has the answer that the problem has there by itself, found from a
//! cold start, and published values are met along the way.

#[path = "equilibrium_support/mod.rs"]
mod equilibrium_support;

use std::path::{Path, PathBuf};
use std::sync::atomic::AtomicBool;

use equilibrium_support::{DAVIES, IDEAL, Random, chemistry_like, hold_ph};
use lyate::equilibrium::build;
use lyate::equilibrium::curve::{Unsolved, along, at_point, solved_at};
use lyate::equilibrium::path;
use lyate::equilibrium::solve::solve;
use lyate::equilibrium::system::{Answer, Failure, System};
use lyate::problem::curve::{Curve, Sweep, at};
use lyate::problem::files::Disk;
use lyate::problem::import::Imports;
use lyate::problem::model::{AmountSource, Problem};
use lyate::report::editor::hover;
use lyate::rules::check::{Checked, Surroundings, check};
use lyate::text::tree::Document;

static GO_ON: AtomicBool = AtomicBool::new(false);

/// Whether two answers are one state: each unknown to a billionth, each amount to a billionth
/// of the largest or of itself.
fn same(one: &Answer, two: &Answer) -> Result<(), String> {
    let ln = |a: &[f64], b: &[f64]| -> f64 {
        let both = a.iter().zip(b).filter(|(a, b)| a != b);
        both.map(|(a, b)| (a - b).abs()).fold(0.0, f64::max)
    };
    let apart = ln(&one.ln_components, &two.ln_components);
    let relative = |a: &f64, b: &f64| (a - b).abs() / a.abs().max(b.abs()).max(1e-300);
    let species = one.concentrations.iter().zip(&two.concentrations);
    let species = species.map(|(a, b)| relative(a, b)).fold(0.0, f64::max);
    let ions = relative(&one.ionic_strength, &two.ionic_strength);
    if apart <= 1e-9 && species <= 1e-9 && ions <= 1e-9 {
        return Ok(());
    }
    Err(format!("unknowns {apart:.1e}, species {species:.1e}, ionic strength {ions:.1e} apart"))
}

fn checked(path: Option<&Path>, text: String) -> Checked {
    let imports = Imports::default();
    let around = Surroundings { path, roots: &[], files: &Disk, imports: &imports, cancel: &GO_ON };
    check(Document::parse(text), &around, None).expect("nothing cancels it")
}

fn problem(text: &str) -> Problem {
    let checked = checked(None, text.into());
    let told: Vec<_> = checked.findings.iter().map(|f| f.message.clone()).collect();
    assert!(checked.outcomes[0].solved().is_some(), "{told:#?}");
    checked.outcomes[0].problem.clone()
}

fn files(folder: &Path, into: &mut Vec<PathBuf>) {
    for entry in std::fs::read_dir(folder).expect("a folder of the project") {
        let path = entry.expect("an entry").path();
        if path.is_dir() {
            files(&path, into);
        } else if path.extension().is_some_and(|e| e == "lyate") {
            into.push(path);
        }
    }
    into.sort();
}

/// A curve over everything that a problem can be followed along.
fn curves(problem: &Problem, points: usize) -> Vec<Curve> {
    let here = problem.scope.components.iter().find_map(|c| c.at);
    let Some(at) = here.or(problem.title_at) else { return Vec::new() };
    let curve =
        |over, from, to| Curve { at, over, words: String::new(), from, to, points, unit: None };
    let mut all = vec![
        curve(Sweep::Ph, 2.0, 12.0),
        curve(Sweep::Ph, 9.0, 4.0),
        curve(Sweep::Temperature, 274.0, 320.0),
    ];
    for (index, reagent) in problem.reagents.iter().enumerate() {
        all.push(curve(Sweep::Reagent(index), 0.0, 2.0 * reagent.amount));
    }
    for (j, amount) in problem.amounts.iter().enumerate() {
        if let (AmountSource::Total, Some(total)) = (amount.source, amount.total) {
            all.push(curve(Sweep::Total(j), 3.0 * total, 0.0));
        }
    }
    all.retain(|curve| curve.from != curve.to);
    all
}

#[test]
fn every_point_of_every_problem_is_what_a_cold_start_finds() {
    let mut paths = Vec::new();
    files(&Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/problems"), &mut paths);
    let (mut compared, mut unsolved) = (0, 0);
    for path in paths {
        let text = std::fs::read_to_string(&path).expect("a problem file");
        let checked = checked(Some(&path), text);
        let problem = &checked.outcomes[0].problem;
        if checked.outcomes[0].solved().is_none() {
            continue;
        }
        for curve in curves(problem, 12) {
            let points = along(problem, &curve, &GO_ON).expect("nothing cancels it");
            assert_eq!(points.len(), 12);
            assert_eq!((points[0].x, points[11].x), (curve.from, curve.to));
            for point in &points {
                let name = format!("{} {:?} at {}", path.display(), curve.over, point.x);
                match (&point.state, solved_at(problem, &curve, point.x, &GO_ON)) {
                    (Ok(answer), Ok((moved, solved))) => {
                        if let Err(apart) = same(answer, &solved.answer) {
                            panic!("{name}: {apart}");
                        }
                        let (other, read) = at_point(problem, &curve, point).expect("an answer");
                        assert_eq!(read.system, solved.system, "{name}");
                        assert_eq!(other.kelvin, moved.kelvin);
                        compared += 1;
                    }
                    (Err(one), Err(two)) => {
                        assert_eq!(
                            std::mem::discriminant(one),
                            std::mem::discriminant(&two),
                            "{name}"
                        );
                        unsolved += 1;
                    }
                    (one, two) => panic!("{name}: {:?} for {:?}", one.as_ref().err(), two.err()),
                }
            }
        }
    }
    println!("{compared} points compared, {unsolved} without an answer");
    assert!(compared > 3000, "{compared} points were compared");
    assert!(unsolved * 10 < compared, "{unsolved} points had no answer");
}

/// Random waters with the held pH, a total (from nothing on), or acid and base moved.
#[test]
fn a_walk_through_random_waters_is_what_cold_starts_find() {
    let long = std::env::var("LYATE_PROBLEMS").ok().and_then(|n| n.parse::<u64>().ok());
    let seeds = long.unwrap_or(60);
    let (mut compared, mut kept) = (0, 0);
    for seed in 0..seeds {
        let mut random = Random::new(0xC0 + seed);
        let components = 2 + random.below(8);
        let mut system = chemistry_like(&mut random, components, 4 * components);
        system.activity = if seed % 2 == 0 { DAVIES } else { IDEAL };
        if seed % 3 == 0 {
            hold_ph(&mut system, 7.0);
        }
        let moved = 1 + random.below(components - 1);
        let size = system.totals[moved].abs().max(1e-6);
        let mut walk = path::Path::default();
        for step in 0..30 {
            let mut next: System = system.clone();
            match seed % 3 {
                0 => {
                    next.fixed[0].ln_value =
                        -(2.0 + 0.35 * f64::from(step)) * std::f64::consts::LN_10
                }
                1 => next.totals[moved] = size * f64::from(step) / 15.0,
                _ => next.totals[0] += 0.1 * size * (f64::from(step) - 15.0),
            }
            match (walk.next(&next, &GO_ON), solve(&next, None, &GO_ON)) {
                (Ok(one), Ok(two)) => {
                    if let Err(apart) = same(&one, &two) {
                        panic!("seed {seed}, step {step}: {apart}");
                    }
                    compared += 1;
                    kept += usize::from(one.iterations < two.iterations);
                }
                (Err(one), Err(two)) => assert_eq!(one, two, "seed {seed}, step {step}"),
                (one, two) => panic!("seed {seed}, step {step}: {one:?} for {two:?}"),
            }
        }
    }
    println!("{compared} answers compared, {kept} with fewer iterations");
    assert!(compared > 20 * seeds as usize, "{compared} answers were compared");
    // Highly charged waters, which may have several states, each start cold.
    assert!(4 * kept > compared, "going on from the last answer saved little: {kept}");
}

const AMMONIA: &str = "\
use aqueous
component NH3, Cl-, Na+
add NH4Cl 2 mmol/L
";

#[test]
fn renewed_numbers_are_those_of_the_problem_there() {
    let text = AMMONIA.to_owned()
        + "hold pOH = 5\ncurve over temperature from 5 to 45 °C, 9 points\n\
           curve over NaOH from 0 to 4 mmol/L\ncurve over pH from 4 to 10\n";
    let problem = problem(&text);
    assert_eq!(problem.curves.len(), 3);
    assert_eq!((problem.curves[0].points, problem.curves[1].points), (9, 101));
    for curve in &problem.curves {
        let mut moved = problem.clone();
        let mut system = build::system(&problem);
        for x in [curve.from, curve.to, 0.3 * curve.from + 0.7 * curve.to] {
            curve.place(&problem, &mut moved, x).expect("all constants have values");
            build::renew(&mut system, &moved, curve.over);
            let fresh = at(&problem, curve, x).expect("all constants have values");
            assert_eq!(system, build::system(&fresh), "{} at {x}", curve.words);
        }
    }
    // With pOH held, water's ion product moves the pH.
    let (cold, warm) = (278.15, 318.15);
    let ph = |kelvin| {
        let (moved, solved) = solved_at(&problem, &problem.curves[0], kelvin, &GO_ON).unwrap();
        assert_eq!(moved.kelvin, kelvin);
        solved.ph()
    };
    assert!(ph(cold) - ph(warm) > 1.0, "{} and {}", ph(cold), ph(warm));
}

#[test]
fn a_reagent_that_is_swept_only_is_not_in_the_base() {
    let with = problem(&(AMMONIA.to_owned() + "curve over NaOH from 0 to 4 mmol/L, 5 points\n"));
    let without = problem(&(AMMONIA.replace(", Na+", "")));
    let solve_it = |problem: &Problem| solve(&build::system(problem), None, &GO_ON).unwrap();
    assert!((solve_it(&with).ph() - solve_it(&without).ph()).abs() < 1e-12);
    let points = along(&with, &with.curves[0], &GO_ON).unwrap();
    let ph: Vec<f64> = points.iter().map(|p| p.state.as_ref().unwrap().ph()).collect();
    assert!((ph[0] - solve_it(&with).ph()).abs() < 1e-9);
    assert!(ph.windows(2).all(|two| two[0] < two[1]), "{ph:?}");
    // The same doses stated as `add`.
    for (mmol, ph) in [0, 1, 2, 3, 4].iter().zip(ph) {
        let stated = problem(&format!("{AMMONIA}add NaOH {mmol} mmol/L\n"));
        assert!((solve_it(&stated).ph() - ph).abs() < 1e-9);
    }
}

#[test]
fn points_without_an_answer_say_why_and_leave_the_others() {
    // log K(T) has no value below 20 °C.
    let text = "\
component NH3, Cl-
reaction NH4+ <=> NH3 + H+, log K(T) = log(T - 293.15) - 10.4, source \"made up\"
temperature 25 °C
add NH4Cl 2 mmol/L
curve over temperature from 10 to 40 °C, 4 points
";
    let problem = problem(text);
    let points = along(&problem, &problem.curves[0], &GO_ON).unwrap();
    let states: Vec<bool> = points.iter().map(|point| point.state.is_ok()).collect();
    assert_eq!(states, [false, false, true, true]);
    assert!(matches!(points[0].state, Err(Unsolved::NoConstant(_))));

    let cancelled = AtomicBool::new(true);
    assert!(matches!(along(&problem, &problem.curves[0], &cancelled), Err(Failure::Cancelled)));
}

#[test]
fn pointing_at_a_curve_tells_its_ends() {
    let text = AMMONIA.to_owned()
        + "curve over NaOH from 0 to 4 mmol/L\ncurve over pH from 4 to 10, 7 points\n";
    let checked = checked(None, text.clone());
    let told = |at: &str| {
        let offset = text.find(at).expect("the words are in the text");
        hover(&checked, offset).map(|hover| (text[hover.range].to_owned(), hover.markdown))
    };
    let (range, words) = told("over NaOH").expect("a hover");
    assert_eq!(range, "curve over NaOH from 0 to 4 mmol/L");
    let lines: Vec<&str> = words.lines().filter(|line| !line.is_empty()).collect();
    assert_eq!(lines[0], "**curve over NaOH** · 101 points");
    let solve_it = |text: &str| {
        let answer = solve(&build::system(&problem(text)), None, &GO_ON).expect("an answer");
        format!("pH {:.3}", answer.ph())
    };
    assert_eq!(lines[1], format!("at 0 mmol/L: {}", solve_it(AMMONIA)));
    let dosed = solve_it(&format!("{AMMONIA}add NaOH 4 mmol/L\n"));
    assert_eq!(lines[2], format!("at 4 mmol/L: {dosed}"));
    let (_, words) = told("over pH").expect("a hover");
    assert!(words.contains("at pH 4: ionic strength") && words.contains("7 points"), "{words}");
    // The reagent's name tells of the reagent.
    assert!(told("NaOH from").expect("a hover").1.contains("g/mol"));
}

/// R. P. Trussell, J. Fish. Res. Board Can. 29, 1505 (1972), percent of ammonia that is NH3
/// at 10, 15, 20 and 25 °C in fresh water, as reprinted in the LaMotte WaterLink SpinTouch FF
/// manual, p. 13 (read). It is older than the equation of the built-in set, which lies 2 % of
/// the value above it at 25 °C and within 1.5 % below that.
const UNIONISED: [(f64, [f64; 4]); 16] = [
    (7.0, [0.19, 0.27, 0.40, 0.55]),
    (7.1, [0.23, 0.34, 0.50, 0.70]),
    (7.2, [0.29, 0.43, 0.63, 0.88]),
    (7.3, [0.37, 0.54, 0.79, 1.10]),
    (7.4, [0.47, 0.68, 0.99, 1.38]),
    (7.5, [0.59, 0.85, 1.24, 1.73]),
    (7.6, [0.74, 1.07, 1.56, 2.17]),
    (7.7, [0.92, 1.35, 1.96, 2.72]),
    (7.8, [1.16, 1.69, 2.45, 3.39]),
    (7.9, [1.46, 2.12, 3.06, 4.24]),
    (8.0, [1.83, 2.65, 3.83, 5.28]),
    (8.1, [2.29, 3.32, 4.77, 6.55]),
    (8.2, [2.86, 4.14, 5.94, 8.11]),
    (8.3, [3.58, 5.16, 7.36, 10.0]),
    (8.4, [4.46, 6.41, 9.09, 12.27]),
    (8.5, [5.55, 7.98, 11.18, 14.97]),
];

#[test]
fn curves_over_ph_and_temperature_meet_the_published_ammonia_table() {
    let text = |conditions: &str| {
        format!(
            "use aqueous 1\nactivity ideal\ncomponent NH3\ntotal NH3 = 1 mg/L as N\n{conditions}"
        )
    };
    let percent = |problem: &Problem, answer: &Answer| {
        let row = |name: &str| problem.scope.row_of(problem.scope.find(name).unwrap()).unwrap();
        let [base, acid] = ["NH3", "NH4+"].map(|name| answer.concentrations[row(name)]);
        100.0 * base / (base + acid)
    };
    let mut met = 0;
    let mut meets = |text: String, table: &[f64], warmest: &dyn Fn(usize) -> bool| {
        let problem = problem(&text);
        let points = along(&problem, &problem.curves[0], &GO_ON).unwrap();
        assert_eq!(points.len(), table.len());
        for (index, (point, wanted)) in points.iter().zip(table).enumerate() {
            let found = percent(&problem, point.state.as_ref().unwrap());
            let share = if warmest(index) { 0.02 } else { 0.015 };
            assert!((found - wanted).abs() <= share * wanted + 0.005, "{found} for {wanted}");
            met += 1;
        }
    };
    for (ph, row) in &UNIONISED {
        let text =
            text(&format!("hold pH = {ph}\ncurve over temperature from 10 to 25 °C, 4 points\n"));
        meets(text, row, &|index| index == 3);
    }
    for (column, celsius) in [10, 15, 20, 25].iter().enumerate() {
        // The curve goes before the held value.
        let text = text(&format!(
            "hold pH = 7\ntemperature {celsius} °C\ncurve over pH from 7.0 to 8.5, 16 points\n"
        ));
        let table: Vec<f64> = UNIONISED.iter().map(|(_, row)| row[column]).collect();
        meets(text, &table, &|_| column == 3);
    }
    assert_eq!(met, 128);
}

/// Equivalence points of P. Flowers and others, Chemistry 2e (OpenStax), examples 14.21 and
/// 14.22 (read): 25 mL of 0.1 mol/L acid and as much base, so 0.05 mol/L of each.
#[test]
fn a_titration_ends_at_the_published_equivalence_points() {
    for (acid, anion, reaction, published) in [
        ("HCl", "Cl-", "", 7.00),
        (
            "CH3COOH",
            "CH3COO-",
            "reaction CH3COOH <=> CH3COO- + H+, K = 1.8e-5, source \"x\"\n",
            8.72,
        ),
    ] {
        let text = format!(
            "activity ideal\ncomponent {anion}, Na+\n{reaction}\
             reaction H2O <=> H+ + OH-, log K = -14, source \"x\"\n\
             add {acid} 0.05 mol/L\ncurve over NaOH from 0 to 50 mmol/L, 51 points\n"
        );
        let problem = problem(&text);
        let points = along(&problem, &problem.curves[0], &GO_ON).unwrap();
        let ph = points[50].state.as_ref().unwrap().ph();
        assert!((ph - published).abs() <= 0.005, "{acid}: {ph}");
    }
}

/// A potential held in volts is another pe at another temperature: E F / (ln 10 R T).
#[test]
fn a_held_potential_stays_what_it_is_while_the_temperature_moves() {
    let text = "component Fe^2+, e-, Cl-\nreaction Fe^3+ + e- <=> Fe^2+, log K = 13.0, enthalpy = \
                -42 kJ/mol, source \"table\"\ntotal Fe^2+ = 1 mmol/L\ntotal Cl- = 20 mmol/L\n\
                hold pH = 2\nhold potential = 0.7 V\n";
    let base = problem(&format!("{text}curve over temperature from 5 to 45 °C, 3 points\n"));
    let curve = base.curves.first().expect("a curve");
    let points = along(&base, curve, &GO_ON).expect("nothing cancels it");
    for (point, celsius) in points.iter().zip([5.0, 25.0, 45.0]) {
        let answer = point.state.as_ref().expect("it is solved");
        let electron = base.scope.component("e-").expect("it is listed");
        let pe = -answer.ln_components[electron] / std::f64::consts::LN_10;
        let volts =
            pe * std::f64::consts::LN_10 * 8.314_462_618 * (273.15 + celsius) / 96_485.332_12;
        assert!((volts - 0.7).abs() < 1e-9, "{volts} V at {celsius} °C");
    }
}

/// A curve over the reagent that a target finds goes through the target at that dose.
#[test]
fn a_curve_over_a_dose_meets_its_target_there() {
    let text = "\
use aqueous
component NH3, Na+, Cl-
add NH4Cl 10 mmol/L
hold pH = 9.5 by dose of 30 % NaOH
curve over NaOH from 0 to 20 mmol/L, 201 points
";
    let problem = problem(text);
    let dose = problem.reagents.iter().find(|r| r.target.is_some()).expect("the reagent").amount;
    let points = along(&problem, &problem.curves[0], &GO_ON).expect("nothing cancels it");
    let ph = |x: f64| {
        let (_, solved) = solved_at(&problem, &problem.curves[0], x, &GO_ON).expect("an answer");
        solved.ph()
    };
    assert!((ph(dose) - 9.5).abs() < 1e-9, "{}", ph(dose));
    let crossing = points.windows(2).find(|pair| {
        let of = |n: usize| pair[n].state.as_ref().map_or(f64::NAN, Answer::ph);
        of(0) <= 9.5 && 9.5 <= of(1)
    });
    let pair = crossing.expect("the curve passes the target");
    assert!(pair[0].x <= dose && dose <= pair[1].x, "{} {dose} {}", pair[0].x, pair[1].x);
}
