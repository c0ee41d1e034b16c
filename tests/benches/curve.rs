//! How long a curve of 1,000 points takes, all of it: a water of ten components over what
//! a curve can be over, with Davies and ideal; the same with phosphate, where each point
//! starts cold; and the cold starts that it saves.

use std::hint::black_box;
use std::sync::atomic::AtomicBool;

use criterion::{Criterion, criterion_group, criterion_main};
use lyate::equilibrium::build::system;
use lyate::equilibrium::curve::along;
use lyate::equilibrium::solve::solve;
use lyate::problem::curve::at;
use lyate::problem::files::Disk;
use lyate::problem::import::Imports;
use lyate::problem::model::Problem;
use lyate::rules::check::{Surroundings, check};
use lyate::text::tree::Document;

/// Ten components with H+. Invented figures.
const WATER: &str = "\
problem \"Cooling circuit, make-up with everything in it\"
use aqueous
component Ca^2+, Mg^2+, Na+, Cl-, CO3^2-, NH3, SO4^2-, B(OH)3, CH3COO-
reaction CaOH+ + H+ <=> Ca^2+ + H2O, log K = 12.78, enthalpy = -64 kJ/mol, source \"made up\"
reaction MgOH+ + H+ <=> Mg^2+ + H2O, log K = 11.44, enthalpy = -67 kJ/mol, source \"made up\"
reaction Ca^2+ + CO3^2- <=> CaCO3, log beta = 3.22, enthalpy = 14.8 kJ/mol, source \"made up\"
reaction Ca^2+ + HCO3- <=> CaHCO3+, log beta = 1.11, enthalpy = 5 kJ/mol, source \"made up\"
reaction Ca^2+ + SO4^2- <=> CaSO4, log beta = 2.30, enthalpy = 6.9 kJ/mol, source \"made up\"
reaction Mg^2+ + CO3^2- <=> MgCO3, log beta = 2.98, enthalpy = 11 kJ/mol, source \"made up\"
reaction Mg^2+ + HCO3- <=> MgHCO3+, log beta = 1.07, enthalpy = 3 kJ/mol, source \"made up\"
reaction Mg^2+ + SO4^2- <=> MgSO4, log beta = 2.37, enthalpy = 19 kJ/mol, source \"made up\"
reaction Na+ + CO3^2- <=> NaCO3-, log beta = 1.27, enthalpy = 37 kJ/mol, source \"made up\"
reaction Na+ + SO4^2- <=> NaSO4-, log beta = 0.70, enthalpy = 5 kJ/mol, source \"made up\"
reaction Mg^2+ + B(OH)4- <=> MgB(OH)4+, log beta = 1.40, enthalpy = 13 kJ/mol, source \"made up\"
reaction Ca^2+ + CH3COO- <=> CaCH3COO+, log beta = 1.18, enthalpy = 4 kJ/mol, source \"made up\"
add CaCl2 1.5 mmol/L
add MgSO4 1 mmol/L
add NaHCO3 3 mmol/L
add NH4Cl 0.4 mmol/L
add B(OH)3 0.3 mmol/L
add CH3COOH 0.5 mmol/L
curve over pH from 4 to 11, 1000 points
curve over NaOH from 0 to 6 mmol/L, 1000 points
curve over temperature from 5 to 45 °C, 1000 points
";

fn problem(text: String) -> Problem {
    let imports = Imports::default();
    let cancel = &AtomicBool::new(false);
    let around = Surroundings { path: None, roots: &[], files: &Disk, imports: &imports, cancel };
    let checked = check(Document::parse(text), &around, None).expect("nothing cancels it");
    let told: Vec<_> = checked.findings.iter().map(|f| f.message.clone()).collect();
    assert!(checked.outcomes[0].solved().is_some(), "{told:#?}");
    checked.outcomes[0].problem.clone()
}

fn curves(criterion: &mut Criterion) {
    let cancel = AtomicBool::new(false);
    for activity in ["davies", "ideal"] {
        let problem = problem(format!("{WATER}activity {activity}\n"));
        assert_eq!((problem.scope.components.len(), problem.curves.len()), (10, 3));
        for curve in &problem.curves {
            let name = format!("1,000 points over {}, {activity}", curve.words);
            criterion.bench_function(&name, |bencher| {
                bencher.iter(|| black_box(along(black_box(&problem), curve, &cancel)));
            });
        }
        let systems: Vec<_> = (0..1000)
            .filter_map(|point| at(&problem, &problem.curves[1], problem.curves[1].x(point)).ok())
            .map(|moved| system(&moved))
            .collect();
        criterion.bench_function(
            &format!("the same over NaOH, each cold, {activity}"),
            |bencher| {
                bencher.iter(|| {
                    for system in &systems {
                        let _ = black_box(solve(black_box(system), None, &cancel));
                    }
                });
            },
        );
    }
    let phosphate = WATER.replace("CH3COO-\n", "PO4^3-\n").replace("CH3COOH 0.5", "H3PO4 5");
    let without = |line: &&str| !line.contains("CaCH3COO+");
    let text: Vec<&str> = phosphate.lines().filter(without).collect();
    let problem = problem(text.join("\n"));
    criterion.bench_function("1,000 points over pH, davies, phosphate, each cold", |bencher| {
        bencher.iter(|| black_box(along(black_box(&problem), &problem.curves[0], &cancel)));
    });
}

criterion_group! {
    name = benches;
    config = Criterion::default().sample_size(20).measurement_time(std::time::Duration::from_secs(2)).warm_up_time(std::time::Duration::from_secs(1));
    targets = curves
}
criterion_main!(benches);
