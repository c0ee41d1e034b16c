//! Pitzer's method against published mean activity coefficients, and the derivatives.
//!
//! Every parameter is recalled, so what is measured here is what admits a salt: within
//! 2 % of the published values up to the range that `parameters.rs` states for it.

use lyate::chemistry::activity::{ActivityKind, ActivityModel};
use lyate::chemistry::formula::{Formula, Groups};
use lyate::chemistry::interaction::{Interaction, binary, known, parameters};

fn read(name: &str) -> Formula {
    Formula::parse(name, &Groups::new()).unwrap()
}

fn of(names: &[&str]) -> Interaction {
    let formulas: Vec<Formula> = names.iter().map(|name| read(name)).collect();
    Interaction::new(&formulas, 298.15)
}

/// Mean activity coefficient of a salt of these ions.
fn mean(cation: &str, anion: &str, m: f64) -> f64 {
    let interaction = of(&[cation, anion]);
    let (z, y) = (interaction.charge(0), -interaction.charge(1));
    let (plus, minus) = if z == y { (1.0, 1.0) } else { (y, z) };
    let found = interaction.coefficients(&[plus * m, minus * m]).ln_gamma;
    ((plus * found[0] + minus * found[1]) / (plus + minus)).exp()
}

struct Table {
    ions: (&'static str, &'static str),
    /// mol/kg and mean γ.
    values: &'static [(f64, f64)],
}

const fn table(cation: &'static str, anion: &'static str, values: &'static [(f64, f64)]) -> Table {
    Table { ions: (cation, anion), values }
}

/// Read in the CRC Handbook of Chemistry and Physics, "Mean activity coefficients of
/// electrolytes" (2011).
const CRC: [Table; 1] = [table(
    "Ca^2+",
    "Cl-",
    &[
        (0.001, 0.888),
        (0.002, 0.851),
        (0.005, 0.787),
        (0.01, 0.727),
        (0.02, 0.664),
        (0.05, 0.577),
        (0.1, 0.517),
        (0.2, 0.469),
        (0.5, 0.444),
        (1.0, 0.495),
        // Past the range stated for the pair: 2.3 % off.
        (2.0, 0.784),
    ],
)];

/// Recalled: W. J. Hamer, Y.-C. Wu, J. Phys. Chem. Ref. Data 1, 1047 (1972); Na2SO4: R. N.
/// Goldberg, J. Phys. Chem. Ref. Data 10, 671 (1981).
const REVIEWS: [Table; 8] = [
    table(
        "H+",
        "Cl-",
        &[
            (0.001, 0.965),
            (0.01, 0.905),
            (0.05, 0.832),
            (0.1, 0.797),
            (0.2, 0.768),
            (0.5, 0.759),
            (1.0, 0.811),
            (2.0, 1.009),
            (5.0, 2.38),
        ],
    ),
    table(
        "Na+",
        "Cl-",
        &[
            (0.001, 0.965),
            (0.01, 0.903),
            (0.05, 0.822),
            (0.1, 0.779),
            (0.2, 0.734),
            (0.5, 0.681),
            (1.0, 0.657),
            (2.0, 0.668),
            (5.0, 0.874),
        ],
    ),
    table(
        "K+",
        "Cl-",
        &[
            (0.001, 0.965),
            (0.01, 0.901),
            (0.05, 0.816),
            (0.1, 0.768),
            (0.2, 0.717),
            (0.5, 0.649),
            (1.0, 0.604),
            (2.0, 0.573),
            (4.5, 0.583),
        ],
    ),
    table(
        "Na+",
        "OH-",
        &[
            (0.001, 0.965),
            (0.01, 0.902),
            (0.05, 0.819),
            (0.1, 0.775),
            (0.2, 0.731),
            (0.5, 0.685),
            (1.0, 0.674),
            (2.0, 0.714),
            (5.0, 1.076),
        ],
    ),
    table(
        "K+",
        "OH-",
        &[
            (0.001, 0.965),
            (0.01, 0.902),
            (0.05, 0.821),
            (0.1, 0.779),
            (0.2, 0.74),
            (0.5, 0.71),
            (1.0, 0.733),
            (2.0, 0.86),
            (5.0, 1.697),
        ],
    ),
    table(
        "H+",
        "NO3-",
        &[
            (0.001, 0.965),
            (0.01, 0.902),
            (0.05, 0.823),
            (0.1, 0.785),
            (0.2, 0.748),
            (0.5, 0.715),
            (1.0, 0.72),
            (2.0, 0.783),
        ],
    ),
    table(
        "NH4+",
        "Cl-",
        &[
            (0.001, 0.965),
            (0.01, 0.901),
            (0.05, 0.816),
            (0.1, 0.769),
            (0.2, 0.718),
            (0.5, 0.649),
            (1.0, 0.603),
            (2.0, 0.569),
            (5.0, 0.563),
        ],
    ),
    table(
        "Na+",
        "SO4^2-",
        &[
            (0.001, 0.886),
            (0.01, 0.712),
            (0.05, 0.529),
            (0.1, 0.446),
            (0.2, 0.366),
            (0.5, 0.268),
            (1.0, 0.204),
            (2.0, 0.155),
        ],
    ),
];

