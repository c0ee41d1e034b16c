//! Whether every random problem is solved.

mod equilibrium_support;

use std::sync::atomic::AtomicBool;

use equilibrium_support::{Random, adversarial, chemistry_like};
use lyate::equilibrium::solve::solve;

fn count(default: usize) -> usize {
    std::env::var("LYATE_PROBLEMS").ok().and_then(|n| n.parse().ok()).unwrap_or(default)
}

fn report(name: &str, mut iterations: Vec<u32>, failures: &[String]) {
    iterations.sort_unstable();
    let at = |q: f64| iterations[((iterations.len() - 1) as f64 * q) as usize];
    println!(
        "{name}: {} solved, {} failed; iterations median {}, 99 % {}, worst {}",
        iterations.len(),
        failures.len(),
        at(0.5),
        at(0.99),
        at(1.0)
    );
    assert!(
        failures.is_empty(),
        "{}",
        failures.iter().take(20).cloned().collect::<Vec<_>>().join("\n")
    );
}

#[test]
fn chemistry_like_problems_solve() {
    let cancel = AtomicBool::new(false);
    let (mut iterations, mut failures) = (Vec::new(), Vec::new());
    for seed in 0..count(500) as u64 {
        let random = &mut Random::new(seed);
        let components = 2 + random.below(11);
        let species = 5 + random.below(56);
        let made = chemistry_like(random, components, species);
        match solve(&made.system, None, &cancel) {
            Ok(answer) if answer.residual <= 1e-11 => iterations.push(answer.iterations),
            Ok(answer) => failures.push(format!("{seed}: residual {}", answer.residual)),
            Err(failure) => failures.push(format!("{seed}: {failure:?}")),
        }
    }
    report("chemistry-like", iterations, &failures);
}

#[test]
fn adversarial_problems_solve() {
    let cancel = AtomicBool::new(false);
    let (mut iterations, mut failures) = (Vec::new(), Vec::new());
    for seed in 0..count(500) as u64 {
        let random = &mut Random::new(seed);
        let components = 2 + random.below(11);
        let species = components + random.below(49);
        let (system, _, _) = adversarial(random, components, species);
        match solve(&system, None, &cancel) {
            Ok(answer) if answer.residual <= 1e-11 => iterations.push(answer.iterations),
            Ok(answer) => failures.push(format!("{seed}: residual {}", answer.residual)),
            Err(failure) => failures.push(format!("{seed}: {failure:?}")),
        }
    }
    report("adversarial", iterations, &failures);
}
