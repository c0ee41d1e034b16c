//! Constants moved with temperature, against published equations for pK(T).

use lyate::chemistry::constant::{ReactionHeat, log_k_at};
use lyate::chemistry::water;

const T0: f64 = 298.15;

/// pK = A/T + B + C·T has enthalpy R ln 10 (A − C T²) and heat capacity −2 R ln 10 C T.
struct Equation {
    a: f64,
    b: f64,
    c: f64,
}

impl Equation {
    fn pk(&self, kelvin: f64) -> f64 {
        self.a / kelvin + self.b + self.c * kelvin
    }

    fn heat(&self) -> ReactionHeat {
        let scale = 8.314_462_618 * std::f64::consts::LN_10;
        ReactionHeat {
            enthalpy: scale * (self.a - self.c * T0 * T0),
            heat_capacity: -2.0 * scale * self.c * T0,
        }
    }
}

/// Boric acid: G. G. Manov, N. J. DeLollis, S. F. Acree, J. Res. NBS 33, 287 (1944),
/// coefficients read in its abstract. Ammonium: R. G. Bates, G. D. Pinching, J. Res. NBS
/// 42, 419 (1949); acetic acid: H. S. Harned, R. W. Ehlers, J. Am. Chem. Soc. 55, 652
/// (1933): both recalled from memory.
#[test]
fn follows_published_equations() {
    let boric = Equation { a: 2237.94, b: -3.305, c: 0.016883 };
    let ammonium = Equation { a: 2835.76, b: -0.6322, c: 0.001225 };
    let acetic = Equation { a: 1170.48, b: -3.1649, c: 0.013399 };
    for equation in [boric, ammonium, acetic] {
        let log_k = -equation.pk(T0);
        for celsius in [0.0, 10.0, 25.0, 40.0, 50.0] {
            let kelvin: f64 = celsius + 273.15;
            let found = -log_k_at(log_k, T0, equation.heat(), kelvin);
            let far = (found - equation.pk(kelvin)).abs();
            // A constant heat capacity leaves a term of third order in T − T₀.
            assert!(far < 0.003, "{celsius} °C: off by {far}");
        }
    }
}

/// Water: 55.8 kJ/mol (recalled from memory) and −215.2 J/(mol·K), read in a paper of
/// P. P. Singh, E. M. Woolley, K. G. McCurdy, L. G. Hepler (Can. J. Chem. 54, 3315, 1976),
/// against IAPWS R11-07(2019).
#[test]
fn follows_water() {
    let heat = ReactionHeat { enthalpy: 55_800.0, heat_capacity: -215.2 };
    for celsius in [5.0, 15.0, 35.0, 50.0] {
        let kelvin = celsius + 273.15;
        let found = -log_k_at(-water::pkw(T0), T0, heat, kelvin);
        assert!((found - water::pkw(kelvin)).abs() < 0.01, "{celsius} °C: {found}");
    }
}

#[test]
fn without_heat_nothing_moves() {
    assert_eq!(log_k_at(-9.25, T0, ReactionHeat::default(), 310.0), -9.25);
    let heat = ReactionHeat { enthalpy: 52_100.0, heat_capacity: -14.0 };
    assert_eq!(log_k_at(-9.25, T0, heat, T0), -9.25);
    // An endothermic dissociation goes further when it is warmer.
    assert!(log_k_at(-9.25, T0, heat, 310.0) > -9.25);
}
