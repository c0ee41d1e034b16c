//! Random equilibrium problems from a seed, for the robustness tests and the benchmark.
#![allow(dead_code)] // each test uses its own part

pub mod solids;

use lyate::chemistry::activity::{ActivityKind, ActivityModel};
use lyate::equilibrium::system::{Activity, Fixed, IonicStrength, Row, Species, System};
use num_rational::Rational64;

pub const LN_10: f64 = std::f64::consts::LN_10;

/// A small generator of random numbers (SplitMix64), the same on every machine.
pub struct Random(u64);

impl Random {
    pub fn new(seed: u64) -> Self {
        Self(seed.wrapping_mul(0x2545_F491_4F6C_DD1D) ^ 0x9E37_79B9_7F4A_7C15)
    }

    pub fn next(&mut self) -> u64 {
        self.0 = self.0.wrapping_add(0x9E37_79B9_7F4A_7C15);
        let mut z = self.0;
        z = (z ^ (z >> 30)).wrapping_mul(0xBF58_476D_1CE4_E5B9);
        z = (z ^ (z >> 27)).wrapping_mul(0x94D0_49BB_1331_11EB);
        z ^ (z >> 31)
    }

    pub fn uniform(&mut self, from: f64, to: f64) -> f64 {
        from + (to - from) * (self.next() >> 11) as f64 / (1u64 << 53) as f64
    }

    pub fn below(&mut self, n: usize) -> usize {
        (self.next() % n as u64) as usize
    }

    pub fn between(&mut self, from: i64, to: i64) -> i64 {
        from + (self.next() % (to - from + 1) as u64) as i64
    }

    pub fn chance(&mut self, p: f64) -> bool {
        self.uniform(0.0, 1.0) < p
    }
}

/// Davies at 25 °C.
pub const DAVIES: Activity = by_ionic_strength(ActivityKind::Davies, 0.5098);
pub const IDEAL: Activity = by_ionic_strength(ActivityKind::Ideal, 0.5098);

pub const fn by_ionic_strength(kind: ActivityKind, a: f64) -> Activity {
    Activity::ByIonicStrength(ActivityModel { kind, a, b: 0.3284 })
}

pub fn row(entries: &[(usize, i64)]) -> Row {
    let mut entries: Vec<(usize, i64)> = entries.iter().copied().filter(|e| e.1 != 0).collect();
    entries.sort_unstable_by_key(|e| e.0);
    entries.into_iter().map(|(j, n)| (j, Rational64::from_integer(n))).collect()
}

pub fn species(entries: &[(usize, i64)], log_k: f64, charges: &[i64]) -> Species {
    let charge: i64 = entries.iter().map(|(j, n)| charges[*j] * n).sum();
    Species {
        row: row(entries),
        ln_k: log_k * LN_10,
        water: 0.0,
        charge: charge as i32,
        ion_size: 4.0,
    }
}

/// Like chemistry: acids, metals, their hydrolysis and complexes, counter-ions, totals
/// over nine decades, strong acid or base to carry the pH anywhere from −1 to 15.
pub fn chemistry_like(random: &mut Random, components: usize, most_species: usize) -> System {
    let m = components.max(2);
    let mut charges = vec![1i64];
    for _ in 1..m {
        charges.push(match random.below(3) {
            0 => random.between(1, 3),
            1 => -random.between(1, 4),
            _ => random.between(-1, 1),
        });
    }
    let mut list = vec![species(&[(0, 1)], 0.0, &charges), species(&[(0, -1)], -14.0, &charges)];
    for j in 1..m {
        list.push(species(&[(j, 1)], 0.0, &charges));
    }
    let mut tries = 0;
    while list.len() < most_species && tries < 10 * most_species {
        tries += 1;
        let j = 1 + random.below(m - 1);
        let before = list.len();
        if charges[j] <= 0 && random.chance(0.5) {
            // The steps of an acid, each weaker than the one before.
            let mut log_beta = 0.0;
            let mut pka = random.uniform(1.0, 13.5);
            for h in 1..=random.between(1, (1 - charges[j]).max(2)) {
                log_beta += pka;
                list.push(species(&[(j, 1), (0, h)], log_beta, &charges));
                pka -= random.uniform(0.5, 5.0);
            }
        } else if charges[j] > 0 && random.chance(0.5) {
            // Hydrolysis, sometimes of two or three metals together.
            let size = if random.chance(0.15) { random.between(2, 3) } else { 1 };
            let mut log_beta = 0.0;
            for n in 1..=random.between(1, 4) {
                log_beta -= random.uniform(2.0, 11.0) * size as f64;
                list.push(species(&[(j, size), (0, -n)], log_beta, &charges));
            }
        } else if m > 2 {
            // Complexes of two components, now and then with protons.
            let l = 1 + random.below(m - 1);
            if l == j || charges[j] * charges[l] > 0 {
                continue;
            }
            let mut log_beta = 0.0;
            for n in 1..=random.between(1, 4) {
                log_beta += random.uniform(0.5, 8.0);
                list.push(species(&[(j, 1), (l, n)], log_beta, &charges));
            }
            if random.chance(0.3) {
                let h = random.between(-2, 2);
                let shift =
                    if h > 0 { random.uniform(2.0, 9.0) } else { random.uniform(-9.0, -5.0) };
                list.push(species(
                    &[(j, 1), (l, 1), (0, h)],
                    log_beta + shift * h.abs() as f64,
                    &charges,
                ));
            }
        }
        list.truncate(most_species.max(before));
        // No species twice.
        let mut seen = Vec::new();
        list.retain(|s| {
            let fresh = !seen.contains(&s.row);
            seen.push(s.row.clone());
            fresh
        });
    }
    let mut totals = vec![0.0; m];
    for total in totals.iter_mut().skip(1) {
        *total = 10f64.powf(random.uniform(-9.0, 0.0));
        if random.chance(0.03) {
            *total = 0.0;
        }
    }
    let spread = 10f64.powf(random.uniform(-9.0, 0.5));
    let excess = if random.chance(0.1) { 0.0 } else { spread * random.uniform(-1.0, 1.0) };
    // Either the charges as they come, or carried back by a counter-ion of any size.
    let carried = random.chance(0.5);
    let charge: f64 = (1..m).map(|j| charges[j] as f64 * totals[j]).sum();
    totals[0] = if carried { excess } else { excess - charge };
    System {
        species: list,
        totals,
        fixed: Vec::new(),
        candidates: Vec::new(),
        activity: IDEAL,
        ionic_strength: IonicStrength::Computed,
    }
}

