//! A reagent split by elements and charge over the components.

use num_rational::Rational64;

use super::elimination::{Solution, SparseRow, TooLarge, solve};
use crate::chemistry::formula::{Atom, Formula};

/// Why a reagent has no one split.
#[derive(Clone, Debug, PartialEq)]
pub enum SplitProblem {
    NotNeutral {
        charge: i32,
    },
    /// An element or group that no component holds.
    Unheld {
        atom: Atom,
    },
    /// Every atom is held, but not in a proportion that the components allow.
    Impossible,
    /// More than one split: these components may each be had from others.
    NotUnique {
        components: Vec<usize>,
    },
    TooLarge,
}

impl From<TooLarge> for SplitProblem {
    fn from(_: TooLarge) -> Self {
        SplitProblem::TooLarge
    }
}

/// How much of each component one mole of a reagent brings: `reagent = Σ x_j
/// component_j` in every element, every group and charge. The components are all that
/// may be used: `H+` and `H2O` among them, and `e-` where it is one.
pub fn split_over_components(
    reagent: &Formula,
    components: &[&Formula],
) -> Result<Vec<Rational64>, SplitProblem> {
    if reagent.charge != 0 {
        return Err(SplitProblem::NotNeutral { charge: reagent.charge });
    }
    for (atom, _) in reagent.conserved() {
        if !components.iter().any(|component| component.atoms.contains_key(atom)) {
            return Err(SplitProblem::Unheld { atom: atom.clone() });
        }
    }
    let mut atoms: Vec<&Atom> = components.iter().flat_map(|c| c.atoms.keys()).collect();
    atoms.sort_unstable();
    atoms.dedup();
    let mut equations: Vec<Vec<(usize, Rational64)>> = Vec::new();
    let mut right = Vec::new();
    for atom in atoms {
        let of = |formula: &Formula| formula.atoms.get(atom).copied();
        let row = components.iter().enumerate();
        equations.push(row.filter_map(|(j, component)| Some((j, of(component)?))).collect());
        right.push(of(reagent).unwrap_or_default());
    }
    let charges = components.iter().enumerate().filter(|(_, component)| component.charge != 0);
    equations.push(charges.map(|(j, c)| (j, Rational64::from(i64::from(c.charge)))).collect());
    right.push(Rational64::default());
    let equations: Vec<SparseRow> = equations.iter().map(Vec::as_slice).collect();
    match solve(&equations, &right, components.len())? {
        Solution::Unique(amounts) => Ok(amounts),
        Solution::None { .. } => Err(SplitProblem::Impossible),
        Solution::Many { free, .. } => Err(SplitProblem::NotUnique { components: free }),
    }
}
