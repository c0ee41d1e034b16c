//! What an answer is computed from, one number at a time: the quantities that can be
//! uncertain, and that answers have derivatives by.

/// A number that goes into the answer.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Input {
    /// The total of a component of the scope, mol per litre or kilogram.
    Total(usize),
    /// The amount of a reagent of the problem, mol per litre or kilogram.
    Reagent(usize),
    /// A held value of the problem, in the unit of its [`super::model::HeldWhat`].
    Held(usize),
    /// log10 K of a reaction of the scope.
    LogK(usize),
    /// The enthalpy of a reaction of the scope, J/mol.
    Enthalpy(usize),
    /// The heat capacity of a reaction of the scope, J/(mol·K).
    HeatCapacity(usize),
    /// The ionic strength where it is given, mol per litre or kilogram.
    IonicStrength,
    /// Kelvin.
    Temperature,
    /// The value that a dose is found to meet: the index of that target.
    Target(usize),
}
