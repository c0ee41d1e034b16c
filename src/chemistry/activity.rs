//! Activity models: their names and ranges, and the activity coefficient of an ion from
//! the ionic strength.

use super::{interaction, water};

/// A model with the Debye–Hückel constants of its temperature built in.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct ActivityModel {
    pub kind: ActivityKind,
    /// Debye–Hückel A (log10, molal) and B (per ångström, molal).
    pub a: f64,
    pub b: f64,
}

#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, Hash)]
pub enum ActivityKind {
    Ideal,
    DebyeHuckel,
    ExtendedDebyeHuckel,
    Guntelberg,
    #[default]
    Davies,
    /// Ion interactions: see [`interaction`].
    Pitzer,
}

impl ActivityKind {
    pub const ALL: [ActivityKind; 6] = [
        ActivityKind::Ideal,
        ActivityKind::DebyeHuckel,
        ActivityKind::ExtendedDebyeHuckel,
        ActivityKind::Guntelberg,
        ActivityKind::Davies,
        ActivityKind::Pitzer,
    ];

    /// As it is written in a problem file.
    pub fn name(self) -> &'static str {
        match self {
            ActivityKind::Ideal => "ideal",
            ActivityKind::DebyeHuckel => "debye-huckel",
            ActivityKind::ExtendedDebyeHuckel => "extended-debye-huckel",
            ActivityKind::Guntelberg => "guntelberg",
            ActivityKind::Davies => "davies",
            ActivityKind::Pitzer => "pitzer",
        }
    }

    pub fn from_name(name: &str) -> Option<ActivityKind> {
        ActivityKind::ALL.into_iter().find(|kind| kind.name() == name)
    }

    /// The name that was most likely meant, where it is near enough to tell.
    pub fn nearest(name: &str) -> Option<ActivityKind> {
        if name.len() > 64 {
            return None;
        }
        let plain = |text: &str| text.to_lowercase().replace(['ü', ' ', '-', '_'], "");
        let wanted = plain(name);
        ActivityKind::ALL
            .into_iter()
            .map(|kind| (strsim::damerau_levenshtein(&plain(kind.name()), &wanted), kind))
            .filter(|(far, kind)| far * 3 < kind.name().len())
            .min_by_key(|(far, _)| *far)
            .map(|(_, kind)| kind)
    }

    /// The ionic strength, mol/kg, up to which the model is commonly used; none for the
    /// ideal one, which has no such limit of its own.
    pub fn range_limit(self) -> Option<f64> {
        match self {
            ActivityKind::Ideal => None,
            ActivityKind::DebyeHuckel => Some(0.005),
            ActivityKind::ExtendedDebyeHuckel | ActivityKind::Guntelberg => Some(0.1),
            ActivityKind::Davies => Some(0.5),
            ActivityKind::Pitzer => Some(interaction::REACH),
        }
    }
}

impl ActivityModel {
    /// The model at a temperature, with A and B of [`water`].
    pub fn new(kind: ActivityKind, kelvin: f64) -> ActivityModel {
        ActivityModel { kind, a: water::debye_huckel_a(kelvin), b: water::debye_huckel_b(kelvin) }
    }

    /// ln γ of an ion and its derivative by the ionic strength.
    ///
    /// `ion_size` in ångström counts for the extended model alone. Neutral species have
    /// γ = 1. Ionic strength in mol/kg, or mol/L where the file is per litre. Of Pitzer's
    /// method it is the long-range term, which alone an ion without parameters has.
    pub fn ln_gamma(&self, charge: i32, ion_size: f64, ionic_strength: f64) -> (f64, f64) {
        let z2 = f64::from(charge).powi(2);
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
            ActivityKind::Pitzer => {
                // Aφ is a third of A.
                let d = 1.0 + 1.2 * root;
                let f = (root / d + d.ln() / 0.6) / 3.0;
                (f, (d.powi(-2) + 2.0 / d) / 3.0)
            }
        };
        (scale * f, scale * df / (2.0 * root))
    }
}
