//! What a water can take up of acid or base down to a stated level, and its hardness: the
//! sums by which the trade reports a water.

use std::collections::HashMap;

use num_rational::Rational64;
use num_traits::{One, ToPrimitive};

use super::quantities::Solved;
use crate::chemistry::element::Element;
use crate::problem::model::Problem;
use crate::problem::reaction::STANDARD;
use crate::problem::scope::PROTON;
use crate::problem::sparse::{Row, coefficient};

/// The zero level of alkalinity by Dickson (1981, Deep-Sea Research 28A, 609).
const ALKALINITY_LEVEL: f64 = 4.5;
/// The phenolphthalein end point of acidity, Standard Methods for the Examination of Water
/// and Wastewater, 2310 (recalled).
const ACIDITY_LEVEL: f64 = 8.3;
/// The alkaline earths that an EDTA titration finds; Ca and Mg are nearly all of it in most
/// waters (Standard Methods 2340, recalled).
const ALKALINE_EARTHS: [&str; 4] = ["Ca", "Mg", "Sr", "Ba"];

impl Solved {
    /// Alkalinity by Dickson (1981), eq per litre or kilogram: proton acceptors formed from
    /// acids of pKa 4.5 and above (25 °C, zero ionic strength), over proton donors. The
    /// zero level of each component is the form that dominates at pH 4.5.
    pub fn alkalinity(&self, problem: &Problem) -> f64 {
        self.alkalinity_of(problem, |row| self.answer.concentrations[row])
    }

    /// The same sum over something else than concentrations, given by row.
    pub(super) fn alkalinity_of(&self, problem: &Problem, of: impl Fn(usize) -> f64) -> f64 {
        self.proton_deficit(problem, ALKALINITY_LEVEL, of)
    }

    /// Acidity, eq of strong base per litre or kilogram down to the phenolphthalein end
    /// point: proton donors over acceptors, where the zero level of each component is the
    /// form that dominates at pH 8.3. Below zero in a water past that end point, where it is
    /// the alkalinity to it, with the other sign.
    pub fn acidity(&self, problem: &Problem) -> f64 {
        self.acidity_of(problem, |row| self.answer.concentrations[row])
    }

    /// The same sum over something else than concentrations, given by row.
    pub(super) fn acidity_of(&self, problem: &Problem, of: impl Fn(usize) -> f64) -> f64 {
        -self.proton_deficit(problem, ACIDITY_LEVEL, of)
    }

    /// mol of dissolved alkaline earths per litre or kilogram, in all their forms.
    pub fn hardness(&self, problem: &Problem) -> f64 {
        self.hardness_of(problem, |row| self.answer.concentrations[row])
    }

    /// The same sum over something else than concentrations, given by row.
    pub(super) fn hardness_of(&self, problem: &Problem, of: impl Fn(usize) -> f64) -> f64 {
        let scope = &problem.scope;
        let earths: Vec<Element> =
            ALKALINE_EARTHS.iter().filter_map(|symbol| Element::from_symbol(symbol)).collect();
        scope
            .dissolved
            .iter()
            .enumerate()
            .map(|(row, &s)| {
                let count = |&element: &Element| {
                    scope.species[s].element_count(element).and_then(|n| n.to_f64())
                };
                of(row) * earths.iter().filter_map(count).sum::<f64>()
            })
            .sum()
    }

    /// The part of the hardness that the alkalinity answers for, half a mole to the
    /// equivalent: the smaller of the two, and zero in a water without alkalinity.
    pub fn carbonate_hardness(&self, problem: &Problem) -> f64 {
        self.hardness(problem).min(self.alkalinity(problem) / 2.0).max(0.0)
    }

    /// Protons that are lacking against the forms that dominate at this pH.
    fn proton_deficit(&self, problem: &Problem, ph: f64, of: impl Fn(usize) -> f64) -> f64 {
        let levels = Levels::new(problem, ph);
        self.system
            .species
            .iter()
            .enumerate()
            .map(|(row, species)| {
                let (protons, rest) = apart(&species.row);
                (levels.of(&rest) - protons) * of(row)
            })
            .sum()
    }
}

/// The protons of a row, and the row without them.
fn apart(row: &Row) -> (f64, Row) {
    let rest = row.iter().copied().filter(|&(j, _)| j != PROTON).collect();
    (coefficient(row, PROTON).to_f64().unwrap_or(0.0), rest)
}

/// How many protons the form holds that dominates at a pH, for each set of forms that differ
/// in protons alone.
struct Levels {
    /// By the row without its protons. Forms of another oxidation state are a set of their
    /// own: SO4^2- counts nothing, whatever SO3^2- counts.
    dominating: HashMap<Row, f64>,
    electron: Option<usize>,
}

impl Levels {
    fn new(problem: &Problem, ph: f64) -> Self {
        let scope = &problem.scope;
        let electron = scope.component("e-");
        let mut best: HashMap<Row, (f64, f64)> = HashMap::new();
        for (row, &s) in scope.stoichiometry.species.iter().zip(&scope.dissolved) {
            let (protons, rest) = apart(&row.row);
            let is_redox = rest.iter().any(|&(j, _)| Some(j) == electron);
            let mut others = rest.iter().filter(|&&(j, _)| Some(j) != electron);
            // A complex counts as what it is made of.
            let is_own_set = match (others.next(), others.next()) {
                (None, _) => is_redox,
                (Some((_, n)), None) => is_redox || n.is_one(),
                _ => false,
            };
            if !is_own_set {
                continue;
            }
            let log_k = |r: usize| scope.reactions[r].log_k(STANDARD).map_or(0.0, |(k, _)| k);
            let made = scope.belonging.made[s].as_ref();
            let height = made.map_or(0.0, |made| made.log_beta(log_k)) - protons * ph;
            let known = best.entry(rest).or_insert((f64::NEG_INFINITY, 0.0));
            if height > known.0 {
                *known = (height, protons);
            }
        }
        let dominating = best.into_iter().map(|(row, (_, protons))| (row, protons)).collect();
        Self { dominating, electron }
    }

    fn of(&self, row: &Row) -> f64 {
        if let Some(protons) = self.dominating.get(row) {
            return *protons;
        }
        let electrons = row.iter().find(|&&(j, _)| Some(j) == self.electron);
        // In a complex one part is oxidised or reduced, and counts so.
        let state = electrons.and_then(|&electrons| {
            row.iter().filter(|&&part| part != electrons).find_map(|&(j, _)| {
                let mut of_part = vec![(j, Rational64::one()), electrons];
                of_part.sort_by_key(|&(j, _)| j);
                Some((j, *self.dominating.get(&of_part)?))
            })
        });
        let (of_state, protons) = state.map_or((None, 0.0), |(j, n)| (Some(j), n));
        let others = row.iter().filter(|&&(j, _)| Some(j) != self.electron);
        let others = others.map(|&(j, n)| {
            let n = n.to_f64().unwrap_or(0.0) - f64::from(u8::from(Some(j) == of_state));
            n * self.dominating.get(&vec![(j, Rational64::one())]).copied().unwrap_or(0.0)
        });
        protons + others.sum::<f64>()
    }
}
