//! A problem as it is meant: one base, or one case of it, with everything resolved.

use std::sync::Arc;

use num_rational::Rational64;

use super::blend::Blend;
use super::curve::Curve;
use super::defect::Defect;
use super::scope::Scope;
use super::sparse::Row;
use crate::chemistry::activity::ActivityKind;
use crate::chemistry::formula::Formula;
use crate::chemistry::quantity::Scale;
use crate::text::span::Place;

#[derive(Clone, Debug)]
pub struct Problem {
    pub title: Option<String>,
    pub title_at: Option<Place>,
    pub scope: Arc<Scope>,
    pub kelvin: f64,
    pub temperature_at: Option<Place>,
    pub activity: ActivityKind,
    pub activity_at: Option<Place>,
    /// mol per `scale`, where it is given and not computed.
    pub ionic_strength: Option<f64>,
    pub scale: Scale,
    /// Of each component of the scope.
    pub amounts: Vec<Amount>,
    /// The waters that are put in.
    pub blend: Option<Blend>,
    pub reagents: Vec<Reagent>,
    pub held: Vec<Held>,
    pub balances: Vec<WrittenBalance>,
    pub expectations: Vec<Expectation>,
    /// Each over something else.
    pub curves: Vec<Curve>,
    /// log10 K of each reaction of the scope at `kelvin`; zero where it is not in use.
    pub log_k: Vec<f64>,
    pub defects: Vec<Defect>,
    /// Whether there is a problem to solve; a file of definitions alone states none.
    pub states_problem: bool,
    /// Whether something found wrong keeps it from being solved.
    pub blocked: bool,
}

/// What is known of a component's total.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Amount {
    /// mol per litre or kilogram; none where nothing gives it.
    pub total: Option<f64>,
    /// The `total` statement, or the first reagent that brings it.
    pub at: Option<Place>,
    pub source: AmountSource,
}

#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum AmountSource {
    #[default]
    Nothing,
    /// A `total` statement.
    Total,
    Reagents,
    /// Blended waters, and the reagents put in on top.
    Blend,
    /// A held value makes it unknown: the index of that value.
    Held(usize),
}

/// A substance put in.
#[derive(Clone, Debug)]
pub struct Reagent {
    pub formula: Arc<Formula>,
    pub at: Place,
    /// mol per litre or kilogram; several `add` lines of one reagent add up.
    pub amount: f64,
    /// What one mole of it is, over the components of the scope, water left out.
    pub row: Row,
    /// The forms that `giving` names, by stoichiometry row; else it falls into the fewest.
    pub giving: Option<Vec<(usize, Rational64)>>,
}

#[derive(Clone, Debug, PartialEq)]
pub struct Held {
    pub at: Place,
    /// In canonical words, such as `pH` or `CO2(g)`.
    pub words: String,
    pub what: HeldWhat,
    /// The component whose total it makes unknown; none for pH, pe and gases.
    pub releases: Option<usize>,
}

#[derive(Clone, Copy, Debug, PartialEq)]
pub enum HeldWhat {
    /// pH
    Ph(f64),
    /// pe
    Pe(f64),
    /// Partial pressure of the species, atm.
    Pressure { species: usize, atm: f64 },
    /// Activity of the species.
    Activity { species: usize, value: f64 },
    /// Concentration of the species, mol per litre or kilogram.
    Concentration { species: usize, value: f64 },
}

#[derive(Clone, Debug)]
pub struct WrittenBalance {
    pub kind: BalanceKindResolved,
    /// The words after `balance`.
    pub at: Place,
    /// From the first term to the last.
    pub equation: Place,
    pub left: Vec<WrittenTerm>,
    pub right: Vec<WrittenTerm>,
    /// Whether every term could be read; only then is it compared.
    pub complete: bool,
}

#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum BalanceKindResolved {
    Charge,
    Protons,
    Component(usize),
}

impl BalanceKindResolved {
    pub fn words(self, scope: &Scope) -> String {
        match self {
            Self::Charge => "charge".into(),
            Self::Protons => "protons".into(),
            Self::Component(j) => scope.components[j].formula.name.clone(),
        }
    }
}

#[derive(Clone, Debug)]
pub struct WrittenTerm {
    /// With the sign it was written with; moving it to the other side flips it.
    pub coefficient: Rational64,
    pub what: WrittenWhat,
    pub at: Place,
    /// The coefficient's digits, where one is written.
    pub coefficient_at: Option<Place>,
}

#[derive(Clone, Copy, Debug, PartialEq)]
pub enum WrittenWhat {
    /// A row of the stoichiometry.
    Species(usize),
    /// A component of the scope.
    Total(usize),
    /// A reagent of the problem.
    Added(usize),
    /// mol per litre or kilogram, with half a unit of its last written digit.
    Amount { value: f64, half_digit: f64 },
}

/// An `expect` statement.
#[derive(Clone, Debug)]
pub struct Expectation {
    /// The whole statement.
    pub at: Place,
    pub sought: Sought,
    /// In canonical words, such as `[NH3]`.
    pub words: String,
    pub limit: Limit,
    /// The unit as written, with its value in base units; a plain number has none.
    pub unit: Option<ShownUnit>,
    pub source: Option<String>,
}

#[derive(Clone, Debug, PartialEq)]
pub struct ShownUnit {
    /// `mg/L as N`
    pub words: String,
    /// Base units in one of it.
    pub factor: f64,
}

/// A limit in base units (mol per litre or kilogram, atm, plain).
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Limit {
    Within { value: f64, tolerance: f64 },
    Below { value: f64, or_equal: bool },
    Above { value: f64, or_equal: bool },
    Between { low: f64, high: f64 },
}

/// A quantity of the answer, resolved.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Sought {
    Ph,
    Poh,
    Pe,
    /// V against the standard hydrogen electrode.
    Potential,
    /// A species of the scope.
    Concentration(usize),
    Activity(usize),
    Pressure(usize),
    SaturationIndex(usize),
    /// A component of the scope.
    Total(usize),
    /// A species' share of its component.
    Fraction {
        species: usize,
        component: usize,
    },
    Alkalinity,
    Acidity,
    /// mol of alkaline earths, two equivalents each.
    Hardness,
    CarbonateHardness,
    IonicStrength,
    BufferCapacity,
    /// In percent, or in equivalents.
    ChargeImbalance {
        equivalents: bool,
    },
}

impl Problem {
    /// The name of a row of the stoichiometry.
    pub fn row_name(&self, row: usize) -> &str {
        &self.scope.stoichiometry.species[row].name
    }
}

impl Limit {
    /// Whether a value in base units meets it.
    pub fn is_met_by(&self, value: f64) -> bool {
        match *self {
            Limit::Within { value: wanted, tolerance } => (value - wanted).abs() <= tolerance,
            Limit::Below { value: limit, or_equal } => {
                value < limit || (or_equal && value == limit)
            }
            Limit::Above { value: limit, or_equal } => {
                value > limit || (or_equal && value == limit)
            }
            Limit::Between { low, high } => low <= value && value <= high,
        }
    }
}
