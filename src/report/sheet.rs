//! Balances as equations with two sides: the words of each term, and its value where
//! there is an answer.

use num_rational::Rational64;
use num_traits::{Signed, ToPrimitive};

use super::balance::{kind_words, term_words};
use crate::balance::charge::charge_balance;
use crate::balance::mass::mass_balance;
use crate::balance::proton::{ProtonCondition, proton_condition};
use crate::balance::recipe::Recipe;
use crate::balance::written::TermOf;
use crate::balance::{Balance, BalanceKind, Part};
use crate::problem::model::Problem;
use crate::rules::outcome::Outcome;

/// A balance with all terms positive, each on its side.
#[derive(Clone, Debug, PartialEq)]
pub struct Sheet {
    pub kind: BalanceKind,
    /// `charge`, `protons`, or the component's name.
    pub name: String,
    pub left: Vec<Entry>,
    pub right: Vec<Entry>,
}

#[derive(Clone, Debug, PartialEq)]
pub struct Entry {
    pub what: TermOf,
    /// Without its coefficient: `[NH4+]`, `total NH3`, `added NaOH`.
    pub words: String,
    pub coefficient: Rational64,
    /// Coefficient included, mol per litre or kilogram; none without an answer.
    pub value: Option<f64>,
    /// Whether the balance at the answer rests on it.
    pub dominant: bool,
    /// How the pH would move without this term alone.
    pub ph_shift: Option<f64>,
}

impl Entry {
    /// `2 [SO4^2-]`, `added NaOH`.
    pub fn with_coefficient(&self) -> String {
        if self.coefficient == Rational64::from(1) {
            self.words.clone()
        } else {
            format!("{} {}", self.coefficient, self.words)
        }
    }
}

impl Sheet {
    /// Left less right; none where a term has no value.
    pub fn error(&self) -> Option<f64> {
        let sum = |side: &[Entry]| side.iter().map(|entry| entry.value).sum::<Option<f64>>();
        Some(sum(&self.left)? - sum(&self.right)?)
    }

    /// `[NH3] + [NH4+] = total NH3`.
    pub fn equation(&self) -> String {
        format!("{} = {}", side(&self.left), side(&self.right))
    }
}

/// A sum of terms; `0` where there is none.
pub fn side(entries: &[Entry]) -> String {
    if entries.is_empty() {
        return "0".into();
    }
    let terms: Vec<String> = entries.iter().map(Entry::with_coefficient).collect();
    terms.join(" + ")
}

/// The balances of a problem.
pub struct Ledger<'a> {
    outcome: &'a Outcome,
    problem: &'a Problem,
    recipe: Recipe,
}

impl<'a> Ledger<'a> {
    pub fn new(outcome: &'a Outcome) -> Ledger<'a> {
        let problem = &outcome.problem;
        let brought = outcome.solved().map(|solved| solved.brought());
        Ledger { outcome, problem, recipe: Recipe::of(problem, brought.as_deref()) }
    }

    pub fn charge(&self) -> Sheet {
        let mut sheet = self.sheet(&charge_balance(&self.problem.scope.stoichiometry));
        self.weigh(&mut sheet);
        sheet
    }

    /// One for each component but the proton.
    pub fn masses(&self) -> Vec<Sheet> {
        let stoichiometry = &self.problem.scope.stoichiometry;
        let components = 1..stoichiometry.components.len();
        let mut sheets: Vec<Sheet> =
            components.map(|j| self.sheet(&mass_balance(stoichiometry, &self.recipe, j))).collect();
        sheets.iter_mut().for_each(|sheet| self.weigh(sheet));
        sheets
    }

    /// What a component's total is made of; none where it is given itself.
    pub fn sources(&self, component: usize) -> Option<Vec<Entry>> {
        let sources = self.recipe.sources(component);
        if sources.iter().any(|(part, _)| matches!(part, Part::Total(_))) {
            return None;
        }
        Some(sources.iter().map(|&(part, n)| self.entry(TermOf::Constant(part), n)).collect())
    }

    /// The proton condition; none where its coefficients do not fit 64 bits.
    pub fn protons(&self) -> Option<(Sheet, ProtonCondition)> {
        let condition = self.condition(&[])?;
        let mut sheet = self.sheet(&condition.balance);
        self.weigh(&mut sheet);
        Some((sheet, condition))
    }

    /// The proton condition at the reference level of these species.
    pub fn protons_at(&self, level: &[usize]) -> Option<Sheet> {
        Some(self.sheet(&self.condition(level)?.balance))
    }

    fn condition(&self, level: &[usize]) -> Option<ProtonCondition> {
        proton_condition(&self.problem.scope.stoichiometry, &self.recipe, level).ok()
    }

    fn sheet(&self, balance: &Balance) -> Sheet {
        let mut sheet = Sheet {
            kind: balance.kind,
            name: kind_words(self.problem, balance.kind),
            left: Vec::new(),
            right: Vec::new(),
        };
        for &(row, coefficient) in &balance.terms {
            let entry = self.entry(TermOf::Species(row), coefficient.abs());
            let side = if coefficient.is_positive() { &mut sheet.left } else { &mut sheet.right };
            side.push(entry);
        }
        for &(part, coefficient) in &balance.parts {
            let entry = self.entry(TermOf::Constant(part), coefficient.abs());
            let side = if coefficient.is_positive() { &mut sheet.right } else { &mut sheet.left };
            side.push(entry);
        }
        sheet
    }

    /// Marks the terms that the balance rests on at the answer. Where that cannot be told,
    /// none is marked.
    fn weigh(&self, sheet: &mut Sheet) {
        let Some(weighed) = self.outcome.balance(sheet.kind) else { return };
        for (side, weights) in
            [(&mut sheet.left, &weighed.left), (&mut sheet.right, &weighed.right)]
        {
            for entry in side {
                if let Some(term) = weights.iter().find(|term| term.what == entry.what) {
                    entry.dominant = term.weight.dominant;
                    entry.ph_shift = term.weight.ph_shift;
                }
            }
        }
    }

    fn entry(&self, what: TermOf, coefficient: Rational64) -> Entry {
        let solved = self.outcome.solved();
        let amount = match what {
            TermOf::Species(row) => solved.and_then(|s| s.answer.concentrations.get(row).copied()),
            // Without an answer too, what was given is known.
            TermOf::Constant(part) => self.recipe.value(part),
        };
        Entry {
            what,
            words: term_words(self.problem, what, Rational64::from(1)),
            coefficient,
            value: amount.zip(coefficient.to_f64()).map(|(amount, n)| n * amount),
            dominant: false,
            ph_shift: None,
        }
    }
}
