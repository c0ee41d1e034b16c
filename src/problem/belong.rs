//! Which species belong to a problem: those that the reactions in scope lead to from the
//! declared components, with `H+` and `H2O`. Each gets its row over the components and
//! the combination of reactions that makes it, both exact.

use std::collections::HashMap;

use num_rational::Rational64;
use num_traits::{One, ToPrimitive, Zero};

use super::sparse::{Row, add_scaled, coefficient, scale};

/// A reaction as numbers: species by index, negative on the left.
pub struct Equation {
    pub participants: Row,
}

/// How a species is made: `log β = Σ combination_r · log K_r`, `row` over the components.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Made {
    pub row: Row,
    pub combination: Row,
}

impl Made {
    /// log10 of the formation constant from the components, by log10 K of each reaction.
    pub fn log_beta(&self, log_k: impl Fn(usize) -> f64) -> f64 {
        combined(&self.combination, log_k)
    }
}

/// `Σ combination_r · log K_r`.
pub fn combined(combination: &Row, log_k: impl Fn(usize) -> f64) -> f64 {
    combination.iter().map(|&(r, by)| by.to_f64().unwrap_or(0.0) * log_k(r)).sum()
}

#[derive(Debug, Default)]
pub struct Belonging {
    /// Of each species; none where it does not belong.
    pub made: Vec<Option<Made>>,
    /// Whether each reaction belongs.
    pub used: Vec<bool>,
    /// Reactions that tie components to one another: (reaction, what must be zero).
    pub links: Vec<(usize, Row)>,
    /// Reactions that follow from the others, with the combination of log K that must
    /// then be zero.
    pub cycles: Vec<(usize, Row)>,
}

/// Past this many reactions that hang together without a beginning, they are left unused.
const LARGEST_KNOT: usize = 500;

/// `components[j]` is the species that component `j` is; `water` has an empty row.
pub fn belonging(
    species: usize,
    components: &[usize],
    water: Option<usize>,
    equations: &[Equation],
) -> Belonging {
    let mut work = Work {
        equations,
        found: Belonging {
            made: vec![None; species],
            used: vec![false; equations.len()],
            ..Belonging::default()
        },
        done: vec![false; equations.len()],
        unknown: equations.iter().map(|e| e.participants.len()).collect(),
        of_species: vec![Vec::new(); species],
        ready: Vec::new(),
    };
    for (r, equation) in equations.iter().enumerate() {
        for &(s, _) in &equation.participants {
            work.of_species[s].push(r);
        }
    }
    if let Some(water) = water {
        work.define(water, Made::default());
    }
    for (j, &s) in components.iter().enumerate() {
        if work.found.made[s].is_none() {
            work.define(s, Made { row: vec![(j, Rational64::one())], combination: Row::new() });
        }
    }
    loop {
        work.spread();
        if !work.untie() {
            return work.found;
        }
    }
}

struct Work<'a> {
    equations: &'a [Equation],
    found: Belonging,
    done: Vec<bool>,
    /// Of each reaction, how many of its species are not made yet.
    unknown: Vec<usize>,
    of_species: Vec<Vec<usize>>,
    ready: Vec<usize>,
}

impl Work<'_> {
    fn define(&mut self, s: usize, made: Made) {
        self.found.made[s] = Some(made);
        for &r in &self.of_species[s] {
            self.unknown[r] -= 1;
            if self.unknown[r] <= 1 && !self.done[r] {
                self.ready.push(r);
            }
        }
    }

    /// Uses each reaction that has one unknown species left, or none.
    fn spread(&mut self) {
        while let Some(r) = self.ready.pop() {
            if std::mem::replace(&mut self.done[r], true) {
                continue;
            }
            let Some((rest, combination)) = self.known_part(r) else { continue };
            let open =
                self.equations[r].participants.iter().find(|(s, _)| self.found.made[*s].is_none());
            match open {
                Some(&(s, nu)) => {
                    let by = -nu.recip();
                    let made = scale(&rest, by)
                        .zip(scale(&combination, by))
                        .map(|(row, combination)| Made { row, combination });
                    if let Some(made) = made {
                        self.found.used[r] = true;
                        self.define(s, made);
                    }
                }
                None => self.close(r, rest, combination),
            }
        }
    }

    /// A reaction without unknowns ties components together or follows from the others.
    fn close(&mut self, r: usize, rest: Row, combination: Row) {
        self.found.used[r] = true;
        if rest.is_empty() {
            self.found.cycles.push((r, combination));
        } else {
            self.found.links.push((r, rest));
        }
    }

    /// Σ ν over the species that are made: their row, and their log β less log K.
    fn known_part(&self, r: usize) -> Option<(Row, Row)> {
        let mut row = Row::new();
        let mut combination = vec![(r, -Rational64::one())];
        for &(s, nu) in &self.equations[r].participants {
            if let Some(made) = &self.found.made[s] {
                row = add_scaled(&row, nu, &made.row)?;
                combination = add_scaled(&combination, nu, &made.combination)?;
            }
        }
        Some((row, combination))
    }

    /// Finds species that only several reactions together make. True where one was found.
    fn untie(&mut self) -> bool {
        let knot = self.knot();
        if knot.is_empty() || knot.len() > LARGEST_KNOT {
            return false;
        }
        let mut lines: Vec<Line> = Vec::new();
        for &r in &knot {
            let Some((row, combination)) = self.known_part(r) else { continue };
            let unknowns = self.equations[r]
                .participants
                .iter()
                .filter(|(s, _)| self.found.made[*s].is_none())
                .copied()
                .collect();
            lines.push(Line { unknowns, row, combination });
        }
        eliminate(&mut lines);
        let mut progress = false;
        for line in lines {
            if let [(s, nu)] = line.unknowns[..]
                && self.found.made[s].is_none()
            {
                let by = -nu.recip();
                if let Some((row, combination)) =
                    scale(&line.row, by).zip(scale(&line.combination, by))
                {
                    for &(r, _) in &combination {
                        self.found.used[r] = true;
                    }
                    // The reactions that made it are spent once all their species are known;
                    // counting them again would report them as cycles.
                    self.define(s, Made { row, combination });
                    progress = true;
                }
            }
        }
        for &r in &knot {
            if self.unknown[r] == 0 {
                self.done[r] = true;
            }
        }
        progress
    }

    /// The open reactions, without those that alone hold some species: such a one can only
    /// define that species, after the others are known.
    fn knot(&self) -> Vec<usize> {
        let open = |r: usize| !self.done[r];
        let mut inside: Vec<bool> = (0..self.equations.len()).map(open).collect();
        let mut holders: HashMap<usize, usize> = HashMap::new();
        for (equation, _) in self.equations.iter().zip(&inside).filter(|(_, inside)| **inside) {
            for &(s, _) in &equation.participants {
                if self.found.made[s].is_none() {
                    *holders.entry(s).or_default() += 1;
                }
            }
        }
        let mut single: Vec<usize> =
            holders.iter().filter(|&(_, &n)| n == 1).map(|(&s, _)| s).collect();
        while let Some(s) = single.pop() {
            let Some(&r) = self.of_species[s].iter().find(|&&r| inside[r]) else { continue };
            inside[r] = false;
            for &(other, _) in &self.equations[r].participants {
                if let Some(n) = holders.get_mut(&other) {
                    *n -= 1;
                    if *n == 1 {
                        single.push(other);
                    }
                }
            }
        }
        (0..self.equations.len()).filter(|&r| inside[r]).collect()
    }
}