/// Recalled: R. A. Robinson, R. H. Stokes, "Electrolyte Solutions", 2nd ed. (1970),
/// appendix 8.10.
const ROBINSON_STOKES: [Table; 28] = [
    table("H+", "Cl-", &[(0.1, 0.796), (0.5, 0.757), (1.0, 0.809), (2.0, 1.009), (3.0, 1.316)]),
    table(
        "Na+",
        "Cl-",
        &[(0.1, 0.778), (0.5, 0.681), (1.0, 0.657), (3.0, 0.714), (4.0, 0.783), (6.0, 0.986)],
    ),
    table("K+", "Cl-", &[(0.1, 0.77), (0.5, 0.649), (1.0, 0.604), (3.0, 0.569), (4.0, 0.577)]),
    table("NH4+", "Cl-", &[(0.1, 0.77), (0.5, 0.649), (1.0, 0.603), (4.0, 0.56), (6.0, 0.564)]),
    table("Ca^2+", "Cl-", &[(0.1, 0.518), (0.2, 0.472), (0.5, 0.448), (1.0, 0.5), (2.0, 0.792)]),
    table("Mg^2+", "Cl-", &[(0.1, 0.529), (0.2, 0.489), (0.5, 0.481), (1.0, 0.57), (2.0, 1.053)]),
    table("Na+", "SO4^2-", &[(0.1, 0.445), (0.2, 0.365), (0.5, 0.266), (1.0, 0.201), (2.0, 0.152)]),
    table("K+", "SO4^2-", &[(0.1, 0.441), (0.2, 0.36), (0.5, 0.264), (0.7, 0.231)]),
    table("NH4+", "SO4^2-", &[(0.1, 0.439), (0.2, 0.356), (0.5, 0.257), (1.0, 0.193)]),
    table("Na+", "OH-", &[(0.1, 0.766), (0.5, 0.69), (1.0, 0.678), (2.0, 0.709), (3.0, 0.784)]),
    table("K+", "OH-", &[(0.1, 0.798), (0.5, 0.732), (1.0, 0.756), (2.0, 0.888), (3.0, 1.081)]),
    table("H+", "NO3-", &[(0.1, 0.791), (0.5, 0.72), (1.0, 0.724), (2.0, 0.793), (3.0, 0.909)]),
    table("H+", "ClO4-", &[(0.1, 0.803), (0.5, 0.769), (1.0, 0.823), (2.0, 1.055), (3.0, 1.448)]),
    table("Li+", "Cl-", &[(0.1, 0.79), (0.5, 0.739), (1.0, 0.774), (2.0, 0.921), (3.0, 1.156)]),
    table("Na+", "NO3-", &[(0.1, 0.762), (0.5, 0.617), (1.0, 0.548), (2.0, 0.478), (4.0, 0.408)]),
    table("K+", "NO3-", &[(0.1, 0.739), (0.5, 0.545), (1.0, 0.443), (2.0, 0.333), (3.0, 0.269)]),
    table("NH4+", "NO3-", &[(0.1, 0.74), (0.5, 0.582), (1.0, 0.504), (2.0, 0.419), (3.0, 0.368)]),
    table("Na+", "F-", &[(0.1, 0.765), (0.2, 0.71), (0.5, 0.632), (1.0, 0.573)]),
    table("K+", "F-", &[(0.1, 0.775), (0.5, 0.67), (1.0, 0.645), (2.0, 0.658), (3.0, 0.705)]),
    table("Na+", "Br-", &[(0.1, 0.782), (0.5, 0.697), (1.0, 0.687), (2.0, 0.731), (3.0, 0.812)]),
    table("Na+", "ClO4-", &[(0.1, 0.775), (0.5, 0.668), (1.0, 0.629), (2.0, 0.609), (3.0, 0.611)]),
    table(
        "Na+",
        "CH3COO-",
        &[(0.1, 0.791), (0.5, 0.735), (1.0, 0.757), (2.0, 0.851), (3.0, 0.982)],
    ),
    table("K+", "CH3COO-", &[(0.1, 0.796), (0.5, 0.751), (1.0, 0.783), (2.0, 0.91), (3.0, 1.086)]),
    table("Na+", "H2PO4-", &[(0.1, 0.744), (0.5, 0.563), (1.0, 0.468), (2.0, 0.371), (3.0, 0.32)]),
    table("K+", "H2PO4-", &[(0.1, 0.731), (0.2, 0.653), (0.5, 0.529), (1.0, 0.421)]),
    table("Ca^2+", "NO3-", &[(0.1, 0.488), (0.2, 0.429), (0.5, 0.362), (1.0, 0.338), (2.0, 0.347)]),
    table("Mg^2+", "NO3-", &[(0.1, 0.522), (0.2, 0.48), (0.5, 0.465), (1.0, 0.537), (2.0, 0.835)]),
    table(
        "Mg^2+",
        "SO4^2-",
        &[(0.1, 0.15), (0.2, 0.107), (0.5, 0.0675), (1.0, 0.0485), (2.0, 0.0417)],
    ),
];

