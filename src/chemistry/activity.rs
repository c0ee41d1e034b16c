//! Activity models: the activity coefficient of an ion from the ionic strength.

/// A model with the Debye–Hückel constants of its temperature built in.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct ActivityModel {
    pub kind: ActivityKind,
    /// Debye–Hückel A (log10, molal) and B (per ångström, molal).
    pub a: f64,
    pub b: f64,
}

#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum ActivityKind {
    Ideal,
    DebyeHuckel,
    ExtendedDebyeHuckel,
    Guntelberg,
    Davies,
}

impl ActivityModel {
    /// ln γ of an ion and its derivative by the ionic strength.
    pub fn ln_gamma(&self, charge: i32, ion_size: f64, ionic_strength: f64) -> (f64, f64) {
        let z2 = f64::from(charge * charge);
        if z2 == 0.0 || self.kind == ActivityKind::Ideal {
            return (0.0, 0.0);
        }
        let i = ionic_strength.max(1e-30);
        let root = i.sqrt();
        let scale = -self.a * z2 * std::f64::consts::LN_10;
        // f(√I) and its derivative by √I; then by I through 1/(2√I).
        let (f, df) = match self.kind {
            ActivityKind::Ideal => (0.0, 0.0),
            ActivityKind::DebyeHuckel => (root, 1.0),
            ActivityKind::Guntelberg => (root / (1.0 + root), (1.0 + root).powi(-2)),
            ActivityKind::ExtendedDebyeHuckel => {
                let d = 1.0 + self.b * ion_size * root;
                (root / d, d.powi(-2))
            }
            ActivityKind::Davies => {
                (root / (1.0 + root) - 0.3 * i, (1.0 + root).powi(-2) - 0.6 * root)
            }
        };
        (scale * f, scale * df / (2.0 * root))
    }
}
