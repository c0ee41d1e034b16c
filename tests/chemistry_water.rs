//! Water's properties against published values.

use lyate::chemistry::water;

fn kelvin(celsius: f64) -> f64 {
    celsius + 273.15
}

/// (°C, pKw): IAPWS R11-07(2019) at the density of the saturated liquid from IAPWS-95,
/// computed with PyPI `iapws` 1.5.5, a general-purpose steam-table library.
const PKW: [(f64, f64); 21] = [
    (0.01, 14.9465),
    (5.0, 14.7345),
    (10.0, 14.5339),
    (15.0, 14.3443),
    (20.0, 14.1648),
    (25.0, 13.9947),
    (30.0, 13.8333),
    (35.0, 13.6802),
    (40.0, 13.5347),
    (45.0, 13.3964),
    (50.0, 13.2649),
    (55.0, 13.1399),
    (60.0, 13.0209),
    (65.0, 12.9077),
    (70.0, 12.7999),
    (75.0, 12.6973),
    (80.0, 12.5996),
    (85.0, 12.5067),
    (90.0, 12.4182),
    (95.0, 12.3339),
    (100.0, 12.2538),
];

/// (°C, density of the saturated liquid in kg/m³): IAPWS-95, computed with the same.
const DENSITY: [(f64, f64); 21] = [
    (0.01, 999.793),
    (5.0, 999.917),
    (10.0, 999.655),
    (15.0, 999.056),
    (20.0, 998.162),
    (25.0, 997.003),
    (30.0, 995.606),
    (35.0, 993.991),
    (40.0, 992.175),
    (45.0, 990.173),
    (50.0, 987.996),
    (55.0, 985.656),
    (60.0, 983.160),
    (65.0, 980.517),
    (70.0, 977.734),
    (75.0, 974.815),
    (80.0, 971.766),
    (85.0, 968.592),
    (90.0, 965.295),
    (95.0, 961.88),
    (100.0, 958.349),
];

/// (°C, relative permittivity, Debye–Hückel A, B per ångström): IAPWS R8-97 with
/// IAPWS-95 and CODATA 2018 constants, computed with the same.
const ELECTRIC: [(f64, f64, f64, f64); 13] = [
    (0.01, 87.895, 0.49046, 0.32453),
    (5.0, 85.911, 0.49398, 0.32531),
    (10.0, 83.971, 0.49765, 0.32609),
    (15.0, 82.074, 0.50151, 0.32687),
    (20.0, 80.219, 0.50556, 0.32764),
    (25.0, 78.405, 0.5098, 0.32843),
    (30.0, 76.63, 0.51425, 0.32923),
    (35.0, 74.895, 0.51891, 0.33004),
    (40.0, 73.197, 0.52377, 0.33087),
    (45.0, 71.537, 0.52885, 0.33171),
    (50.0, 69.913, 0.53414, 0.33257),
    (55.0, 68.325, 0.53964, 0.33344),
    (60.0, 66.772, 0.54536, 0.33433),
];

#[test]
fn ionization_constant_is_the_iapws_one() {
    for (celsius, pkw) in PKW {
        let found = water::pkw(kelvin(celsius));
        assert!((found - pkw).abs() < 1e-4, "{celsius} °C: {found} for {pkw}");
    }
}

/// Read in the CRC Handbook of Chemistry and Physics (online, 2023), "Ionization
/// Constant of Normal and Heavy Water", at 0.1 MPa; the formulation gives these tables
/// back to 0.002 only.
#[test]
fn ionization_constant_agrees_with_the_handbook() {
    for (celsius, pkw) in
        [(0.0, 14.946), (25.0, 13.995), (50.0, 13.264), (75.0, 12.696), (100.0, 12.252)]
    {
        let found = water::pkw(kelvin(celsius));
        assert!((found - pkw).abs() < 0.002, "{celsius} °C: {found} for {pkw}");
    }
}

#[test]
fn density_is_that_of_the_liquid() {
    for (celsius, saturated) in DENSITY {
        // At 0.1 MPa water is denser than at saturation by 0.05 kg/m³ at most.
        let found = water::density(kelvin(celsius));
        let difference = found - saturated;
        assert!((-0.001..0.055).contains(&difference), "{celsius} °C: {found} for {saturated}");
    }
    // 25 °C, 0.101325 MPa: 997.047 kg/m³, recalled from memory (IAPWS-95).
    assert!((water::density(kelvin(25.0)) - 997.047).abs() < 0.001);
    // The greatest density is near 4 °C: common knowledge.
    assert!(water::density(kelvin(4.0)) > water::density(kelvin(3.0)));
    assert!(water::density(kelvin(4.0)) > water::density(kelvin(5.0)));
}

#[test]
fn permittivity_and_debye_huckel_constants() {
    for (celsius, permittivity, a, b) in ELECTRIC {
        let t = kelvin(celsius);
        assert!((water::permittivity(t) - permittivity).abs() < 1.5e-3, "{celsius} °C");
        assert!((water::debye_huckel_a(t) - a).abs() < 1.5e-5, "{celsius} °C");
        assert!((water::debye_huckel_b(t) - b).abs() < 1.5e-5, "{celsius} °C");
    }
}

/// A at 25 °C by another formulation: 3 × 0.3915 / ln 10 (D. G. Archer, P. Wang, J. Phys.
/// Chem. Ref. Data 19, 371, 1990, recalled from memory); at 20 °C 0.50513, read in an
/// unsigned worksheet.
#[test]
fn debye_huckel_a_agrees_with_other_formulations() {
    assert!((water::debye_huckel_a(298.15) - 0.5101).abs() < 0.0005);
    assert!((water::debye_huckel_a(293.15) - 0.50513).abs() < 0.0005);
}

#[test]
fn past_the_range_the_end_holds() {
    assert!(water::in_range(298.15) && !water::in_range(273.0) && !water::in_range(374.0));
    for f in [
        water::pkw,
        water::density,
        water::permittivity,
        water::debye_huckel_a,
        water::debye_huckel_b,
    ] {
        assert_eq!(f(0.0), f(273.15));
        assert_eq!(f(1e9), f(373.15));
    }
}
