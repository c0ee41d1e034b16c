//! Pitzer's ion-interaction method: activity coefficients and the activity of water from
//! the molality of every ion, not from the ionic strength alone.
//!
//! All of it follows from one function, the excess Gibbs energy of a kilogram of water in
//! RT (K. S. Pitzer, J. Phys. Chem. 77, 268, 1973; equations recalled):
//!
//! `E = f(I) + Σ m_i m_j L_ij(I) + Z Σ m_c m_a C_ca + Σ m_i m_j m_k ψ_ijk`
//!
//! with `I = ½ Σ m z²`, `Z = Σ m |z|` and `L` twice B of a cation and an anion, twice Φ of
//! two ions of like sign, twice λ of an ion and a neutral species. `ln γ_i = ∂E/∂m_i`, so
//! that the derivatives of ln γ are symmetric, as Gibbs and Duhem want them.
//!
//! The parameters hold at 25 °C; Aφ moves with the temperature. Ions without parameters
//! keep the long-range term.

use std::collections::HashMap;
use std::sync::LazyLock;

use super::formula::{Formula, Groups};
use super::water;
use functions::{Curve, fading, long_range, mixing};
use parameters::{BINARY_HARVIE, BINARY_PITZER, Binary, LAMBDA, PSI, THETA};

mod functions;
pub mod parameters;

/// Ionic strength, mol/kg, up to which salts were looked at at all.
pub const REACH: f64 = 6.0;
/// Temperatures, kelvin, in which parameters for 25 °C are taken.
pub const TEMPERATURES: std::ops::RangeInclusive<f64> = 288.15..=308.15;
/// kg/mol, as in [`water`].
const MOLAR_MASS: f64 = 0.018_015_268;
/// Below this ionic strength nothing changes any more.
const LEAST: f64 = 1e-20;

/// The method for one list of species at one temperature.
#[derive(Clone, Debug, PartialEq)]
pub struct Interaction {
    a_phi: f64,
    charges: Vec<f64>,
    pairs: Vec<(usize, usize, Strength)>,
    /// C of each cation and anion.
    thirds: Vec<(usize, usize, f64)>,
    triples: Vec<(usize, usize, usize, f64)>,
}

/// Half of `L(I)` of a pair.
#[derive(Clone, Copy, Debug, PartialEq)]
enum Strength {
    Unlike {
        beta: [f64; 3],
        alpha: f64,
    },
    /// θ, to which Eθ comes where the charges differ.
    Like(f64),
    Neutral(f64),
}

/// ln γ of each species, and ln of the activity of water.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Coefficients {
    pub ln_gamma: Vec<f64>,
    pub ln_water: f64,
}

/// `∂ ln γ_i / ∂ ln m_j` row after row, and `∂ ln a_w / ∂ ln m_j` in the last one.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Slopes {
    width: usize,
    values: Vec<f64>,
}

impl Slopes {
    /// By ln of the molality of `j`; of the water where `i` is the number of species.
    pub fn of(&self, i: usize, j: usize) -> f64 {
        self.values[i * self.width + j]
    }
}