/// Salts that miss 2 %, with how far: their two tables differ from one another by that
/// much. KOH lies between Hamer and Wu (at most 2.9 % above) and Robinson and Stokes (3.0 %
/// below); Na2SO4 lies 2.1 % above Goldberg at 0.2 mol/kg and up to 2.7 % above Robinson
/// and Stokes.
const WIDER: [(&str, &str); 2] = [("K+", "OH-"), ("Na+", "SO4^2-")];

#[test]
fn each_salt_gives_back_its_published_coefficients() {
    let mut seen = Vec::new();
    for Table { ions: (cation, anion), values } in
        CRC.iter().chain(&REVIEWS).chain(&ROBINSON_STOKES)
    {
        let checked = binary(&read(cation), &read(anion)).unwrap().checked;
        // That table rests on a value chosen for 0.1 mol/kg, 10.7 % below what the osmotic
        // coefficients of dilute solutions give (K. S. Pitzer, G. Mayorga, J. Solution
        // Chem. 3, 539, 1974; recalled): only its course says something,
        // and that is 2.0 % off at 1 mol/kg, where the range ends before.
        let relative = (*cation, *anion) == ("Mg^2+", "SO4^2-");
        let scale = if relative { mean(cation, anion, values[0].0) / values[0].1 } else { 1.0 };
        let within = match checked.within {
            Some(within) => within,
            None => {
                assert!(relative, "{cation} {anion}");
                0.02
            }
        };
        let wider = WIDER.contains(&(*cation, *anion));
        assert!(within <= if wider { 0.031 } else { 0.02 }, "{cation} {anion}");
        for (m, published) in *values {
            let ionic = of(&[cation, anion]);
            let (z, y) = (ionic.charge(0), -ionic.charge(1));
            let (plus, minus) = if z == y { (1.0, 1.0) } else { (y, z) };
            let reaches = 0.5 * (plus * z * z + minus * y * y) * m <= checked.to * 1.0001;
            let off = mean(cation, anion, *m) / scale / published - 1.0;
            assert!(!reaches || off.abs() <= within, "{cation} {anion} {m}: {off:+.4}");
        }
        seen.push((*cation, *anion));
    }
    for pair in parameters::BINARY_HARVIE.iter().chain(&parameters::BINARY_PITZER) {
        let told = pair.checked.within.is_none() || seen.contains(&pair.ions);
        assert!(told, "{:?} has no table here", pair.ions);
    }
}

/// The recalled parameters miss the table read for it, CRC Handbook (2011), by 3.4 % at 0.2
/// mol/kg.
#[test]
fn barium_chloride_stays_left_out() {
    assert_eq!(binary(&read("Ba^2+"), &read("Cl-")), None);
    assert_eq!(known(&read("Ba^2+")), None);
}

/// Osmotic coefficients of NaCl recalled from R. A. Robinson, R. H. Stokes, "Electrolyte
/// Solutions" (1970), appendix 8.10; the saturated brine's activity of water, 0.753 at
/// 6.14 mol/kg, is common practice.
#[test]
fn the_activity_of_water_over_sodium_chloride() {
    let interaction = of(&["Na+", "Cl-"]);
    for (m, published) in [(0.1, 0.932), (0.5, 0.921), (1.0, 0.936), (2.0, 0.983), (6.0, 1.271)] {
        let ln_water = interaction.coefficients(&[m, m]).ln_water;
        let osmotic = -ln_water / (0.018_015_268 * 2.0 * m);
        assert!((osmotic / published - 1.0).abs() < 0.003, "{m}: {osmotic}");
    }
    let saturated = interaction.coefficients(&[6.14, 6.14]).ln_water.exp();
    assert!((saturated - 0.753).abs() < 0.002, "{saturated}");
}

