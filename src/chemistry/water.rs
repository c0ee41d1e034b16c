//! Water: density, permittivity, ionization constant and the Debye–Hückel constants.
//!
//! From 0 to 100 °C. Density is that at 0.1 MPa; the other four are along the
//! saturation line, as their published tables are (at 0.1 MPa pKw is lower by less than
//! 0.0005). Outside that range the value at its nearer end is given: the caller warns,
//! by [`in_range`].

use std::f64::consts::{LN_10, PI};

/// Where the functions of this file hold, in kelvin.
pub const RANGE: std::ops::RangeInclusive<f64> = 273.15..=373.15;

pub fn in_range(kelvin: f64) -> bool {
    RANGE.contains(&kelvin)
}

/// Density, kg/m³. IAPWS SR7-09, "Revised Supplementary Release on Properties of Liquid
/// Water at 0.1 MPa" (2011), equation for the molar volume. Coefficients as in PyPI
/// `iapws` 1.5.5, a general-purpose steam-table library; the release itself was not
/// read.
pub fn density(kelvin: f64) -> f64 {
    // (coefficient, power)
    const A: [(f64, i32); 5] = [
        (6.744_584_46e3, 4),
        (-2.225_216_04e5, 5),
        (1.002_312_47e8, 7),
        (-1.635_521_18e9, 8),
        (8.322_996_58e9, 9),
    ];
    const B: [(f64, i32); 6] = [
        (5.785_452_92e-3, 1),
        (-1.531_956_65e-2, 2),
        (3.113_378_59e-2, 3),
        (-4.235_462_41e-2, 4),
        (3.387_135_07e-2, 5),
        (-1.199_467_61e-2, 6),
    ];
    let t = kelvin.clamp(*RANGE.start(), *RANGE.end());
    let alpha = 10.0 / (593.0 - t);
    let beta = 10.0 / (t - 232.0);
    let series = |terms: &[(f64, i32)], x: f64| -> f64 {
        terms.iter().map(|(coefficient, power)| coefficient * x.powi(*power)).sum()
    };
    // Specific gas constant of water 0.46151805 kJ/(kg·K), 10 K, 0.1 MPa: m³/kg.
    let scale = 0.461_518_05 * 10.0 / 0.1 / 1000.0;
    1.0 / (scale * (1.937_631_57e-2 + series(&A, alpha) + series(&B, beta)))
}

/// Density of the saturated liquid, kg/m³. IAPWS SR1-86(1992), "Revised Supplementary
/// Release on Saturation Properties of Ordinary Water Substance". Coefficients recalled
/// from memory; they give back the tested densities of IAPWS-95 to 0.006 kg/m³.
fn saturated_density(kelvin: f64) -> f64 {
    const CRITICAL_DENSITY: f64 = 322.0;
    let cube_root = (1.0 - kelvin / 647.096).cbrt();
    let terms = [
        (1.992_740_64, 1),
        (1.099_653_42, 2),
        (-0.510_839_303, 5),
        (-1.754_934_79, 16),
        (-45.517_035_2, 43),
        (-6.746_944_50e5, 110),
    ];
    let sum: f64 = terms.iter().map(|(b, power)| b * cube_root.powi(*power)).sum();
    CRITICAL_DENSITY * (1.0 + sum)
}

/// Static relative permittivity. IAPWS R8-97 (D. P. Fernández et al., J. Phys. Chem.
/// Ref. Data 26, 1125, 1997). Coefficients as in PyPI `iapws` 1.5.5; the release itself
/// was not read.
pub fn permittivity(kelvin: f64) -> f64 {
    let t = kelvin.clamp(*RANGE.start(), *RANGE.end());
    permittivity_at(t, saturated_density(t))
}

