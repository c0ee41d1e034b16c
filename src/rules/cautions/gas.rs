//! Toxic gases that a water gives off, and how much of one stands over it.

use super::hazard::{
    AMMONIA, AirLimit, CHLORINE, HYDROGEN_CYANIDE, HYDROGEN_SULFIDE, SULFUR_DIOXIDE,
};
use crate::equilibrium::quantities::Solved;
use crate::problem::model::Problem;

pub struct ToxicGas {
    pub name: &'static str,
    pub gas: &'static str,
    /// Its dissolved form, as it may be written.
    dissolved: &'static [&'static str],
    /// mol/(L·atm) at 25 °C, and −d ln H / d(1/T) in kelvin.
    henry: (f64, f64),
    /// By rising value.
    pub limits: &'static [AirLimit],
    /// Ions from which acid sets it free.
    pub ions: &'static [&'static str],
    /// Those ions in a word.
    pub kin: &'static str,
}

/// Henry constants: R. Sander, Compilation of Henry's law constants, Atmos. Chem. Phys. 23
/// (2023) and 15 (2015), the evaluations read there; the physical solubility, without what
/// the gas then turns into. They serve where the file has no reaction of the gas.
pub const GASES: [ToxicGas; 5] = [
    ToxicGas {
        name: "hydrogen sulfide",
        gas: "H2S(g)",
        dissolved: &["H2S"],
        henry: (0.1013, 2100.0),
        limits: &HYDROGEN_SULFIDE,
        ions: &["HS-", "S^2-"],
        kin: "sulfide",
    },
    ToxicGas {
        name: "hydrogen cyanide",
        gas: "HCN(g)",
        dissolved: &["HCN"],
        henry: (11.15, 5000.0),
        limits: &HYDROGEN_CYANIDE,
        ions: &["CN-"],
        kin: "cyanide",
    },
    ToxicGas {
        name: "sulfur dioxide",
        gas: "SO2(g)",
        dissolved: &["SO2", "H2SO3", "H2SO3*"],
        henry: (1.317, 2900.0),
        limits: &SULFUR_DIOXIDE,
        ions: &["HSO3-", "SO3^2-"],
        kin: "sulfite",
    },
    ToxicGas {
        name: "chlorine",
        gas: "Cl2(g)",
        dissolved: &["Cl2"],
        henry: (0.09322, 2000.0),
        limits: &CHLORINE,
        ions: &["ClO-", "OCl-", "HClO", "HOCl"],
        kin: "hypochlorite",
    },
    ToxicGas {
        name: "ammonia",
        gas: "NH3(g)",
        dissolved: &["NH3"],
        henry: (59.78, 4200.0),
        limits: &AMMONIA,
        ions: &[],
        kin: "ammonia",
    },
];

/// The dissolved forms of free chlorine.
pub const HYPOCHLOROUS: [&str; 2] = ["HClO", "HOCl"];
pub const HYPOCHLORITE: [&str; 2] = ["ClO-", "OCl-"];

/// log10 of {HClO}{H+}{Cl-}/{Cl2} at 25 °C: recalled, about 4·10⁻⁴ in the handbooks.
const CHLORINE_HYDROLYSIS: f64 = -3.4;

impl ToxicGas {
    /// The dissolved form in scope, as a species of it.
    pub fn dissolved_in(&self, problem: &Problem) -> Option<usize> {
        self.dissolved.iter().find_map(|name| belonging(problem, name))
    }

    /// In ppm by volume, at one atmosphere: the air that is in equilibrium with the water.
    /// None where no form of it is in scope.
    pub fn over(&self, problem: &Problem, solved: &Solved) -> Option<f64> {
        let by_reaction = belonging(problem, self.gas)
            .and_then(|species| Some(solved.ln_activity(problem, species)?.exp()));
        let atm = by_reaction.or_else(|| {
            let (henry, slope) = self.henry;
            let henry = henry * (slope * (1.0 / problem.kelvin - 1.0 / 298.15)).exp();
            let activity = match self.dissolved_in(problem) {
                Some(species) => solved.ln_activity(problem, species)?.exp(),
                None => self.from_hypochlorite(problem, solved)?,
            };
            Some(activity / henry)
        })?;
        atm.is_finite().then_some(atm * 1e6)
    }

    /// Activity of dissolved chlorine over hypochlorous acid and chloride.
    fn from_hypochlorite(&self, problem: &Problem, solved: &Solved) -> Option<f64> {
        if self.kin != "hypochlorite" {
            return None;
        }
        let acid = HYPOCHLOROUS.iter().find_map(|name| belonging(problem, name))?;
        let chloride = belonging(problem, "Cl-")?;
        let product = solved.ln_activity(problem, acid)? + solved.ln_activity(problem, chloride)?;
        let log = product / std::f64::consts::LN_10 - solved.ph() - CHLORINE_HYDROLYSIS;
        Some(10f64.powf(log))
    }
}

/// A species of the scope that belongs to the problem.
pub fn belonging(problem: &Problem, name: &str) -> Option<usize> {
    problem.scope.find(name).filter(|&species| problem.scope.belongs(species))
}

/// Concentration of a dissolved species, mol per litre or kilogram; zero where it is none.
pub fn concentration(problem: &Problem, solved: &Solved, name: &str) -> f64 {
    belonging(problem, name)
        .and_then(|species| problem.scope.row_of(species))
        .map_or(0.0, |row| solved.answer.concentrations[row])
}
