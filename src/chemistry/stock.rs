//! Stocks: reagents as they are bought, their strength, and how dense they are.
//!
//! The densities are those of aqueous solutions at 20 °C, g/mL against percent by mass. Where
//! each comes from stands beside it; between two values they are interpolated linearly, which
//! for these tables is within 0.3 %. Outside of them nothing is guessed.

/// How strong a stock is, as it was written.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Strength {
    /// Mass of the substance per mass of the stock, above 0 and at most 1.
    MassFraction(f64),
    /// Grams of the substance per litre of the stock.
    MassPerLitre(f64),
    /// Moles of the substance per litre of the stock.
    AmountPerLitre(f64),
}

/// A reagent as it is bought.
#[derive(Clone, Debug, PartialEq)]
pub struct Stock {
    /// `30 % NaOH`
    pub words: String,
    /// The strength alone, `30 %`.
    pub strength: String,
    /// kg/L, where it is given or in the table; none of a powder.
    pub density: Option<f64>,
    /// Grams of stock that hold one mole; none where neither a mass fraction nor a density
    /// tells it.
    pub grams_per_mole: Option<f64>,
    /// Litres of stock that hold one mole; none without a density, where the strength needs
    /// one.
    pub litres_per_mole: Option<f64>,
    /// g/mol of the pure substance.
    molar_mass: Option<f64>,
}

/// Why a stock cannot be as it was written.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum StockProblem {
    /// A strength of nothing or less.
    NoStrength,
    /// More than 100 %, or more substance in a litre than the litre weighs.
    TooStrong,
    /// The substance has no known molar mass, and the strength counts mass.
    NoMolarMass,
    /// Lighter than half a kilogram per litre or heavier than four.
    Density,
}

/// No solution holds more than this of anything, g/L.
const MOST: f64 = 3000.0;

impl Stock {
    /// A stock of a substance (named in plain form, such as `NaOH`). `density` is in kg/L; where
    /// it is not given, the table is asked.
    ///
    /// # Errors
    /// Where there can be no such stock.
    pub fn new(
        substance: &str,
        molar_mass: Option<f64>,
        strength: Strength,
        words: &str,
        density: Option<f64>,
    ) -> Result<Stock, StockProblem> {
        let given = match strength {
            Strength::MassFraction(value)
            | Strength::MassPerLitre(value)
            | Strength::AmountPerLitre(value) => value,
        };
        if !given.is_finite() || given <= 0.0 {
            return Err(StockProblem::NoStrength);
        }
        if density.is_some_and(|density| !(0.5..=4.0).contains(&density)) {
            return Err(StockProblem::Density);
        }
        let mass = molar_mass.ok_or(StockProblem::NoMolarMass);
        let grams_in_litre = match strength {
            Strength::MassFraction(_) => None,
            Strength::MassPerLitre(grams) => Some(grams),
            Strength::AmountPerLitre(moles) => molar_mass.map(|mass| moles * mass),
        };
        if grams_in_litre.is_some_and(|grams| grams > MOST) {
            return Err(StockProblem::TooStrong);
        }
        let density = density.or_else(|| match (strength, grams_in_litre) {
            (Strength::MassFraction(fraction), _) => density_of(substance, 100.0 * fraction),
            (_, Some(grams)) => density_with(substance, grams),
            (_, None) => None,
        });
        let fraction = match strength {
            Strength::MassFraction(fraction) => Some(fraction),
            _ => grams_in_litre.zip(density).map(|(grams, density)| grams / (1e3 * density)),
        };
        if fraction.is_some_and(|fraction| fraction > 1.0) {
            return Err(StockProblem::TooStrong);
        }
        let grams_per_mole = match fraction {
            Some(fraction) => molar_mass.map(|mass| mass / fraction),
            None => None,
        };
        let litres_per_mole = match strength {
            Strength::MassFraction(_) => {
                let grams = grams_per_mole.ok_or(StockProblem::NoMolarMass)?;
                density.map(|density| grams / (1e3 * density))
            }
            Strength::MassPerLitre(grams) => Some(mass? / grams),
            Strength::AmountPerLitre(moles) => Some(1.0 / moles),
        };
        Ok(Stock {
            words: format!("{words} {substance}"),
            strength: words.to_owned(),
            density,
            grams_per_mole,
            litres_per_mole,
            molar_mass,
        })
    }

    /// Litres that one mole brings along; none of a powder, which takes no room to speak of.
    pub fn litres(&self) -> f64 {
        self.litres_per_mole.unwrap_or(0.0)
    }

    /// Kilograms of water that one mole brings along; none of a powder. Where a stock's density
    /// is not known, its water is taken to weigh as much as the litre that it is in.
    pub fn kilograms_of_water(&self) -> f64 {
        let Some(litres) = self.litres_per_mole else { return 0.0 };
        match (self.grams_per_mole, self.molar_mass) {
            (Some(stock), Some(pure)) => (stock - pure) / 1e3,
            _ => litres,
        }
    }
}

