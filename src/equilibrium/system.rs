//! The equations of one equilibrium, as numbers only: what goes into the solver.
//!
//! Component `j` has the unknown `x_j = ln {component j}`; species `i` then has
//! `ln {i} = ln_k_i + Σ_j coefficient_ij · x_j`. Each component brings one row,
//! `Σ_i coefficient_ij · c_i = total_j + Σ_k supply_kj · n_k`, with `n_k` the unknown
//! amounts of the fixed phases. The row of the proton holds the charge balance:
//! its total is `−Σ z_j total_j` over the other components.

use std::sync::Arc;

use num_rational::Rational64;

use crate::chemistry::activity::{ActivityKind, ActivityModel};
use crate::chemistry::interaction::Interaction;

/// An exact row over the components: (index, coefficient), by rising index, no zeros.
pub type Row = Vec<(usize, Rational64)>;

/// Component numbers in rows must be below `totals.len()`.
#[derive(Clone, Debug, PartialEq)]
pub struct System {
    /// Dissolved species, free components among them (coefficient one on themselves).
    pub species: Vec<Species>,
    /// Total of each component, mol per litre or kilogram. Zero means that every
    /// species which needs this component is absent. For the proton and the electron
    /// it may have either sign.
    pub totals: Vec<f64>,
    pub fixed: Vec<Fixed>,
    /// Solids that form if they would be supersaturated. [`super::solve::solve`] takes no
    /// notice of them; [`super::phases::equilibrate`] finds which are there.
    pub candidates: Vec<Candidate>,
    pub activity: Activity,
    pub ionic_strength: IonicStrength,
}

/// What activity coefficients are taken from.
#[derive(Clone, Debug, PartialEq)]
pub enum Activity {
    /// The ionic strength alone; water has activity one.
    ByIonicStrength(ActivityModel),
    /// The molality of every species, in the order of [`System::species`]; the activity of
    /// water comes with it. A given ionic strength has no say.
    ByComposition(Arc<Interaction>),
}

impl Activity {
    /// Whether all coefficients are one.
    pub fn is_ideal(&self) -> bool {
        matches!(self, Activity::ByIonicStrength(model) if model.kind == ActivityKind::Ideal)
    }

    /// The model, where the ionic strength is all that it asks for.
    pub fn by_ionic_strength(&self) -> Option<&ActivityModel> {
        match self {
            Activity::ByIonicStrength(model) => Some(model),
            Activity::ByComposition(_) => None,
        }
    }
}

impl From<ActivityModel> for Activity {
    fn from(model: ActivityModel) -> Self {
        Activity::ByIonicStrength(model)
    }
}

#[derive(Clone, Debug, PartialEq)]
pub struct Species {
    pub row: Row,
    /// Natural logarithm of the formation constant from the components and water.
    pub ln_k: f64,
    /// Molecules of water that its formation takes up, less those set free. Counts where
    /// the activity of water is not one.
    pub water: f64,
    pub charge: i32,
    /// Ion size for the extended Debye–Hückel model, in ångström.
    pub ion_size: f64,
}

/// A held value: it fixes `Σ row · x` and brings an unknown amount of itself.
#[derive(Clone, Debug, PartialEq)]
pub struct Fixed {
    pub row: Row,
    /// The value of `Σ row · x`, ln constant of the phase already taken off.
    pub ln_value: f64,
    /// As [`Species::water`]: `Σ row · x` is less by so many ln activity of water.
    pub water: f64,
    /// Where a concentration and not an activity is held: the species. Then `Σ row · x` is
    /// `ln_value` plus its ln γ.
    pub concentration_of: Option<usize>,
    /// What one mole of it brings to each component's row. Equal to `row` but for a
    /// charged species, whose charge the proton's row must not gain.
    pub supply: Row,
}

/// A solid that is there only where the solution would be supersaturated without it.
#[derive(Clone, Debug, PartialEq)]
pub struct Candidate {
    /// What it is made of; a mole of it that forms takes this away.
    pub row: Row,
    /// The value of `Σ row · x` at saturation: less the ln of its formation constant.
    pub ln_value: f64,
    /// As of [`Fixed`].
    pub water: f64,
}

impl Candidate {
    /// The solid where it is there: a held phase of unknown amount.
    pub fn held(&self) -> Fixed {
        let Candidate { row, ln_value, water } = self;
        let (row, supply) = (row.clone(), row.clone());
        Fixed { row, ln_value: *ln_value, water: *water, concentration_of: None, supply }
    }
}

#[derive(Clone, Copy, Debug, PartialEq)]
pub enum IonicStrength {
    Computed,
    /// mol per litre or kilogram.
    Given(f64),
}

/// The solved state.
#[derive(Clone, Debug, PartialEq)]
pub struct Answer {
    /// ln activity of each component; minus infinity where it is absent, or where no
    /// species that is present tells it (the electron when nothing is oxidised).
    pub ln_components: Vec<f64>,
    /// Of each species, mol per litre or kilogram.
    pub concentrations: Vec<f64>,
    pub ln_gammas: Vec<f64>,
    /// ln activity of water; zero where the model leaves it at one.
    pub ln_water: f64,
    pub ionic_strength: f64,
    /// Of each fixed phase: what it brought (positive) or took away.
    pub amounts: Vec<f64>,
    /// Worst row residual over the sum of the row's absolute terms, in the rows as given.
    pub residual: f64,
    pub iterations: u32,
}

impl Answer {
    /// −log10 of the activity of the proton, which is component 0.
    pub fn ph(&self) -> f64 {
        self.ln_components.first().map_or(f64::NAN, |ln| -ln / std::f64::consts::LN_10)
    }
}

#[derive(Clone, Debug, PartialEq)]
pub enum Failure {
    /// No state meets this component's row: proven, not merely not found.
    Infeasible {
        component: usize,
    },
    /// Two rows or held values that depend on one another.
    Dependent {
        components: Vec<usize>,
        fixed: Vec<usize>,
    },
    /// This candidate stays supersaturated however much of it forms: the held phases, by
    /// their index, make up for whatever it takes.
    Endless {
        candidate: usize,
        fixed: Vec<usize>,
    },
    NotConverged {
        residual: f64,
        iterations: u32,
    },
    Cancelled,
}
