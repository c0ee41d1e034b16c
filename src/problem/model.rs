//! A problem as it is meant: one base, or one case of it, with everything resolved.

use std::sync::Arc;

use num_rational::Rational64;
use num_traits::ToPrimitive;

use super::blend::Blend;
use super::curve::Curve;
use super::defect::Defect;
use super::input::Input;
use super::scope::Scope;
use super::sparse::Row;
use super::uncertain::Uncertain;
use crate::chemistry::activity::ActivityKind;
use crate::chemistry::formula::Formula;
use crate::chemistry::quantity::Scale;
use crate::chemistry::stock::Stock;
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
    pub solids: Vec<Solid>,
    pub targets: Vec<Target>,
    /// What meets the targets, in their order: mol per litre or kilogram of the water treated.
    /// None until it is found.
    pub found: Option<Vec<f64>>,
    pub balances: Vec<WrittenBalance>,
    pub expectations: Vec<Expectation>,
    /// Each over something else.
    pub curves: Vec<Curve>,
    /// log10 K of each reaction of the scope at `kelvin`; zero where it is not in use.
    pub log_k: Vec<f64>,
    /// Every input that carries a `±`.
    pub uncertain: Vec<Uncertain>,
    /// Inputs that were converted with the density of water, and their derivatives by its
    /// logarithm.
    pub by_ln_density: Vec<(Input, f64)>,
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
    /// A target makes it unknown, by `by total`: the index of that target.
    Found(usize),
}

/// A substance put in.
#[derive(Clone, Debug)]
pub struct Reagent {
    pub formula: Arc<Formula>,
    pub at: Place,
    /// mol per litre or kilogram of the water treated; several `add` lines of one reagent add
    /// up. Zero while a target has yet to find it.
    pub amount: f64,
    /// What it brings along where it is a solution: litres per litre, or kilograms of water
    /// per kilogram, of the water treated.
    pub brings: f64,
    /// How it is bought, where all lines of it say the same.
    pub stock: Option<Arc<Stock>>,
    /// The target that finds its amount.
    pub target: Option<usize>,
    /// What one mole of it is, over the components of the scope, water left out.
    pub row: Row,
    /// The forms that `giving` names, by stoichiometry row; else it falls into the fewest.
    pub giving: Option<Vec<(usize, Rational64)>>,
}

/// A value that one amount is to be found for: `hold pH = 11 by NaOH`.
#[derive(Clone, Debug, PartialEq)]
pub struct Target {
    /// The quantity, in `hold`.
    pub at: Place,
    /// What follows `by`.
    pub by: Place,
    /// In canonical words, such as `pH`.
    pub words: String,
    pub sought: Sought,
    /// In base units.
    pub wanted: f64,
    pub unit: Option<ShownUnit>,
    pub unknown: Unknown,
}

/// What a target makes unknown.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Unknown {
    /// The amount of a reagent of the problem.
    Reagent(usize),
    /// The total of a component of the scope.
    Total(usize),
}

impl Reagent {
    /// Puts so much in, mol per litre or kilogram, with what its stock brings along.
    pub fn set_amount(&mut self, amount: f64, scale: Scale) {
        self.amount = amount;
        self.brings = amount * carried(self.stock.as_deref(), scale);
    }
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

/// A solid that the water is in touch with, or may come to be.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Solid {
    /// Its name, in `precipitate` or `saturate with`.
    pub at: Place,
    /// A species of the scope.
    pub species: usize,
    pub presence: Presence,
}

#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Presence {
    /// It forms where the water is supersaturated, and is not there else.
    Forms,
    /// There is more of it than can dissolve.
    Excess,
}

impl Held {
    /// Whether a pH is held by way of the pOH, so that it moves with water's own constant.
    pub fn is_by_poh(&self) -> bool {
        matches!(self.what, HeldWhat::Ph(_)) && self.words == "pOH"
    }
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
    /// A solid that may form, by its place among those.
    Precipitated(usize),
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
    /// The probability with which the limit has to hold, where one is asked for.
    pub confidence: Option<f64>,
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
    /// What formed of a solid of the problem, less what dissolved of it.
    Precipitated(usize),
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
    /// What is put in of a reagent of the problem, per litre or kilogram of the water treated.
    Dose(usize),
}

impl Problem {
    /// The solids of one presence, in the order written: those in excess stand behind the
    /// held values among the solver's held phases, those that may form are its candidates.
    pub fn solids_that_are(&self, presence: Presence) -> impl Iterator<Item = &Solid> {
        self.solids.iter().filter(move |solid| solid.presence == presence)
    }

    /// The solid in excess that is held phase `k` of the solver.
    pub fn excess(&self, k: usize) -> Option<&Solid> {
        self.solids_that_are(Presence::Excess).nth(k.checked_sub(self.held.len())?)
    }

    /// The name of a solid that may form, by its place among those.
    pub fn precipitate_name(&self, candidate: usize) -> &str {
        let solid = self.solids_that_are(Presence::Forms).nth(candidate);
        solid.map_or("a solid", |solid| self.solid_name(solid))
    }

    pub fn solid_name(&self, solid: &Solid) -> &str {
        &self.scope.species[solid.species].name
    }

    /// Litres of mixture, or kilograms of water in it, for one of the water treated: what the
    /// stocks bring along comes on top. Volumes are taken to add up.
    pub fn dilution(&self) -> f64 {
        1.0 + self.reagents.iter().map(|reagent| reagent.brings).sum::<f64>()
    }

    /// Whether targets have yet to find their amounts.
    pub fn lacks_doses(&self) -> bool {
        self.found.is_none() && !self.targets.is_empty()
    }

    /// Puts in what was found, target by target.
    pub fn put_in(&mut self, found: Vec<f64>) {
        for (target, &amount) in self.targets.iter().zip(&found) {
            match target.unknown {
                Unknown::Reagent(index) => {
                    let reagent = &mut self.reagents[index];
                    let more = amount - reagent.amount;
                    reagent.set_amount(amount, self.scale);
                    for &(j, n) in &reagent.row {
                        let brought = &mut self.amounts[j];
                        if matches!(brought.source, AmountSource::Reagents | AmountSource::Blend) {
                            let more = more * n.to_f64().unwrap_or(0.0);
                            brought.total = Some(brought.total.unwrap_or(0.0) + more);
                        }
                    }
                }
                Unknown::Total(component) => self.amounts[component].total = Some(amount),
            }
        }
        self.found = Some(found);
    }

    /// The name of what a target makes unknown: `NaOH`, `total CO3^2-`.
    pub fn unknown_name(&self, unknown: Unknown) -> String {
        match unknown {
            Unknown::Reagent(index) => self.reagents[index].formula.name.clone(),
            Unknown::Total(j) => format!("total {}", self.scope.components[j].formula.name),
        }
    }

    /// The name of a row of the stoichiometry.
    pub fn row_name(&self, row: usize) -> &str {
        &self.scope.stoichiometry.species[row].name
    }
}

/// What one mole from a stock brings along, in litres or in kilograms of water.
pub fn carried(stock: Option<&Stock>, scale: Scale) -> f64 {
    stock.map_or(0.0, |stock| match scale {
        Scale::PerLitre => stock.litres(),
        Scale::PerKilogram => stock.kilograms_of_water(),
    })
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
