//! The reference level where the recipe does not say it: for components that have a
//! total only, the forms that make the constant of the proton condition smallest.

use num_rational::Rational64;
use num_traits::ToPrimitive;

use super::{Reason, Reference, ReferenceForm, moiety_row};
use crate::balance::Part;
use crate::balance::recipe::{Recipe, Row};
use crate::problem::elimination::{Solution, SparseRow, TooLarge, independent_rows, solve};
use crate::problem::stoichiometry::Stoichiometry;

/// Levels looked at one by one; beyond that each component's form is bettered in turn.
const LEVELS: usize = 4096;

/// A form that a component's level may be taken at.
struct Choice {
    species: usize,
    lambda: f64,
}

/// Adds a reference form for every component that the given forms leave open.
pub(super) fn complete(
    forms: &mut Vec<(Row, i32, Reference)>,
    stoichiometry: &Stoichiometry,
    recipe: &Recipe,
) -> Result<(), TooLarge> {
    let moieties = stoichiometry.components.len().saturating_sub(1);
    let units: Vec<Row> = (0..moieties).map(|k| vec![(k, Rational64::from(1))]).collect();
    let rows: Vec<SparseRow> =
        forms.iter().map(|(row, ..)| row).chain(&units).map(Vec::as_slice).collect();
    let given = forms.len();
    let open: Vec<usize> =
        independent_rows(&rows).into_iter().filter_map(|index| index.checked_sub(given)).collect();
    let mut choices: Vec<(usize, Vec<Choice>)> = Vec::new();
    for moiety in open {
        let mut options: Vec<Choice> = Vec::new();
        let mut species: Vec<usize> = (0..stoichiometry.species.len()).collect();
        // The component itself first, so that it is taken where levels are equal.
        let own = &stoichiometry.components[moiety + 1];
        species.sort_by_key(|index| stoichiometry.species[*index].name != *own);
        for index in species {
            let described = &stoichiometry.species[index];
            if let [(column, count)] = moiety_row(&described.row).as_slice()
                && *column == moiety
                && let Some(count) = count.to_f64()
            {
                let lambda = f64::from(described.charge) / count;
                if options.iter().all(|option| option.lambda != lambda) {
                    options.push(Choice { species: index, lambda });
                }
            }
        }
        if !options.is_empty() {
            choices.push((moiety, options));
        }
    }

    let constant = Constant::of(forms, &choices, moieties, recipe)?;
    let picked = constant.smallest(&choices);
    for ((_, options), picked) in choices.iter().zip(picked) {
        let species = options[picked].species;
        let described = &stoichiometry.species[species];
        let reference =
            Reference { form: ReferenceForm::Species(species), reason: Reason::SmallestConstant };
        forms.push((moiety_row(&described.row), described.charge, reference));
    }
    Ok(())
}

/// λ of every component from the reference forms; zero where they leave it open.
pub(super) fn solve_lambdas(
    rows: &[SparseRow],
    charges: &[Rational64],
    moieties: usize,
) -> Result<Vec<Rational64>, TooLarge> {
    Ok(match solve(rows, charges, moieties)? {
        Solution::Unique(lambdas) => lambdas,
        Solution::Many { particular, .. } => particular,
        // The rows are independent, so they cannot contradict one another.
        Solution::None { .. } => vec![Rational64::default(); moieties],
    })
}

/// The constant as a function of the open components' λ: `base + Σ slope_k λ_k`.
struct Constant {
    base: f64,
    slopes: Vec<f64>,
    scale: f64,
}

impl Constant {
    fn of(
        forms: &[(Row, i32, Reference)],
        choices: &[(usize, Vec<Choice>)],
        moieties: usize,
        recipe: &Recipe,
    ) -> Result<Constant, TooLarge> {
        let units: Vec<Row> =
            choices.iter().map(|(moiety, _)| vec![(*moiety, Rational64::from(1))]).collect();
        let rows: Vec<SparseRow> =
            forms.iter().map(|(row, ..)| row).chain(&units).map(Vec::as_slice).collect();
        let mut scale = 0.0_f64;
        let mut at = |charges: &[Rational64]| -> Result<f64, TooLarge> {
            let lambdas = solve_lambdas(&rows, charges, moieties)?;
            let mut constant = 0.0;
            for (moiety, lambda) in lambdas.iter().enumerate() {
                // What a total is unknown for has no say in the choice.
                let total = recipe.value(Part::Total(moiety + 1)).unwrap_or(0.0);
                constant -= lambda.to_f64().unwrap_or(0.0) * total;
                scale = scale.max(total.abs());
            }
            Ok(constant)
        };
        let mut charges: Vec<Rational64> =
            forms.iter().map(|(_, z, _)| Rational64::from(i64::from(*z))).collect();
        charges.resize(rows.len(), Rational64::default());
        let base = at(&charges)?;
        let mut slopes = Vec::new();
        for index in forms.len()..rows.len() {
            charges[index] = Rational64::from(1);
            slopes.push(at(&charges)? - base);
            charges[index] = Rational64::default();
        }
        Ok(Constant { base, slopes, scale })
    }

    fn value(&self, choices: &[(usize, Vec<Choice>)], picked: &[usize]) -> f64 {
        let terms = self.slopes.iter().zip(choices).zip(picked);
        let sum: f64 = terms.map(|((slope, (_, options)), at)| slope * options[*at].lambda).sum();
        (self.base + sum).abs()
    }

    /// The options, one of each, with the smallest constant; the earlier where equal.
    fn smallest(&self, choices: &[(usize, Vec<Choice>)]) -> Vec<usize> {
        let mut picked = vec![0; choices.len()];
        let mut best = (self.value(choices, &picked), picked.clone());
        let better = |value: f64, than: f64| value < than - 1e-12 * self.scale;
        let levels = choices.iter().try_fold(1_usize, |n, (_, o)| n.checked_mul(o.len()));
        if levels.is_some_and(|levels| levels <= LEVELS) {
            while let Some(turn) =
                (0..picked.len()).rev().find(|i| picked[*i] + 1 < choices[*i].1.len())
            {
                picked[turn] += 1;
                picked[turn + 1..].fill(0);
                let value = self.value(choices, &picked);
                if better(value, best.0) {
                    best = (value, picked.clone());
                }
            }
            return best.1;
        }
        // Every pass that goes on betters the constant, and there are only so many.
        for _ in 0..LEVELS {
            let before = best.0;
            for place in 0..choices.len() {
                for option in 0..choices[place].1.len() {
                    let mut other = best.1.clone();
                    other[place] = option;
                    let value = self.value(choices, &other);
                    if better(value, best.0) {
                        best = (value, other);
                    }
                }
            }
            if !better(best.0, before) {
                break;
            }
        }
        best.1
    }
}
