//! What was put into a problem, as the balance room takes it.

use crate::balance::recipe::{Held, Reagent, Recipe};
use crate::equilibrium::quantities::Solved;
use crate::problem::model::{AmountSource, HeldWhat, Problem};
use crate::problem::scope::PROTON;

/// The recipe of a problem; with the answer, what it leaves open has its amount.
///
/// A held activity or concentration makes a total unknown, so it stands there as that
/// total; a held pH or pe brings no component and is left out.
pub fn recipe(problem: &Problem, solved: Option<&Solved>) -> Recipe {
    let row = |row: usize| problem.scope.belonging.made[row].as_ref().map(|made| made.row.clone());
    let held = problem.held.iter().enumerate().filter_map(|(index, held)| match held.what {
        HeldWhat::Pressure { species, .. } => Some(Held {
            brings: row(species)?,
            charge: 0,
            amount: solved.and_then(|solved| solved.answer.amounts.get(index).copied()),
        }),
        _ => None,
    });
    let totals = problem.amounts.iter().enumerate().map(|(j, amount)| match amount.source {
        AmountSource::Total => amount.total,
        AmountSource::Held(_) => solved.map(|solved| solved.total(j)),
        AmountSource::Nothing if j != PROTON && problem.held.is_empty() => amount.total,
        AmountSource::Nothing | AmountSource::Reagents => None,
    });
    Recipe {
        reagents: problem
            .reagents
            .iter()
            .map(|reagent| Reagent {
                brings: reagent.row.clone(),
                forms: reagent.forms.clone(),
                amount: reagent.amount,
            })
            .collect(),
        totals: totals.collect(),
        held: held.collect(),
    }
}

/// The names of what `recipe` lists as held, in its order.
pub fn held_names(problem: &Problem) -> Vec<&str> {
    let gases = problem.held.iter().filter(|h| matches!(h.what, HeldWhat::Pressure { .. }));
    gases.map(|held| held.words.as_str()).collect()
}