fn permittivity_at(t: f64, density: f64) -> f64 {
    // (coefficient, power of the reduced density, power of the reduced temperature)
    const G: [(f64, i32, f64); 11] = [
        (0.978_224_486_826, 1, 0.25),
        (-0.957_771_379_375, 1, 1.0),
        (0.237_511_794_148, 1, 2.5),
        (0.714_692_244_396, 2, 1.5),
        (-0.298_217_036_956, 3, 1.5),
        (-0.108_863_472_196, 3, 2.5),
        (0.949_327_488_264e-1, 4, 2.0),
        (-0.980_469_816_509e-2, 5, 2.0),
        (0.165_167_634_970e-4, 6, 5.0),
        (0.937_359_795_772e-4, 7, 0.5),
        (-0.123_179_218_72e-9, 10, 10.0),
    ];
    // Constants as the release prints them, older than today's.
    const BOLTZMANN: f64 = 1.380_658e-23;
    const AVOGADRO: f64 = 6.022_136_7e23;
    const POLARIZABILITY: f64 = 1.636e-40;
    const VACUUM: f64 = 8.854_187_817e-12;
    const DIPOLE: f64 = 6.138e-30;
    const MOLAR_MASS: f64 = 0.018_015_268;
    const CRITICAL_T: f64 = 647.096;
    const CRITICAL_DENSITY: f64 = 322.0;

    let rho = density / CRITICAL_DENSITY;
    let tau = CRITICAL_T / t;
    let mut g = 1.0 + 0.196_096_504_426e-2 * rho * (t / 228.0 - 1.0).powf(-1.2);
    for (coefficient, power_rho, power_tau) in G {
        g += coefficient * rho.powi(power_rho) * tau.powf(power_tau);
    }
    let number = AVOGADRO * density / MOLAR_MASS;
    let a = number * DIPOLE * DIPOLE * g / (VACUUM * BOLTZMANN * t);
    let b = number * POLARIZABILITY / (3.0 * VACUUM);
    let root = (9.0 + 2.0 * a + 18.0 * b + a * a + 10.0 * a * b + 9.0 * b * b).sqrt();
    (1.0 + a + 5.0 * b + root) / (4.0 - 4.0 * b)
}

/// −log10 of the ionization constant, ions on the molal scale. IAPWS R11-07(2019)
/// (after A. V. Bandura, S. N. Lvov, J. Phys. Chem. Ref. Data 35, 15, 2006).
/// Coefficients as in PyPI `iapws` 1.5.5; the release itself was not read.
pub fn pkw(kelvin: f64) -> f64 {
    let t = kelvin.clamp(*RANGE.start(), *RANGE.end());
    pkw_at(t, saturated_density(t))
}

fn pkw_at(t: f64, density: f64) -> f64 {
    const MOLAR_MASS: f64 = 18.015_268;
    let rho = density / 1000.0;
    let z = rho * (-0.702_132 + 8681.05 / t - 24_145.1 / (t * t) * rho.powf(2.0 / 3.0)).exp();
    let association =
        (1.0 + z).log10() - z / (1.0 + z) * rho * (0.813_876 - 51.4471 / t - 0.469_920 * rho);
    let gas = 6.141_50e-1 + 4.825_133e4 / t - 6.770_793e4 / (t * t) + 1.010_210e7 / (t * t * t);
    -12.0 * association + gas + 2.0 * (MOLAR_MASS / 1000.0).log10()
}

/// CODATA 2018: elementary charge, Avogadro and Boltzmann constants (exact), and the
/// electric constant.
const CHARGE: f64 = 1.602_176_634e-19;
const AVOGADRO: f64 = 6.022_140_76e23;
const BOLTZMANN: f64 = 1.380_649e-23;
const ELECTRIC: f64 = 8.854_187_812_8e-12;

/// Debye–Hückel A, for log10 γ and molal ionic strength, (kg/mol)^½.
pub fn debye_huckel_a(kelvin: f64) -> f64 {
    let t = kelvin.clamp(*RANGE.start(), *RANGE.end());
    let bjerrum = CHARGE * CHARGE / (4.0 * PI * ELECTRIC * permittivity(t) * BOLTZMANN * t);
    (2.0 * PI * AVOGADRO * saturated_density(t)).sqrt() * bjerrum.powf(1.5) / LN_10
}

/// Debye–Hückel B, for molal ionic strength, (kg/mol)^½ per ångström.
pub fn debye_huckel_b(kelvin: f64) -> f64 {
    let t = kelvin.clamp(*RANGE.start(), *RANGE.end());
    let thermal = ELECTRIC * permittivity(t) * BOLTZMANN * t;
    (2.0 * CHARGE * CHARGE * AVOGADRO * saturated_density(t) / thermal).sqrt() * 1e-10
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Check values of the two releases at a given density: permittivity read in the
    /// documentation of PyPI `iapws` 1.5.5 (IAPWS R8-97); pKw of the 2019 revision
    /// recalled from memory (IAPWS R11-07).
    #[test]
    fn meets_the_check_values_of_the_releases() {
        assert!((permittivity_at(298.15, 999.242866) - 78.590725).abs() < 5e-7);
        assert!((pkw_at(300.0, 1000.0) - 13.906672).abs() < 5e-7);
    }
}