const BRINE: [&str; 14] = [
    "H+", "Na+", "K+", "Ca^2+", "Mg^2+", "MgOH+", "Cl-", "SO4^2-", "HSO4-", "OH-", "HCO3-",
    "CO3^2-", "CO2", "Fe^3+",
];
const AMOUNTS: [f64; 14] =
    [1e-5, 2.1, 0.3, 0.05, 0.4, 1e-6, 2.5, 0.2, 0.01, 1e-6, 0.05, 0.01, 0.03, 0.002];

#[test]
fn derivatives_agree_with_finite_differences_and_are_symmetric() {
    let interaction = of(&BRINE);
    let n = BRINE.len();
    for scale in [1e-6, 1e-2, 1.0, 2.0] {
        let m: Vec<f64> = AMOUNTS.iter().map(|m| m * scale).collect();
        let (found, slopes) = interaction.coefficients_and_slopes(&m);
        assert_eq!(found, interaction.coefficients(&m));
        for j in 0..n {
            let step = 1e-5;
            let at = |by: f64| {
                let mut m = m.clone();
                m[j] *= 1.0 + by;
                interaction.coefficients(&m)
            };
            let (low, high) = (at(-step), at(step));
            for i in 0..=n {
                let value = |c: &lyate::chemistry::interaction::Coefficients| match i {
                    _ if i == n => c.ln_water,
                    _ => c.ln_gamma[i],
                };
                let expected = (value(&high) - value(&low)) / (2.0 * step);
                let off = (slopes.of(i, j) - expected).abs();
                assert!(off < 1e-9 + 1e-6 * expected.abs(), "{i} {j} at {scale}: {off:e}");
                if i < n {
                    // By m_j and by m_i: the order of differentiation does not matter.
                    let (one, other) = (slopes.of(i, j) / m[j], slopes.of(j, i) / m[i]);
                    assert!((one - other).abs() < 1e-9 * (1.0 + one.abs()), "{i} {j} {scale}");
                }
            }
            // Gibbs and Duhem: Σ m_i d ln γ_i + (1/M) d ln a_w + dm = 0.
            let sum: f64 = (0..n).map(|i| m[i] * slopes.of(i, j)).sum();
            let left = sum + slopes.of(n, j) / 0.018_015_268 + m[j];
            assert!(left.abs() < 1e-12 * (1.0 + sum.abs()), "{j} at {scale}: {left:e}");
        }
    }
}

#[test]
fn an_ion_without_parameters_keeps_the_long_range_term() {
    assert_eq!(known(&read("Fe^3+")), None);
    let m = [0.01, 0.03];
    let found = of(&["Fe^3+", "ClO3-"]).coefficients(&m).ln_gamma;
    let model = ActivityModel::new(ActivityKind::Pitzer, 298.15);
    for (ln, charge) in found.into_iter().zip([3, -1]) {
        assert!((ln - model.ln_gamma(charge, 0.0, 0.06).0).abs() < 1e-12);
    }
}

#[test]
fn species_go_by_composition_and_charge() {
    for (written, name) in
        [("C2H3O2-", "CH3COO-"), ("H3O+", "H+"), ("H2CO3", "CO2"), ("Na+", "Na+")]
    {
        assert_eq!(known(&read(written)), Some(name));
    }
    for other in ["Na", "Fe^3+", "CO2^2-", "NH3"] {
        assert_eq!(known(&read(other)), None, "{other}");
    }
    let (one, other) = (of(&["Na+", "CH3COO-"]), of(&["Na+", "C2H3O2-"]));
    assert_eq!(one.coefficients(&[1.0, 1.0]), other.coefficients(&[1.0, 1.0]));
}

/// Neither nothing at all nor more than any solution holds gives anything but numbers.
#[test]
fn any_amounts_give_numbers() {
    let interaction = of(&BRINE);
    for scale in [0.0, 1e-300, 1e-20, 1e-8, 10.0] {
        let m: Vec<f64> = AMOUNTS.iter().map(|m| m * scale).collect();
        let (found, slopes) = interaction.coefficients_and_slopes(&m);
        assert!(found.ln_gamma.iter().all(|ln| ln.is_finite()), "{scale}");
        for i in 0..=BRINE.len() {
            assert!((0..BRINE.len()).all(|j| slopes.of(i, j).is_finite()), "{scale} {i}");
        }
    }
}