/// Made to break a solver: any integer coefficients, constants over hundreds of
/// decades, totals that are small differences, but with a state known to close it.
/// Gives also the concentrations of that state.
pub fn adversarial(random: &mut Random, components: usize, count: usize) -> (System, Vec<f64>) {
    let m = components;
    let x: Vec<f64> = (0..m).map(|_| random.uniform(-60.0, 10.0)).collect();
    let mut rows: Vec<Vec<(usize, i64)>> = Vec::new();
    for j in 0..m {
        rows.push(vec![(j, 1)]);
    }
    let mut tries = 0;
    while rows.len() < count && tries < 20 * count {
        tries += 1;
        let mut row: Vec<(usize, i64)> = Vec::new();
        for _ in 0..random.between(1, 4) {
            let j = random.below(m);
            if row.iter().all(|e| e.0 != j) {
                let n = random.between(-3, 4);
                if n != 0 {
                    row.push((j, n));
                }
            }
        }
        row.sort_unstable();
        if !row.is_empty() && !rows.contains(&row) {
            rows.push(row);
        }
    }
    let width = random.uniform(1.0, 18.0);
    let mut list = Vec::new();
    let mut concentrations = Vec::new();
    let charges = vec![0; m];
    for row in &rows {
        let ln_c = -random.uniform(0.0, width) * LN_10;
        let mut s = species(row, 0.0, &charges);
        s.ln_k = ln_c - row.iter().map(|(j, n)| *n as f64 * x[*j]).sum::<f64>();
        list.push(s);
        concentrations.push(ln_c.exp());
    }
    let mut totals = vec![0.0; m];
    for (row, c) in rows.iter().zip(&concentrations) {
        for (j, n) in row {
            totals[*j] += *n as f64 * c;
        }
    }
    let system = System {
        species: list,
        totals,
        fixed: Vec::new(),
        candidates: Vec::new(),
        activity: IDEAL,
        ionic_strength: IonicStrength::Computed,
    };
    (system, concentrations)
}

/// Holds the pH, its own charge balance released.
pub fn hold_ph(system: &mut System, ph: f64) {
    system.fixed.push(Fixed {
        row: row(&[(0, 1)]),
        ln_value: -ph * LN_10,
        water: 0.0,
        concentration_of: None,
        supply: row(&[(0, 1)]),
    });
}

pub mod sample {
    //! Choices of some things out of many.

    /// All choices of `k` numbers below `n`, by rising number.
    pub fn choices(n: usize, k: usize) -> Vec<Vec<usize>> {
        let mut all: Vec<Vec<usize>> = vec![Vec::new()];
        for _ in 0..k {
            all = all
                .into_iter()
                .flat_map(|choice| {
                    let from = choice.last().map_or(0, |last| last + 1);
                    (from..n).map(move |next| [choice.as_slice(), &[next]].concat())
                })
                .collect();
        }
        all
    }
}