impl Interaction {
    /// Species are known by composition and charge, so that `CH3COO-` and `C2H3O2-` are
    /// one; those without parameters may be among them.
    pub fn new<'a>(species: impl IntoIterator<Item = &'a Formula>, kelvin: f64) -> Self {
        Self::with_a_phi(species, water::debye_huckel_a(kelvin) * std::f64::consts::LN_10 / 3.0)
    }

    /// The same with a slope Aφ, (kg/mol)^½, of its own.
    pub fn with_a_phi<'a>(species: impl IntoIterator<Item = &'a Formula>, a_phi: f64) -> Self {
        let mut charges = Vec::new();
        // All that stand for each name of the tables: two writings may be in one problem.
        let mut places: HashMap<&'static str, Vec<usize>> = HashMap::new();
        for (i, formula) in species.into_iter().enumerate() {
            charges.push(f64::from(formula.charge));
            if let Some(name) = known(formula) {
                places.entry(name).or_default().push(i);
            }
        }
        let at = |name: &str| places.get(name).map_or(&[][..], Vec::as_slice);
        let mut out =
            Self { a_phi, charges, pairs: Vec::new(), thirds: Vec::new(), triples: Vec::new() };
        for binary in binaries() {
            for &c in at(binary.ions.0) {
                for &a in at(binary.ions.1) {
                    let product = (out.charges[c] * out.charges[a]).abs();
                    let both_divalent = out.charges[c] == 2.0 && out.charges[a] == -2.0;
                    let alpha = if both_divalent { 1.4 } else { 2.0 };
                    out.pairs.push((c, a, Strength::Unlike { beta: binary.beta, alpha }));
                    out.thirds.push((c, a, binary.c_phi / (2.0 * product.sqrt())));
                }
            }
        }
        let mut thetas: HashMap<(usize, usize), f64> = HashMap::new();
        for (one, other, theta) in THETA {
            for &i in at(one) {
                for &j in at(other) {
                    thetas.insert((i.min(j), i.max(j)), theta);
                }
            }
        }
        let ions: Vec<usize> = {
            let mut ions: Vec<usize> = places.values().flatten().copied().collect();
            ions.sort_unstable();
            ions
        };
        for (n, &i) in ions.iter().enumerate() {
            for &j in &ions[n + 1..] {
                let theta = thetas.get(&(i, j)).copied();
                let (one, other) = (out.charges[i], out.charges[j]);
                if one * other > 0.0 && (theta.is_some() || one != other) {
                    out.pairs.push((i, j, Strength::Like(theta.unwrap_or(0.0))));
                }
            }
        }
        for (neutral, ion, lambda) in LAMBDA {
            for &i in at(neutral) {
                out.pairs.extend(at(ion).iter().map(|&j| (i, j, Strength::Neutral(lambda))));
            }
        }
        for (one, two, three, psi) in PSI {
            for &i in at(one) {
                for &j in at(two) {
                    out.triples.extend(at(three).iter().map(|&k| (i, j, k, psi)));
                }
            }
        }
        out
    }

    pub fn charge(&self, i: usize) -> f64 {
        self.charges[i]
    }

    /// How many species it is for.
    pub fn len(&self) -> usize {
        self.charges.len()
    }

    pub fn is_empty(&self) -> bool {
        self.charges.is_empty()
    }

    /// `½ Σ m z²`.
    pub fn ionic_strength(&self, molalities: &[f64]) -> f64 {
        0.5 * self.charges.iter().zip(molalities).map(|(z, m)| m * z * z).sum::<f64>()
    }

    /// `L(I)` of a pair.
    fn strength(&self, i: usize, j: usize, strength: Strength, ionic: f64) -> Curve {
        let mut sum = [0.0; 3];
        let mut add = |by: f64, curve: Curve| {
            for (sum, value) in sum.iter_mut().zip(curve) {
                *sum += 2.0 * by * value;
            }
        };
        match strength {
            Strength::Neutral(lambda) => add(lambda, [1.0, 0.0, 0.0]),
            Strength::Like(theta) => {
                add(theta, [1.0, 0.0, 0.0]);
                if self.charges[i] != self.charges[j] {
                    add(1.0, mixing(self.a_phi, (self.charges[i], self.charges[j]), ionic));
                }
            }
            Strength::Unlike { beta, alpha } => {
                add(beta[0], [1.0, 0.0, 0.0]);
                add(beta[1], fading(alpha, ionic));
                if beta[2] != 0.0 {
                    add(beta[2], fading(12.0, ionic));
                }
            }
        }
        sum
    }

    /// At these molalities, mol/kg, one for each species.
    pub fn coefficients(&self, molalities: &[f64]) -> Coefficients {
        self.both(molalities, None)
    }

    /// The same, with how they move.
    pub fn coefficients_and_slopes(&self, molalities: &[f64]) -> (Coefficients, Slopes) {
        let mut slopes = Slopes::default();
        (self.both(molalities, Some(&mut slopes)), slopes)
    }

    fn both(&self, m: &[f64], slopes: Option<&mut Slopes>) -> Coefficients {
        let n = self.charges.len();
        let ionic = self.ionic_strength(m).max(LEAST);
        let z: f64 = self.charges.iter().zip(m).map(|(z, m)| m * z.abs()).sum();
        // E and its derivatives: by I, twice by I, by Z, by each m, by I and m, by Z and m.
        let [mut energy, mut by_i, mut by_ii] = long_range(self.a_phi, ionic);
        let mut by_z = 0.0;
        let mut by_m = vec![0.0; n];
        let mut by_im = vec![0.0; n];
        let mut by_zm = vec![0.0; n];
        let mut second = vec![0.0; if slopes.is_some() { n * n } else { 0 }];
        let wanted = slopes.is_some();
        let mut cross = |i: usize, j: usize, value: f64| {
            if wanted {
                second[i * n + j] += value;
                second[j * n + i] += value;
            }
        };
        for &(i, j, strength) in &self.pairs {
            if m[i] == 0.0 && m[j] == 0.0 {
                continue;
            }
            let [l, first, twice] = self.strength(i, j, strength, ionic);
            energy += m[i] * m[j] * l;
            by_i += m[i] * m[j] * first;
            by_ii += m[i] * m[j] * twice;
            by_m[i] += m[j] * l;
            by_m[j] += m[i] * l;
            by_im[i] += m[j] * first;
            by_im[j] += m[i] * first;
            cross(i, j, l);
        }
        for &(c, a, third) in &self.thirds {
            energy += z * m[c] * m[a] * third;
            by_z += m[c] * m[a] * third;
            by_m[c] += z * m[a] * third;
            by_m[a] += z * m[c] * third;
            by_zm[c] += m[a] * third;
            by_zm[a] += m[c] * third;
            cross(c, a, z * third);
        }
        for &(i, j, k, psi) in &self.triples {
            energy += m[i] * m[j] * m[k] * psi;
            by_m[i] += m[j] * m[k] * psi;
            by_m[j] += m[i] * m[k] * psi;
            by_m[k] += m[i] * m[j] * psi;
            cross(i, j, m[k] * psi);
            cross(i, k, m[j] * psi);
            cross(j, k, m[i] * psi);
        }
        let half = |i: usize| 0.5 * self.charges[i] * self.charges[i];
        let size = |i: usize| self.charges[i].abs();
        let ln_gamma: Vec<f64> =
            (0..n).map(|i| by_m[i] + by_i * half(i) + by_z * size(i)).collect();
        let sum: f64 = m.iter().zip(&ln_gamma).map(|(m, ln)| m * (1.0 + ln)).sum();
        let ln_water = -MOLAR_MASS * (sum - energy);
        if let Some(slopes) = slopes {
            slopes.width = n;
            slopes.values = second;
            slopes.values.resize((n + 1) * n, 0.0);
            for i in 0..n {
                for j in 0..n {
                    slopes.values[i * n + j] += by_im[i] * half(j)
                        + by_im[j] * half(i)
                        + by_ii * half(i) * half(j)
                        + by_zm[i] * size(j)
                        + by_zm[j] * size(i);
                }
            }
            for j in 0..n {
                let sum: f64 = (0..n).map(|i| m[i] * slopes.values[i * n + j]).sum();
                slopes.values[n * n + j] = -MOLAR_MASS * (1.0 + sum) * m[j];
                for i in 0..n {
                    slopes.values[i * n + j] *= m[j];
                }
            }
        }
        Coefficients { ln_gamma, ln_water }
    }
}

