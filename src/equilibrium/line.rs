//! The line of states that meet every equation but one, and where on it a balance closes
//! that leaves a term out.

use std::sync::atomic::AtomicBool;

use num_rational::Rational64;

use super::dominance::{Decides, DominanceTerm, FIRST_ORDER, sum_without, value};
use super::root::{Mark, narrow};
use super::sensitivity::{Response, Sensitivity};
use super::solve::solve;
use super::system::{Answer, Failure, Fixed, System};

/// The pH between which a reduced balance is looked at.
const PH_RANGE: (f64, f64) = (-3.0, 18.0);
/// A component is made this much scarcer or more plentiful, in ln.
const LN_MASS: f64 = 14.0;
const LN_10: f64 = std::f64::consts::LN_10;

pub(super) struct Line<'a> {
    answer: &'a Answer,
    cancel: &'a AtomicBool,
    /// The system without the equation: the pH held last, or the given totals.
    system: System,
    way: Way,
    /// States already found, by their place on the line.
    known: Vec<(f64, Answer)>,
}

/// What changes along the line.
enum Way {
    /// The place is the pH less the answer's.
    Ph,
    /// The place is the ln of the component's total over the given one; its charge is
    /// carried by nothing else.
    Total { component: usize, charge: f64, given: f64, proton: f64, response: Response },
}

impl<'a> Line<'a> {
    /// None where the equation is not there to be left out: the pH held, the component
    /// absent or brought by a held phase.
    pub fn new(
        system: &System,
        answer: &'a Answer,
        decides: Decides,
        cancel: &'a AtomicBool,
    ) -> Option<Self> {
        let mut system = system.clone();
        let way = match decides {
            Decides::Ph => {
                let row = vec![(0, Rational64::from_integer(1))];
                if system.fixed.iter().any(|f| f.row.len() == 1 && f.row[0].0 == 0) {
                    return None;
                }
                let supply = row.clone();
                system.fixed.push(Fixed {
                    row,
                    ln_value: 0.0,
                    water: 0.0,
                    concentration_of: None,
                    supply,
                });
                Way::Ph
            }
            Decides::Component(component) => {
                let given = *system.totals.get(component)?;
                let supplied =
                    system.fixed.iter().any(|f| f.supply.iter().any(|e| e.0 == component));
                if given <= 0.0 || component == 0 || supplied {
                    return None;
                }
                let alone = vec![(component, Rational64::from_integer(1))];
                let free = system.species.iter().find(|s| s.row == alone)?;
                let charge = f64::from(free.charge);
                let sensitivity = Sensitivity::new(&system, answer)?;
                let mut response = sensitivity.by_total(component)?;
                let proton = sensitivity.by_total(0)?;
                // By the ln of the total, its charge balanced by the other ions.
                let both = |own: &mut Vec<f64>, proton: &[f64]| {
                    for (own, proton) in own.iter_mut().zip(proton) {
                        *own = given * (*own - charge * proton);
                    }
                };
                both(&mut response.ln_components, &proton.ln_components);
                both(&mut response.ln_concentrations, &proton.ln_concentrations);
                let proton = system.totals[0];
                Way::Total { component, charge, given, proton, response }
            }
        };
        Some(Self { answer, cancel, system, way, known: Vec::new() })
    }

    fn ph(answer: &Answer) -> f64 {
        -answer.ln_components[0] / LN_10
    }

    /// The state at a place.
    fn state(&mut self, place: f64) -> Result<&Answer, Failure> {
        if let Some(found) = self.known.iter().position(|k| k.0 == place) {
            return Ok(&self.known[found].1);
        }
        match &self.way {
            Way::Ph => {
                let ph = Self::ph(self.answer) + place;
                if let Some(held) = self.system.fixed.last_mut() {
                    held.ln_value = -ph * LN_10;
                }
            }
            Way::Total { component, charge, given, proton, .. } => {
                let total = given * place.exp();
                self.system.totals[*component] = total;
                self.system.totals[0] = proton - charge * (total - given);
            }
        }
        let nearest =
            self.known.iter().min_by(|a, b| (a.0 - place).abs().total_cmp(&(b.0 - place).abs()));
        let nearest = match nearest {
            Some((at, answer)) if (at - place).abs() < place.abs() => answer,
            _ => self.answer,
        };
        let state = solve(&self.system, Some(nearest), self.cancel)?;
        self.known.push((place, state));
        Ok(&self.known[self.known.len() - 1].1)
    }