/// The density of a solution, kg/L, by percent of mass; none outside the table.
pub fn density_of(substance: &str, percent: f64) -> Option<f64> {
    ranges(substance).find_map(|points| interpolated(points, percent))
}

/// The percentages of mass between which the table knows a substance's solutions.
pub fn known_range(substance: &str) -> Option<(f64, f64)> {
    let ends = ranges(substance).filter_map(|points| Some((points.first()?.0, points.last()?.0)));
    ends.reduce(|one, two| (one.0.min(two.0), one.1.max(two.1)))
}

/// The density of the solution that holds these grams in a litre; none outside the table.
fn density_with(substance: &str, grams: f64) -> Option<f64> {
    let grams_at = |percent: f64, density: f64| 10.0 * percent * density;
    ranges(substance).find_map(|points| {
        let (first, last) = (points.first()?, points.last()?);
        let (mut low, mut high) = (first.0, last.0);
        if !(grams_at(low, first.1)..=grams_at(high, last.1)).contains(&grams) {
            return None;
        }
        for _ in 0..60 {
            let middle = 0.5 * (low + high);
            let density = interpolated(points, middle)?;
            *(if grams_at(middle, density) < grams { &mut low } else { &mut high }) = middle;
        }
        interpolated(points, 0.5 * (low + high))
    })
}

/// How far from a single value it still counts, in percent of mass.
const NEAR: f64 = 0.5;

type Points = &'static [(f64, f64)];

fn interpolated(points: Points, percent: f64) -> Option<f64> {
    if let [(only, density)] = points {
        return ((percent - only).abs() <= NEAR).then_some(*density);
    }
    points.windows(2).find_map(|pair| {
        let ((low, below), (high, above)) = (pair[0], pair[1]);
        let share = (percent - low) / (high - low);
        (0.0..=1.0).contains(&share).then_some(below + share * (above - below))
    })
}

fn ranges(substance: &str) -> impl Iterator<Item = Points> {
    DENSITIES.iter().filter(move |(name, _)| *name == substance).map(|(_, points)| *points)
}

/// Percent of mass and g/mL, by range. The tables at 20 °C are those of the *CRC Handbook of
/// Chemistry and Physics*, read in its reprints by Engineering ToolBox (sodium salts; acids and
/// ammonia) and, for HCl from 10 %, in a table of hydrochloric acid's properties copied from an
/// encyclopedia; what is marked was recalled from Perry's *Chemical Engineers' Handbook* or the
/// CRC Handbook and not read.
const DENSITIES: &[(&str, Points)] = &[
    (
        "HCl",
        &[
            (1.0, 1.0031), // recalled
            (5.0, 1.023),  // recalled
            (10.0, 1.048),
            (20.0, 1.098),
            (30.0, 1.149),
            (32.0, 1.159),
            (34.0, 1.169),
            (36.0, 1.179),
            (38.0, 1.189),
        ],
    ),
    (
        "H2SO4",
        &[
            (1.0, 1.0049),
            (5.0, 1.0318),
            (10.0, 1.0661),
            (20.0, 1.1398),
            (30.0, 1.2191),
            (40.0, 1.3028),
            (50.0, 1.3952),
            (60.0, 1.4983), // recalled
            (70.0, 1.6105),
            (80.0, 1.7272), // recalled
            (90.0, 1.8144), // recalled
            (95.0, 1.8337), // recalled
            (96.0, 1.8355), // recalled
            (98.0, 1.8361), // recalled
        ],
    ),
    (
        "NaOH",
        &[
            (1.0, 1.0095),
            (5.0, 1.0538),
            (10.0, 1.1089),
            (20.0, 1.2192),
            (30.0, 1.3277),
            (40.0, 1.4299),
            (45.0, 1.4779), // recalled
            (50.0, 1.5253), // recalled
        ],
    ),
    (
        "NH3",
        &[
            (1.0, 0.9938),
            (5.0, 0.977),
            (10.0, 0.9575),
            (16.0, 0.9362), // recalled
            (20.0, 0.9228),
            (24.0, 0.9101), // recalled
            (28.0, 0.898),  // recalled
            (30.0, 0.892),
        ],
    ),
    (
        "HNO3",
        &[
            (1.0, 1.0037),
            (5.0, 1.0257),
            (10.0, 1.0543),
            (20.0, 1.115),
            (30.0, 1.1801),
            (40.0, 1.2466),
        ],
    ),
    // Suppliers' tables of concentrated reagents; 65 % is recalled.
    ("HNO3", &[(65.0, 1.39), (69.6, 1.41), (70.0, 1.413)]),
    (
        "H3PO4",
        &[
            (1.0, 1.0038),
            (5.0, 1.0254),
            (10.0, 1.0531),
            (20.0, 1.1135),
            (30.0, 1.1804),
            (40.0, 1.2536),
        ],
    ),
    // The same suppliers' tables, at 25 °C.
    ("H3PO4", &[(85.0, 1.685)]),
    ("KOH", &[(45.0, 1.456)]),
    ("CH3COOH", &[(99.8, 1.05)]),
    // Milk of lime, two phases: computed from a solid of 2.24 g/mL (recalled, National Lime
    // Association) in water of 0.9982 g/mL. Most of it is not dissolved.
    (
        "Ca(OH)2",
        &[
            (5.0, 1.027),
            (10.0, 1.057),
            (15.0, 1.089),
            (20.0, 1.123),
            (25.0, 1.159),
            (30.0, 1.197),
            (35.0, 1.239),
            (40.0, 1.283),
        ],
    ),
];

