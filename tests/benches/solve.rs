//! How long one solve takes: cold, with activity, and from a near answer. Every figure
//! is for one solve, averaged over 64 random problems of the size.

#[path = "../equilibrium_support/mod.rs"]
mod equilibrium_support;

use std::hint::black_box;
use std::sync::atomic::AtomicBool;

use criterion::{BatchSize, Criterion, criterion_group, criterion_main};
use equilibrium_support::{DAVIES, Random, chemistry_like};
use lyate::equilibrium::solve::solve;
use lyate::equilibrium::system::System;

const PROBLEMS: u64 = 64;

fn problems(components: usize, species: usize) -> Vec<System> {
    (0..PROBLEMS)
        .map(|seed| chemistry_like(&mut Random::new(1000 + seed), components, species))
        .collect()
}

/// Times one solve of each problem in turn.
fn each<T>(criterion: &mut Criterion, name: &str, problems: &[T], mut solve: impl FnMut(&T)) {
    let mut next = 0;
    criterion.bench_function(name, |bencher| {
        bencher.iter_batched(
            || {
                next = (next + 1) % problems.len();
                next
            },
            |i| solve(&problems[i]),
            BatchSize::SmallInput,
        );
    });
}

fn solves(criterion: &mut Criterion) {
    let cancel = AtomicBool::new(false);
    for (components, species) in [(5, 20), (10, 45), (20, 100)] {
        let mut systems = problems(components, species);
        each(criterion, &format!("cold, ideal, {components} components"), &systems, |system| {
            let _ = black_box(solve(black_box(system), None, &cancel));
        });
        for system in &mut systems {
            system.activity = DAVIES;
        }
        each(criterion, &format!("cold, Davies, {components} components"), &systems, |system| {
            let _ = black_box(solve(black_box(system), None, &cancel));
        });
        // The same water with every total one per cent higher.
        let near: Vec<_> = systems
            .iter()
            .filter_map(|system| {
                let answer = solve(system, None, &cancel).ok()?;
                let mut moved = system.clone();
                moved.totals.iter_mut().for_each(|total| *total *= 1.01);
                Some((moved, answer))
            })
            .collect();
        each(criterion, &format!("warm, Davies, {components} components"), &near, |pair| {
            let _ = black_box(solve(black_box(&pair.0), Some(&pair.1), &cancel));
        });
    }
}

criterion_group! {
    name = benches;
    config = Criterion::default().sample_size(30).measurement_time(std::time::Duration::from_secs(2)).warm_up_time(std::time::Duration::from_secs(1));
    targets = solves
}
criterion_main!(benches);