fn binaries() -> impl Iterator<Item = &'static Binary> {
    BINARY_HARVIE.iter().chain(&BINARY_PITZER)
}

/// The name in the tables of a species that stands in them.
pub fn known(formula: &Formula) -> Option<&'static str> {
    let elements = formula.elements()?;
    let named = NAMES.get(&formula.charge)?;
    named.iter().find(|(other, _)| other.elements() == Some(elements)).map(|(_, name)| *name)
}

/// The parameters of a cation and an anion, in either order.
pub fn binary(one: &Formula, other: &Formula) -> Option<&'static Binary> {
    let (one, other) = (known(one)?, known(other)?);
    binaries().find(|b| b.ions == (one, other) || b.ions == (other, one))
}

/// Whether a species is one cation and one anion put together, nothing added or lost.
pub fn is_pair(pair: &Formula, cation: &Formula, anion: &Formula) -> bool {
    let of = |formula: &Formula, atom| formula.atoms.get(atom).copied().unwrap_or_default();
    let both = || cation.atoms.keys().chain(anion.atoms.keys());
    pair.charge == cation.charge.saturating_add(anion.charge)
        && both().all(|atom| pair.atoms.contains_key(atom))
        && pair.atoms.iter().all(|(atom, n)| of(cation, atom) + of(anion, atom) == *n)
}

/// By charge.
static NAMES: LazyLock<HashMap<i32, Vec<(Formula, &'static str)>>> = LazyLock::new(|| {
    let mut names: HashMap<i32, Vec<(Formula, &'static str)>> = HashMap::new();
    let mut add = |written: &str, name: &'static str| {
        if let Ok(formula) = Formula::parse(written, &Groups::new()) {
            let named = names.entry(formula.charge).or_default();
            if named.iter().all(|(_, other)| *other != written) {
                named.push((formula, name));
            }
        }
    };
    for binary in binaries() {
        add(binary.ions.0, binary.ions.0);
        add(binary.ions.1, binary.ions.1);
    }
    for (neutral, ion, _) in LAMBDA {
        add(neutral, neutral);
        add(ion, ion);
    }
    // Other writings.
    add("H3O+", "H+");
    add("H2CO3", "CO2");
    names
});