#[cfg(test)]
mod tests {
    use super::*;

    /// mol/L of stocks as suppliers print them, read on their pages: the table of ACS reagents
    /// (HCl 12.1, H2SO4 18.0, NaOH 19.4 at 50.5 %), the one of laboratorynotes.com at 25 °C
    /// (HCl 11.61 at 36 %, HNO3 15.698, H3PO4 14.615, KOH 11.677, NH3 14.8), and the table of
    /// hydrochloric acid (10.17 at 32 %). NaOH 30 % is 9.958 by the density read. They differ
    /// among themselves by as much as 1 %.
    #[test]
    fn strengths_are_those_that_suppliers_print() {
        let printed = [
            ("HCl", 36.46, 37.2, 12.1, 0.01),
            ("HCl", 36.46, 36.0, 11.61, 0.005),
            ("HCl", 36.46, 32.0, 10.17, 0.001),
            ("H2SO4", 98.07, 96.0, 18.0, 0.003),
            ("HNO3", 63.012, 70.0, 15.698, 0.001),
            ("H3PO4", 97.994, 85.0, 14.615, 0.001),
            ("KOH", 56.105, 45.0, 11.677, 0.001),
            ("NaOH", 39.997, 30.0, 9.958, 0.0001),
            ("NaOH", 39.997, 50.0, 18.938, 0.008),
            ("NH3", 17.031, 28.0, 14.8, 0.003),
        ];
        for (name, mass, percent, printed, within) in printed {
            let strength = Strength::MassFraction(percent / 100.0);
            let stock = Stock::new(name, Some(mass), strength, "x %", None).expect(name);
            let moles = 1.0 / stock.litres();
            assert!((moles / printed - 1.0).abs() < within, "{name} {percent}: {moles}");
        }
    }

    #[test]
    fn a_strength_per_litre_finds_its_density() {
        // 30 % NaOH of 1.3277 kg/L holds 398.31 g/L.
        let of = |strength| Stock::new("NaOH", Some(39.997), strength, "s", None).expect("a stock");
        for strength in [Strength::MassPerLitre(398.31), Strength::AmountPerLitre(398.31 / 39.997)]
        {
            let stock = of(strength);
            assert!((stock.density.unwrap_or(0.0) - 1.3277).abs() < 1e-9, "{stock:?}");
            assert!((stock.litres() - 39.997 / 398.31).abs() < 1e-12);
            // 133.32 g of it hold one mole and 93.32 g of water.
            assert!((stock.kilograms_of_water() - 0.0933263).abs() < 1e-6, "{stock:?}");
        }
    }

    #[test]
    fn nothing_is_guessed_between_and_beyond_the_tables() {
        assert_eq!(density_of("HNO3", 50.0), None);
        assert_eq!(density_of("NaOH", 98.0), None);
        assert_eq!(density_of("KOH", 45.4), Some(1.456));
        assert_eq!(density_of("KOH", 46.0), None);
        assert_eq!(density_of("NaCl", 20.0), None);
        assert_eq!(known_range("NaOH"), Some((1.0, 50.0)));
        let powder =
            Stock::new("Ca(OH)2", Some(74.092), Strength::MassFraction(0.92), "92 %", None);
        let powder = powder.expect("a powder");
        assert_eq!((powder.litres(), powder.kilograms_of_water()), (0.0, 0.0));
        assert!((powder.grams_per_mole.unwrap_or(0.0) - 80.535).abs() < 1e-3);
    }

    #[test]
    fn impossible_stocks_are_named() {
        let of = |strength, density| Stock::new("HCl", Some(36.46), strength, "s", density).err();
        assert_eq!(of(Strength::MassFraction(0.0), None), Some(StockProblem::NoStrength));
        assert_eq!(of(Strength::MassFraction(1.2), None), Some(StockProblem::TooStrong));
        assert_eq!(of(Strength::MassPerLitre(9000.0), None), Some(StockProblem::TooStrong));
        assert_eq!(of(Strength::MassPerLitre(1300.0), Some(1.2)), Some(StockProblem::TooStrong));
        assert_eq!(of(Strength::MassFraction(0.3), Some(1149.0)), Some(StockProblem::Density));
        let unknown = Stock::new("Hum", None, Strength::MassFraction(0.3), "s", None);
        assert_eq!(unknown.err(), Some(StockProblem::NoMolarMass));
    }
}
