//! Random solids for random systems: salts, hydroxides, polymorphs, double salts, and more of
//! them than there are components.

use lyate::equilibrium::system::{Candidate, Fixed, System};
use num_rational::Rational64;
use num_traits::ToPrimitive;

use super::{LN_10, Random, row};

/// ln of the product of totals that a row would have at pH 7 with nothing bound.
fn ln_product(system: &System, entries: &[(usize, i64)]) -> f64 {
    entries
        .iter()
        .map(|&(j, n)| {
            let ln = if j == 0 { -7.0 * LN_10 } else { system.totals[j].max(1e-12).ln() };
            n as f64 * ln
        })
        .sum()
}

/// The charges of the components, from the species that they are themselves.
fn charges(system: &System) -> Vec<i64> {
    let mut charges = vec![1; system.totals.len()];
    for species in &system.species {
        if let [(j, n)] = species.row[..]
            && n == Rational64::from_integer(1)
        {
            charges[j] = i64::from(species.charge);
        }
    }
    charges
}

/// Makes a row neutral with protons, or hydroxide.
fn neutral(entries: &mut Vec<(usize, i64)>, charges: &[i64]) {
    let charge: i64 = entries.iter().map(|&(j, n)| charges[j] * n).sum();
    if charge != 0 {
        entries.push((0, -charge));
    }
}

/// A row of a solid: one to three components, and protons or hydroxide where those leave a
/// charge.
fn solid_row(random: &mut Random, charges: &[i64]) -> Vec<(usize, i64)> {
    let components = charges.len();
    let one = 1 + random.below(components - 1);
    let mut entries = vec![(one, random.between(1, 3))];
    for _ in 0..random.below(3) {
        let other = 1 + random.below(components - 1);
        if entries.iter().all(|e| e.0 != other) {
            entries.push((other, random.between(1, 3)));
        }
    }
    neutral(&mut entries, charges);
    entries
}

/// Puts so many candidates to a system: from far undersaturated to supersaturated by decades,
/// one in five the same matter as another or the sum of two others.
pub fn add_candidates(random: &mut Random, system: &mut System, count: usize) {
    let charges = charges(system);
    let mut rows: Vec<Vec<(usize, i64)>> = Vec::new();
    while rows.len() < count {
        let entries = if rows.len() > 1 && random.chance(0.1) {
            rows[random.below(rows.len())].clone()
        } else if rows.len() > 1 && random.chance(0.1) {
            let (one, two) = (random.below(rows.len()), random.below(rows.len()));
            let mut sum = rows[one].clone();
            for &(j, n) in &rows[two] {
                match sum.iter_mut().find(|e| e.0 == j) {
                    Some(entry) => entry.1 += n,
                    None => sum.push((j, n)),
                }
            }
            sum.retain(|e| e.1 != 0);
            sum
        } else {
            solid_row(random, &charges)
        };
        if entries.is_empty() {
            continue;
        }
        let saturation = random.uniform(-6.0, 8.0);
        let ln_value = ln_product(system, &entries) - saturation * LN_10;
        rows.push(entries.clone());
        system.candidates.push(Candidate { row: row(&entries), ln_value, water: 0.0 });
    }
}

/// Holds a gas of one component, made neutral with protons or hydroxide.
pub fn hold_phase(random: &mut Random, system: &mut System) {
    let component = 1 + random.below(system.totals.len() - 1);
    let mut entries = vec![(component, 1)];
    neutral(&mut entries, &charges(system));
    let ln_value = ln_product(system, &entries) + random.uniform(-3.0, 3.0) * LN_10;
    let row = row(&entries);
    system.fixed.push(Fixed {
        supply: row.clone(),
        row,
        ln_value,
        water: 0.0,
        concentration_of: None,
    });
}

/// log10 of ion product over solubility product; none where a component is absent.
pub fn saturation_index(candidate: &Candidate, ln_components: &[f64]) -> Option<f64> {
    let number = |n: &Rational64| n.to_f64().unwrap_or(f64::NAN);
    let sum: f64 = candidate.row.iter().map(|(j, n)| number(n) * ln_components[*j]).sum();
    sum.is_finite().then_some((sum - candidate.ln_value) / LN_10)
}