    /// The terms at a place.
    pub fn terms_at(
        &mut self,
        place: f64,
        terms: &[(f64, DominanceTerm)],
    ) -> Result<Vec<f64>, Failure> {
        let state = self.state(place)?;
        Ok(terms.iter().map(|t| value(t, state)).collect())
    }

    /// The shift of the pH when the balance closes without term `t`. `slope` is the
    /// change of the whole balance along the line, its sign the way to look first.
    pub fn shift_without(
        &mut self,
        t: usize,
        terms: &[(f64, DominanceTerm)],
        values: &[f64],
        slope: f64,
    ) -> Result<Option<f64>, Failure> {
        let towards = (values[t] * slope).signum();
        for direction in [towards, -towards] {
            let place = match self.close_without(t, terms, values, direction) {
                Ok(Some(place)) => place,
                Err(Failure::Cancelled) => return Err(Failure::Cancelled),
                // A state too far off to exist closes nothing.
                Ok(None) | Err(_) => continue,
            };
            let ph = Self::ph(self.state(place)?);
            return Ok(Some(ph - Self::ph(self.answer)));
        }
        Ok(None)
    }

    /// Where the balance closes without term `t`, looking in one direction by growing
    /// steps.
    fn close_without(
        &mut self,
        t: usize,
        terms: &[(f64, DominanceTerm)],
        values: &[f64],
        direction: f64,
    ) -> Result<Option<f64>, Failure> {
        let (step, furthest, width) = match self.way {
            Way::Ph => {
                let ph = Self::ph(self.answer);
                let edge = if direction > 0.0 { PH_RANGE.1 - ph } else { ph - PH_RANGE.0 };
                (0.02, edge, 1e-7)
            }
            Way::Total { .. } => (0.05, LN_MASS, 1e-7),
        };
        let mut before: Mark = (0.0, sum_without(values, t));
        let mut distance = step;
        while distance < 2.0 * furthest {
            let place = direction * distance.min(furthest);
            let here: Mark = (place, sum_without(&self.terms_at(place, terms)?, t));
            if here.1 == 0.0 {
                return Ok(Some(place));
            }
            if here.1.signum() != before.1.signum() && before.1 != 0.0 {
                let sum = |place| Ok(sum_without(&self.terms_at(place, terms)?, t));
                return narrow(sum, before, here, width).map(Some);
            }
            before = here;
            distance *= 2.0;
        }
        Ok(None)
    }

    /// The shift of the pH without term `t` of a mass balance.
    pub fn shift_without_mass(
        &mut self,
        t: usize,
        terms: &[(f64, DominanceTerm)],
        values: &[f64],
    ) -> Result<Option<f64>, Failure> {
        let Way::Total { response, .. } = &self.way else {
            return Ok(None);
        };
        let slopes: Vec<f64> = terms
            .iter()
            .zip(values)
            .map(|(term, value)| match term.1 {
                DominanceTerm::Species(i) => value * response.ln_concentrations[i],
                DominanceTerm::Constant(_) => 0.0,
            })
            .collect();
        let slope = slopes.iter().sum::<f64>();
        let place = values[t] / sum_without(&slopes, t);
        let shift = response.ph() * place;
        // The state is far from straight in ln total, so that only a small step counts.
        if shift.abs() <= FIRST_ORDER && place.abs() <= 0.1 {
            return Ok(Some(shift));
        }
        self.shift_without(t, terms, values, slope)
    }
}