/// One equation while unknowns are eliminated.
struct Line {
    unknowns: Row,
    row: Row,
    combination: Row,
}

/// Gauss–Jordan over the unknown species; a line whose numbers outgrow 64 bits is emptied.
fn eliminate(lines: &mut [Line]) {
    for pivot in 0..lines.len() {
        let Some(&(s, nu)) = lines[pivot].unknowns.first() else { continue };
        for other in 0..lines.len() {
            let factor = coefficient(&lines[other].unknowns, s);
            if other == pivot || factor.is_zero() {
                continue;
            }
            let by = -factor / nu;
            let (a, p) = (&lines[other], &lines[pivot]);
            let line = add_scaled(&a.unknowns, by, &p.unknowns)
                .zip(add_scaled(&a.row, by, &p.row))
                .zip(add_scaled(&a.combination, by, &p.combination))
                .map(|((unknowns, row), combination)| Line { unknowns, row, combination });
            lines[other] = line.unwrap_or(Line {
                unknowns: Row::new(),
                row: Row::new(),
                combination: Row::new(),
            });
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn equation(participants: &[(usize, i64)]) -> Equation {
        let mut row: Row =
            participants.iter().map(|&(s, n)| (s, Rational64::from_integer(n))).collect();
        row.sort();
        Equation { participants: row }
    }

    fn row(entries: &[(usize, i64)]) -> Row {
        entries.iter().map(|&(s, n)| (s, Rational64::from_integer(n))).collect()
    }

    // Species: 0 H+, 1 H2O, 2 CO3, 3 HCO3, 4 CO2, 5 OH.
    fn carbonate() -> Vec<Equation> {
        vec![
            equation(&[(4, -1), (1, -1), (0, 1), (3, 1)]),
            equation(&[(3, -1), (0, 1), (2, 1)]),
            equation(&[(1, -1), (0, 1), (5, 1)]),
        ]
    }

    #[test]
    fn a_chain_of_acids_is_followed_from_its_base() {
        let found = belonging(6, &[0, 2], Some(1), &carbonate());
        let co2 = found.made[4].as_ref().unwrap();
        assert_eq!(co2.row, row(&[(0, 2), (1, 1)]));
        assert_eq!(co2.combination, row(&[(0, -1), (1, -1)]));
        assert_eq!(found.made[5].as_ref().unwrap().row, row(&[(0, -1)]));
        assert!(found.links.is_empty() && found.cycles.is_empty());
    }

    #[test]
    fn components_that_a_reaction_ties_together_are_found() {
        let found = belonging(6, &[0, 2, 3], Some(1), &carbonate());
        assert_eq!(found.links.len(), 1);
        assert_eq!(found.links[0].0, 1);
    }

    #[test]
    fn species_that_only_two_reactions_together_make_are_found() {
        // 3 + 4 = 2 and 3 − 4 = 0: neither alone has one unknown.
        let knot =
            vec![equation(&[(3, 1), (4, 1), (2, -1)]), equation(&[(3, 1), (4, -1), (0, -1)])];
        let found = belonging(6, &[0, 2], Some(1), &knot);
        let half = Rational64::new(1, 2);
        assert_eq!(found.made[3].as_ref().unwrap().row, vec![(0, half), (1, half)]);
        assert_eq!(found.made[4].as_ref().unwrap().row, vec![(0, -half), (1, half)]);
        assert!(found.cycles.is_empty(), "{:?}", found.cycles);
    }
}
