//! The ion balance of a water analysis: cations against anions, and the published criterion
//! that their difference is held to.

use crate::chemistry::quantity::Scale;
use crate::chemistry::water;
use crate::equilibrium::quantities::Solved;
use crate::problem::model::{HeldWhat, Problem};
use crate::problem::scope::PROTON;

/// Cations and anions of a water whose pH is held, in meq/L.
#[derive(Clone, Debug)]
pub struct IonBalance {
    /// Name and meq/L, the largest first; those of no weight are left out.
    pub cations: Vec<(String, f64)>,
    pub anions: Vec<(String, f64)>,
    pub cation_sum: f64,
    pub anion_sum: f64,
}

/// How far cations and anions may lie apart.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Criterion {
    MilliequivalentsPerLitre(f64),
    Percent(f64),
}

/// Where the criteria come from. Recalled: the text was not at hand.
pub const CRITERION_SOURCE: &str = "Standard Methods 1030 E";

/// Ions below this share of all charge are not worth a line.
const NO_WEIGHT: f64 = 5e-4;

impl IonBalance {
    /// None where the pH is not held, or where there are no ions of both signs besides those
    /// of water: such a file asks for shares at a pH and does not pretend to an analysis.
    pub fn of(problem: &Problem, solved: &Solved) -> Option<Self> {
        problem.held.iter().find(|held| matches!(held.what, HeldWhat::Ph(_)))?;
        let milli = 1000.0 * per_litre(problem);
        let species = &problem.scope.stoichiometry.species;
        let (mut cations, mut anions) = (Vec::new(), Vec::new());
        let mut whole = (false, false);
        for (species, c) in species.iter().zip(&solved.answer.concentrations) {
            let charge = milli * f64::from(species.charge) * c;
            let of_water = species.row.iter().all(|&(j, _)| j == PROTON);
            if charge > 0.0 {
                whole.0 |= !of_water;
                cations.push((species.name.clone(), charge));
            } else if charge < 0.0 {
                whole.1 |= !of_water;
                anions.push((species.name.clone(), -charge));
            }
        }
        if whole != (true, true) {
            return None;
        }
        let sum = |ions: &[(String, f64)]| ions.iter().map(|(_, meq)| meq).sum::<f64>();
        let (cation_sum, anion_sum) = (sum(&cations), sum(&anions));
        for ions in [&mut cations, &mut anions] {
            ions.retain(|(_, meq)| *meq >= NO_WEIGHT * (cation_sum + anion_sum));
            ions.sort_by(|(_, a), (_, b)| b.total_cmp(a));
        }
        Some(Self { cations, anions, cation_sum, anion_sum })
    }

    /// Cations less anions, meq/L.
    pub fn difference(&self) -> f64 {
        self.cation_sum - self.anion_sum
    }

    /// 100 (cations − anions) / (cations + anions).
    pub fn percent(&self) -> f64 {
        100.0 * self.difference() / (self.cation_sum + self.anion_sum)
    }

    /// By the sum of the anions, as the table of Standard Methods goes.
    pub fn criterion(&self) -> Criterion {
        Criterion::at(self.anion_sum)
    }

    pub fn is_accepted(&self) -> bool {
        self.criterion().accepts(self.cation_sum, self.anion_sum)
    }
}

impl Criterion {
    /// For a sum of anions in meq/L: APHA, AWWA, WEF, Standard Methods for the Examination of
    /// Water and Wastewater, 1030 E Checking Correctness of Analyses (2017; recalled). The
    /// table ends at 800 meq/L; its last line is kept past that.
    pub fn at(anion_sum: f64) -> Self {
        match anion_sum {
            sum if sum < 3.0 => Criterion::MilliequivalentsPerLitre(0.2),
            sum if sum < 10.0 => Criterion::Percent(2.0),
            _ => Criterion::Percent(5.0),
        }
    }

    pub fn accepts(self, cations: f64, anions: f64) -> bool {
        match self {
            Criterion::MilliequivalentsPerLitre(limit) => (cations - anions).abs() <= limit,
            Criterion::Percent(limit) => {
                100.0 * (cations - anions).abs() <= limit * (cations + anions)
            }
        }
    }

    /// `0.2 meq/L` or `2 %`.
    pub fn words(self) -> String {
        match self {
            Criterion::MilliequivalentsPerLitre(limit) => format!("{limit} meq/L"),
            Criterion::Percent(limit) => format!("{limit} %"),
        }
    }
}

/// What brings an amount onto the litre: one, or the density of water in kg/L.
pub fn per_litre(problem: &Problem) -> f64 {
    match problem.scale {
        Scale::PerLitre => 1.0,
        Scale::PerKilogram => water::density(problem.kelvin) / 1000.0,
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    // Standard Methods 1030 E, recalled: 0.2 meq/L below 3, 2 % to 10, 5 % to 800.
    #[test]
    fn the_criterion_goes_by_the_sum_of_the_anions() {
        assert!(Criterion::at(2.9).accepts(3.09, 2.9));
        assert!(!Criterion::at(2.9).accepts(3.11, 2.9));
        assert!(Criterion::at(3.0).accepts(3.12, 3.0));
        assert!(!Criterion::at(3.0).accepts(3.13, 3.0));
        assert!(Criterion::at(10.0).accepts(11.0, 10.0));
        assert!(!Criterion::at(10.0).accepts(11.1, 10.0));
    }
}
