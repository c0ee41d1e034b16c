//! How the balances of a problem follow from its species and its recipe, and what is left
//! of them at the answer.

mod json;
mod latex;
mod text;

pub use json::json;
pub use latex::latex;
pub use text::{markdown, text};

use num_rational::Rational64;

use super::figures::concentration;
use super::sheet::{Entry, Ledger, Sheet};
use super::source::Stated;
use crate::balance::proton::{self, ProtonCondition, Reason, ReferenceForm};
use crate::problem::model::{HeldWhat, Problem};

/// Other reference levels that are written out.
const ALTERNATIVES: usize = 4;

pub struct Derivation<'a> {
    pub case: Option<&'a str>,
    pub problem: &'a Problem,
    /// Of the answer, where there is one.
    pub ph: Option<f64>,
    /// Whether the pH is held, so that charge need not balance.
    pub ph_held: bool,
    pub masses: Vec<Mass>,
    pub charge: Sheet,
    /// None where its coefficients do not fit 64 bits.
    pub protons: Option<Protons>,
}

/// A component's mass balance.
pub struct Mass {
    pub component: String,
    pub sheet: Sheet,
    /// What the total is made of, coefficients of either sign; none where it is given.
    pub sources: Option<Vec<Entry>>,
}

/// The proton condition with its derivation:
/// `charge_factor · charge balance − Σ factor · mass balance`.
pub struct Protons {
    pub sheet: Sheet,
    pub charge_factor: i64,
    /// (component, factor); components without one are left out.
    pub mass_factors: Vec<(String, Rational64)>,
    pub references: Vec<Reference>,
    pub alternatives: Vec<Alternative>,
}

/// A form at the reference level, and why it is one.
pub struct Reference {
    pub form: String,
    pub charge: i32,
    pub reason: Reason,
}

/// The condition at another reference level.
pub struct Alternative {
    pub form: String,
    /// mol per litre or kilogram that were put in.
    pub amount: f64,
    pub instead_of: String,
    pub sheet: Sheet,
}

impl<'a> Derivation<'a> {
    pub fn new(stated: &Stated<'a>) -> Derivation<'a> {
        let problem = &stated.outcome.problem;
        let solved = stated.outcome.solved();
        let ledger = Ledger::new(stated.outcome);
        let masses = ledger.masses().into_iter().enumerate().map(|(index, sheet)| Mass {
            component: sheet.name.clone(),
            sheet,
            sources: ledger.sources(index + 1),
        });
        Derivation {
            case: stated.case,
            problem,
            ph: solved.map(|solved| solved.ph()),
            ph_held: problem.held.iter().any(|held| matches!(held.what, HeldWhat::Ph(_))),
            masses: masses.collect(),
            charge: ledger.charge(),
            protons: ledger
                .protons()
                .map(|(sheet, condition)| protons(problem, &ledger, sheet, &condition)),
        }
    }
}

fn protons(
    problem: &Problem,
    ledger: &Ledger,
    sheet: Sheet,
    condition: &ProtonCondition,
) -> Protons {
    let reference = |form: ReferenceForm| match form {
        ReferenceForm::Species(row) => {
            (problem.row_name(row).to_owned(), problem.scope.stoichiometry.species[row].charge)
        }
        ReferenceForm::Held(index) => match problem.held.get(index) {
            Some(held) => (held.words.clone(), charge_of(problem, held.what)),
            None => {
                let name = problem.excess(index).map(|solid| problem.solid_name(solid).to_owned());
                (name.unwrap_or_default(), 0)
            }
        },
    };
    // A held form is always a reference, so nothing else can take its place.
    let replaces = |other: &&proton::Alternative| {
        let instead_of = condition.references.get(other.instead_of);
        other.amount != 0.0
            && instead_of.is_some_and(|r| matches!(r.form, ReferenceForm::Species(_)))
    };
    let alternatives = condition.alternatives.iter().filter(replaces).take(ALTERNATIVES);
    Protons {
        sheet,
        charge_factor: condition.charge_factor,
        mass_factors: condition
            .mass_factors
            .iter()
            .map(|&(j, factor)| (problem.scope.components[j].formula.name.clone(), factor))
            .collect(),
        references: condition
            .references
            .iter()
            .map(|given| {
                let (form, charge) = reference(given.form);
                Reference { form, charge, reason: given.reason }
            })
            .collect(),
        alternatives: alternatives
            .filter_map(|other| {
                let instead_of = condition.references.get(other.instead_of)?;
                Some(Alternative {
                    form: problem.row_name(other.species).to_owned(),
                    amount: other.amount,
                    instead_of: reference(instead_of.form).0,
                    sheet: ledger.protons_at(&[other.species])?,
                })
            })
            .collect(),
    }
}

fn charge_of(problem: &Problem, what: HeldWhat) -> i32 {
    match what {
        HeldWhat::Ph(_) => 1,
        HeldWhat::Pe(_) => -1,
        HeldWhat::Pressure { species, .. }
        | HeldWhat::Activity { species, .. }
        | HeldWhat::Concentration { species, .. } => problem.scope.species[species].charge,
    }
}

impl Protons {
    /// The combination in words: `charge − NH3 + 2 SO4^2- − Na+`.
    pub fn combination(&self, minus: &str, name: impl Fn(&str) -> String) -> String {
        let mut words = match self.charge_factor {
            1 => "charge".to_owned(),
            n => format!("{n} charge"),
        };
        for (component, factor) in &self.mass_factors {
            let sign = if *factor > Rational64::default() { minus } else { "+" };
            let size = if *factor > Rational64::default() { *factor } else { -*factor };
            let size = if size == Rational64::from(1) { String::new() } else { format!("{size} ") };
            words += &format!(" {sign} {size}{}", name(component));
        }
        words
    }

    /// λ of each component: the charge of the reference level for one of it.
    pub fn lambdas(&self) -> impl Iterator<Item = (&str, Rational64)> {
        let factors = self.mass_factors.iter();
        factors.map(|(name, factor)| (name.as_str(), *factor / self.charge_factor))
    }
}

impl Reference {
    pub fn why(&self, problem: &Problem) -> String {
        match self.reason {
            Reason::Held => "held".into(),
            Reason::Chosen => "chosen".into(),
            Reason::Added(amount) => format!("put in, {}", concentration(amount, problem.scale)),
            Reason::SmallestConstant => {
                "the recipe names no form; with this one the constant is smallest".into()
            }
        }
    }
}

/// The terms that a balance rests on, where that leaves some out: left and right.
pub fn simplified(sheet: &Sheet) -> Option<(Vec<Entry>, Vec<Entry>)> {
    let kept = |side: &[Entry]| -> Vec<Entry> {
        side.iter().filter(|entry| entry.dominant).cloned().collect()
    };
    let (left, right) = (kept(&sheet.left), kept(&sheet.right));
    let all = left.len() + right.len() == sheet.left.len() + sheet.right.len();
    (!all && !left.is_empty() && !right.is_empty()).then_some((left, right))
}

/// A term's share of its side; none where it has no value or the side comes to nothing.
pub fn share(entry: &Entry, side: &[Entry]) -> Option<f64> {
    let sum: f64 = side.iter().filter_map(|entry| entry.value).map(f64::abs).sum();
    Some(entry.value?.abs() / sum).filter(|share| share.is_finite())
}
