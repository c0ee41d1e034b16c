//! The implied balances of a solved problem, term by term: what each term amounts to,
//! which of them the answer rests on, and what dropping one does to the pH.

use std::sync::OnceLock;
use std::sync::atomic::AtomicBool;

use num_rational::Rational64;
use num_traits::{Signed, ToPrimitive};

use super::dominance::{self, Decides, DominanceTerm, TermWeight, dominance};
use super::quantities::Solved;
use crate::balance::charge::charge_balance;
use crate::balance::mass::mass_balance;
use crate::balance::proton::proton_condition;
use crate::balance::recipe::Recipe;
use crate::balance::written::TermOf;
use crate::balance::{Balance, BalanceKind};
use crate::problem::model::Problem;

/// The balances of a solved problem, each weighed when it is first asked for.
#[derive(Debug)]
pub struct Balances {
    recipe: Recipe,
    /// Charge, then each component's, then the protons'.
    implied: Vec<(Balance, OnceLock<Option<Weighed>>)>,
}

impl Balances {
    pub fn new(problem: &Problem, solved: &Solved) -> Balances {
        let stoichiometry = &problem.scope.stoichiometry;
        let recipe = Recipe::of(problem, Some(&solved.brought()));
        let protons = proton_condition(stoichiometry, &recipe, &[]).ok();
        let components = 1..stoichiometry.components.len();
        let implied = std::iter::once(charge_balance(stoichiometry))
            .chain(components.map(|j| mass_balance(stoichiometry, &recipe, j)))
            .chain(protons.map(|condition| condition.balance))
            .map(|balance| (balance, OnceLock::new()))
            .collect();
        Balances { recipe, implied }
    }

    /// The balance of a kind; none where states near the answer cannot be solved, or where
    /// there is no such balance.
    pub fn of(&self, kind: BalanceKind, solved: &Solved) -> Option<&Weighed> {
        let (balance, weight) = self.implied.iter().find(|(balance, _)| balance.kind == kind)?;
        weight.get_or_init(|| weighed(solved, &self.recipe, balance)).as_ref()
    }
}

#[derive(Debug)]
pub struct Weighed {
    pub kind: BalanceKind,
    pub left: Vec<WeighedTerm>,
    pub right: Vec<WeighedTerm>,
}

#[derive(Clone, Debug)]
pub struct WeighedTerm {
    pub what: TermOf,
    /// Above zero.
    pub coefficient: Rational64,
    pub weight: TermWeight,
}

impl Weighed {
    /// Left less right, mol per litre or kilogram.
    pub fn error(&self) -> f64 {
        let sum = |side: &[WeighedTerm]| side.iter().map(|term| term.weight.value).sum::<f64>();
        sum(&self.left) - sum(&self.right)
    }

    /// Whether both sides are equal but for rounding: to a billionth of all their terms.
    pub fn closes(&self) -> bool {
        let terms = self.left.iter().chain(&self.right);
        let size: f64 = terms.map(|term| term.weight.value.abs()).sum();
        self.error().abs() <= 1e-9 * size
    }
}

fn weighed(solved: &Solved, recipe: &Recipe, balance: &Balance) -> Option<Weighed> {
    let mut sides: [Vec<(TermOf, Rational64, DominanceTerm)>; 2] = Default::default();
    for &(i, coefficient) in &balance.terms {
        let side = usize::from(coefficient.is_negative());
        sides[side].push((TermOf::Species(i), coefficient.abs(), DominanceTerm::Species(i)));
    }
    for &(part, coefficient) in &balance.parts {
        let side = usize::from(!coefficient.is_negative());
        let value = recipe.value(part).unwrap_or(0.0);
        sides[side].push((
            TermOf::Constant(part),
            coefficient.abs(),
            DominanceTerm::Constant(value),
        ));
    }
    let numbers = |side: &[(TermOf, Rational64, DominanceTerm)]| -> Vec<(f64, DominanceTerm)> {
        side.iter().map(|(_, n, term)| (n.to_f64().unwrap_or(0.0), *term)).collect()
    };
    let decides = match balance.kind {
        BalanceKind::Component(j) => Decides::Component(j),
        BalanceKind::Charge | BalanceKind::Protons => Decides::Ph,
    };
    let numeric =
        dominance::Balance { decides, left: numbers(&sides[0]), right: numbers(&sides[1]) };
    let weights =
        dominance(&solved.system, &solved.answer, &numeric, &AtomicBool::new(false)).ok()?;
    let [left, right] = sides;
    let join = |side: Vec<(TermOf, Rational64, DominanceTerm)>, weights: Vec<TermWeight>| {
        side.into_iter()
            .zip(weights)
            .map(|((what, coefficient, _), weight)| WeighedTerm { what, coefficient, weight })
            .collect()
    };
    Some(Weighed {
        kind: balance.kind,
        left: join(left, weights.left),
        right: join(right, weights.right),
    })
}
