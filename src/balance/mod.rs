//! What must hold: mass, charge and proton balances in exact arithmetic, and how each
//! was derived.

pub mod charge;
pub mod mass;
pub mod proton;
pub mod recipe;
pub mod split;
pub mod written;

use num_rational::Rational64;

/// What a balance is of.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum BalanceKind {
    Charge,
    /// Of this component.
    Component(usize),
    Protons,
}

/// A constant of a balance: an amount that the recipe or a measurement gives.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Part {
    /// The total of a component.
    Total(usize),
    /// The added amount of a reagent.
    Added(usize),
    /// What a held phase or species brought.
    Held(usize),
    /// What formed of a solid.
    Precipitated(usize),
}

/// `Σ coefficient · [species] = Σ coefficient · part`, by rising index, no zeros.
#[derive(Clone, Debug, PartialEq)]
pub struct Balance {
    pub kind: BalanceKind,
    pub terms: Vec<(usize, Rational64)>,
    pub parts: Vec<(Part, Rational64)>,
}
