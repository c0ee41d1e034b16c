//! The published thresholds behind the cautions, with their sources. A number here says when
//! a caution is shown; it is no advice, and limits change and differ between countries.

/// An exposure limit of a gas in air.
pub struct AirLimit {
    /// As it stands in a sentence.
    pub name: &'static str,
    /// By volume.
    pub ppm: f64,
}

/// Ceilings, or limits for some minutes: the air over a sump is breathed for minutes.
/// OSHA: 29 CFR 1910.1000 and its tables; NIOSH REL and IDLH: NIOSH, Pocket Guide to
/// Chemical Hazards and the IDLH documentation of 1994.
pub const HYDROGEN_SULFIDE: [AirLimit; 2] = [
    // Read in Nitric Oxide 71, 1 (2017), table 3.
    AirLimit { name: "the NIOSH ceiling", ppm: 10.0 },
    AirLimit { name: DANGEROUS, ppm: 100.0 },
];
pub const HYDROGEN_CYANIDE: [AirLimit; 2] = [
    // Read in an OSHA sampling page as copied elsewhere; the IDLH is recalled.
    AirLimit { name: "the NIOSH short-term limit", ppm: 4.7 },
    AirLimit { name: DANGEROUS, ppm: 50.0 },
];
pub const SULFUR_DIOXIDE: [AirLimit; 2] = [
    // Read in the IDLH documentation (1994) and at EHS Daily Advisor.
    AirLimit { name: "the NIOSH short-term limit", ppm: 5.0 },
    AirLimit { name: DANGEROUS, ppm: 100.0 },
];
pub const CHLORINE: [AirLimit; 2] = [
    // Read in the IDLH documentation (1994); the OSHA ceiling is 1 ppm.
    AirLimit { name: "the NIOSH ceiling", ppm: 0.5 },
    AirLimit { name: DANGEROUS, ppm: 10.0 },
];
/// Of ammonia only what is dangerous at once: its smell warns long before, and a plant that
/// handles it would otherwise be warned everywhere.
pub const AMMONIA: [AirLimit; 1] = [
    // Read at the Minnesota Department of Agriculture.
    AirLimit { name: DANGEROUS, ppm: 300.0 },
];

pub const DANGEROUS: &str = "the level immediately dangerous to life or health (NIOSH)";

/// pH at or below and at or above which aqueous waste counts as corrosive: 40 CFR 261.22
/// (read).
pub const CORROSIVE_WASTE: (f64, f64) = (2.0, 12.5);
/// pH from which a mixture is taken as corrosive to skin for want of other information:
/// Regulation (EC) 1272/2008, Annex I, 3.2.3.1.2 (read).
pub const CORROSIVE_TO_SKIN: (f64, f64) = (2.0, 11.5);
/// Waste with cyanide or sulfide counts as reactive when it gives off toxic gas between
/// these: California Title 22, 66705 (read); 40 CFR 261.23(a)(5) (recalled).
pub const REACTIVE_WASTE: (f64, f64) = (2.0, 12.5);
/// Recommended in drinking water: 40 CFR 143.3 (read).
pub const DRINKING_WATER: (f64, f64) = (6.5, 8.5);

/// EPA, Aquatic Life Ambient Water Quality Criteria for Ammonia – Freshwater, 2013 (EPA
/// 822-R-13-001). The expressions are recalled; they give back the criteria of 17 and
/// 1.9 mg N/L at pH 7 and 20 °C that were read. Total ammonia in mg N/L.
pub mod ammonia {
    /// One-hour average, not more than once in three years, where salmonids may be present.
    pub fn acute(ph: f64, celsius: f64) -> f64 {
        let low = 10f64.powf(7.204 - ph);
        let high = 10f64.powf(ph - 7.204);
        let salmonids = 0.275 / (1.0 + low) + 39.0 / (1.0 + high);
        let others = 0.7249
            * (0.0114 / (1.0 + low) + 1.6181 / (1.0 + high))
            * (23.12 * 10f64.powf(0.036 * (20.0 - celsius)));
        salmonids.min(others)
    }

    /// Thirty-day average, not more than once in three years.
    pub fn chronic(ph: f64, celsius: f64) -> f64 {
        let low = 10f64.powf(7.688 - ph);
        let high = 10f64.powf(ph - 7.688);
        0.8876
            * (0.0278 / (1.0 + low) + 1.1994 / (1.0 + high))
            * (2.126 * 10f64.powf(0.028 * (20.0 - celsius.max(7.0))))
    }

    #[cfg(test)]
    mod tests {
        /// Values at pH 7 and 8, 20 °C, as printed with the expressions; 17 and 1.9 at pH 7
        /// read at AE2S, "USEPA releases updated water quality criteria" (2013).
        #[test]
        fn the_expressions_give_back_the_published_criteria() {
            let near = |value: f64, printed: f64, half: f64| (value - printed).abs() <= half;
            assert!(near(super::acute(7.0, 20.0), 17.0, 0.5));
            assert!(near(super::acute(7.0, 20.0), 16.76, 0.01));
            assert!(near(super::acute(8.0, 20.0), 3.9, 0.05));
            assert!(near(super::chronic(7.0, 20.0), 1.9, 0.05));
            assert!(near(super::chronic(8.0, 20.0), 0.78, 0.005));
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// The published limits, with source and how each was had, copied apart from this file.
    #[test]
    fn thresholds_are_the_published_ones() {
        let text = include_str!("../../../tests/reference/hazards.json");
        let published: serde_json::Value = serde_json::from_str(text).unwrap();
        let air = |formula: &str, body: &str, kind: &str| {
            let all = published["air"].as_array().unwrap();
            let found = all.iter().find(|entry| {
                entry["formula"] == formula
                    && entry["body"] == body
                    && entry["kind"].as_str().unwrap().starts_with(kind)
            });
            found.unwrap()["ppm"].as_f64().unwrap()
        };
        let ppm = |limits: &[AirLimit]| limits.iter().map(|limit| limit.ppm).collect::<Vec<_>>();
        for (formula, kind, limits) in [
            ("H2S", "C", &HYDROGEN_SULFIDE),
            ("HCN", "STEL", &HYDROGEN_CYANIDE),
            ("SO2", "STEL", &SULFUR_DIOXIDE),
            ("Cl2", "C", &CHLORINE),
        ] {
            let known = [air(formula, "NIOSH REL", kind), air(formula, "NIOSH IDLH", "IDLH")];
            assert_eq!(ppm(limits), known, "{formula}");
        }
        assert_eq!(ppm(&AMMONIA), [air("NH3", "NIOSH IDLH", "IDLH")]);
        let ph = |id: &str| {
            let all = published["ph"].as_array().unwrap();
            let entry = all.iter().find(|entry| entry["id"] == id).unwrap();
            let number = |key: &str, at: usize| {
                entry[key].as_f64().or_else(|| entry["range"][at].as_f64()).unwrap()
            };
            (number("low_at_or_below", 0), number("high_at_or_above", 1))
        };
        assert_eq!(CORROSIVE_WASTE, ph("rcra_corrosive"));
        assert_eq!(CORROSIVE_TO_SKIN, ph("clp_skin_corrosive"));
        assert_eq!(REACTIVE_WASTE, ph("cyanide_sulfide_reactive"));
        assert_eq!(DRINKING_WATER, ph("us_secondary_drinking"));
    }
}
