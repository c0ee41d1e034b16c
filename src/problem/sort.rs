//! What sort of reaction one is, by its shape: that of an acid, a complex, a solid, a gas,
//! a couple with electrons, or none of these.

use num_rational::Rational64;
use num_traits::{One, Zero};

use super::reaction::{Participant, Reaction};
use crate::chemistry::formula::{Formula, Phase};

#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum Sort {
    /// An acid gives off one proton.
    Acid,
    /// A complex or an ion pair forms from its parts; metal ions that take up hydroxide
    /// among them.
    Complex,
    Solid,
    Gas,
    Couple,
    Other,
}

impl Sort {
    pub const ALL: [Sort; 6] =
        [Sort::Acid, Sort::Complex, Sort::Solid, Sort::Gas, Sort::Couple, Sort::Other];
}

impl Reaction {
    pub fn sort(&self) -> Sort {
        let any = |is: &dyn Fn(&Formula) -> bool| self.participants.iter().any(|p| is(&p.formula));
        if any(&Formula::is_electron) {
            return Sort::Couple;
        }
        if any(&|formula| formula.phase == Phase::Gas) {
            return Sort::Gas;
        }
        if any(&|formula| matches!(formula.phase, Phase::Solid(_))) {
            return Sort::Solid;
        }
        let of = |left: bool| -> Vec<&Participant> {
            let side = move |p: &&Participant| (p.coefficient < Rational64::zero()) == left;
            self.participants.iter().filter(side).filter(|p| !is_of_water(&p.formula)).collect()
        };
        let (left, right) = (of(true), of(false));
        let ([from, ..], [to]) = (&left[..], &right[..]) else { return Sort::Other };
        if left.len() == 1 && !is_bare_metal(&from.formula) {
            let once = from.coefficient == -Rational64::one() && to.coefficient.is_one();
            let protons = self.protons();
            return if once && protons.is_one() {
                Sort::Acid
            } else if !once || protons < Rational64::zero() {
                // Two of it join, or it takes up a proton.
                Sort::Complex
            } else {
                Sort::Other
            };
        }
        // Neutral molecules that join make a molecule, no complex.
        if left.iter().all(|p| p.formula.charge == 0) { Sort::Other } else { Sort::Complex }
    }

    /// Protons given off.
    fn protons(&self) -> Rational64 {
        let protons = self.participants.iter().filter(|p| p.formula.is_proton());
        protons.map(|p| p.coefficient).sum()
    }
}

fn is_of_water(formula: &Formula) -> bool {
    formula.is_water() || formula.is_proton() || formula.is_hydroxide()
}

/// A cation of one element, such as `Fe^3+`.
fn is_bare_metal(formula: &Formula) -> bool {
    let of_one = formula.elements().is_some_and(|elements| elements.len() == 1);
    formula.charge > 0 && of_one
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::problem::builtin;

    #[test]
    fn reactions_are_sorted_by_their_shape() {
        let of = |set: &str, start: &str| {
            let found = builtin::find(set, None).unwrap();
            let reaction = found.reactions.iter().find(|r| r.equation.starts_with(start));
            reaction.unwrap_or_else(|| panic!("{set} has no {start}")).sort()
        };
        assert_eq!(of("carbonate", "CO2 + H2O"), Sort::Acid);
        assert_eq!(of("carbonate", "CO2(g)"), Sort::Gas);
        assert_eq!(of("hydrolysis", "Zn^2+ + H2O"), Sort::Complex);
        assert_eq!(of("hydrolysis", "2 Cu^2+"), Sort::Complex);
        assert_eq!(of("chelates", "CaEDTA^2- + H+"), Sort::Complex);
        assert_eq!(of("fluoride", "HF + F-"), Sort::Complex);
        assert_eq!(of("chromate", "2 HCrO4-"), Sort::Complex);
        assert_eq!(of("chlorine", "HOCl + NH3"), Sort::Other);
        assert_eq!(of("chlorine", "Cl2 + H2O"), Sort::Other);
        assert_eq!(of("minerals", "ZnO(s"), Sort::Solid);
        assert_eq!(of("redox", "MnO2(s"), Sort::Couple);
        assert_eq!(of("redox", "Fe^3+"), Sort::Couple);
    }
}
