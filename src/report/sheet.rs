//! Balances as equations with two sides: the words of each term, and its value where
//! there is an answer.

use std::sync::atomic::AtomicBool;

use num_rational::Rational64;
use num_traits::{Signed, ToPrimitive};

use crate::balance::charge::charge_balance;
use crate::balance::mass::mass_balance;
use crate::balance::proton::{ProtonCondition, proton_condition};
use crate::balance::recipe::Recipe;
use crate::balance::{Balance, BalanceKind, Part};
use crate::equilibrium::dominance::{self, Decides, DominanceTerm, dominance};
use crate::equilibrium::quantities::Solved;
use crate::problem::model::Problem;

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
    pub what: Quantity,
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

/// What a term counts.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Quantity {
    /// A row of the stoichiometry.
    Species(usize),
    Part(Part),
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
    problem: &'a Problem,
    solved: Option<&'a Solved>,
    recipe: Recipe,
}

impl<'a> Ledger<'a> {
    pub fn new(problem: &'a Problem, solved: Option<&'a Solved>) -> Ledger<'a> {
        let brought = solved.map(|solved| solved.answer.amounts.as_slice());
        Ledger { problem, solved, recipe: Recipe::of(problem, brought) }
    }

    pub fn charge(&self) -> Sheet {
        self.sheet(&charge_balance(&self.problem.scope.stoichiometry))
    }

    /// One for each component but the proton.
    pub fn masses(&self) -> Vec<Sheet> {
        let stoichiometry = &self.problem.scope.stoichiometry;
        let components = 1..stoichiometry.components.len();
        components.map(|j| self.sheet(&mass_balance(stoichiometry, j))).collect()
    }

    /// What a component's total is made of; none where it is given itself.
    pub fn sources(&self, component: usize) -> Option<Vec<Entry>> {
        let sources = self.recipe.sources(component);
        if sources.iter().any(|(part, _)| matches!(part, Part::Total(_))) {
            return None;
        }
        Some(sources.iter().map(|&(part, n)| self.entry(Quantity::Part(part), n)).collect())
    }

    /// The proton condition, at the reference level of these species where some are given;
    /// none where its coefficients do not fit 64 bits.
    pub fn protons(&self, level: &[usize]) -> Option<(Sheet, ProtonCondition)> {
        let stoichiometry = &self.problem.scope.stoichiometry;
        let condition = proton_condition(stoichiometry, &self.recipe, level).ok()?;
        Some((self.sheet(&condition.balance), condition))
    }

    fn sheet(&self, balance: &Balance) -> Sheet {
        let mut sheet = Sheet {
            kind: balance.kind,
            name: match balance.kind {
                BalanceKind::Charge => "charge".into(),
                BalanceKind::Protons => "protons".into(),
                BalanceKind::Component(j) => self.component(j).to_owned(),
            },
            left: Vec::new(),
            right: Vec::new(),
        };
        for &(row, coefficient) in &balance.terms {
            let entry = self.entry(Quantity::Species(row), coefficient.abs());
            let side = if coefficient.is_positive() { &mut sheet.left } else { &mut sheet.right };
            side.push(entry);
        }
        for &(part, coefficient) in &balance.parts {
            let entry = self.entry(Quantity::Part(part), coefficient.abs());
            let side = if coefficient.is_positive() { &mut sheet.right } else { &mut sheet.left };
            side.push(entry);
        }
        self.weigh(&mut sheet);
        sheet
    }

    /// Marks the terms that the balance rests on at the answer. Where that cannot be told,
    /// none is marked.
    fn weigh(&self, sheet: &mut Sheet) {
        let Some(solved) = self.solved else { return };
        let decides = match sheet.kind {
            BalanceKind::Charge | BalanceKind::Protons => Decides::Ph,
            BalanceKind::Component(j) => Decides::Component(j),
        };
        let terms = |side: &[Entry]| -> Option<Vec<(f64, DominanceTerm)>> {
            let term = |entry: &Entry| match entry.what {
                Quantity::Species(row) => {
                    Some((entry.coefficient.to_f64()?, DominanceTerm::Species(row)))
                }
                Quantity::Part(_) => Some((1.0, DominanceTerm::Constant(entry.value?))),
            };
            side.iter().map(term).collect()
        };
        let Some((left, right)) = terms(&sheet.left).zip(terms(&sheet.right)) else { return };
        let balance = dominance::Balance { decides, left, right };
        let never = AtomicBool::new(false);
        let Ok(weights) = dominance(&solved.system, &solved.answer, &balance, &never) else {
            return;
        };
        let entries = sheet.left.iter_mut().chain(&mut sheet.right);
        for (entry, weight) in entries.zip(weights.left.iter().chain(&weights.right)) {
            entry.dominant = weight.dominant;
            entry.ph_shift = weight.ph_shift;
        }
    }

    fn entry(&self, what: Quantity, coefficient: Rational64) -> Entry {
        let words = match what {
            Quantity::Species(row) => format!("[{}]", self.problem.row_name(row)),
            Quantity::Part(Part::Total(j)) => format!("total {}", self.component(j)),
            Quantity::Part(Part::Added(reagent)) => {
                let reagent = self.problem.reagents.get(reagent);
                format!("added {}", reagent.map_or("?", |r| r.formula.name.as_str()))
            }
            Quantity::Part(Part::Held(held)) => {
                let held = self.problem.held.get(held);
                match held.map(|held| (held.releases, held.words.as_str())) {
                    Some((Some(j), _)) => format!("total {}", self.component(j)),
                    Some((None, words)) => format!("{words} taken up"),
                    None => "?".into(),
                }
            }
        };
        let amount = match what {
            Quantity::Species(row) => {
                self.solved.and_then(|s| s.answer.concentrations.get(row).copied())
            }
            // Without an answer too, what was given is known.
            Quantity::Part(part) => self.recipe.value(part),
        };
        let value = amount.zip(coefficient.to_f64()).map(|(amount, n)| n * amount);
        Entry { what, words, coefficient, value, dominant: false, ph_shift: None }
    }

    fn component(&self, j: usize) -> &str {
        &self.problem.scope.components[j].formula.name
    }
}
