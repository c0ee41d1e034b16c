//! The end of a formula: charge, mark of a composite species and phase.

use std::sync::Arc;

use super::charge::{sign, unclear_digits, written};
use super::parse::Reader;
use super::{Atom, Formula, FormulaProblem, FormulaProblemKind as Kind, Phase};
use crate::chemistry::element::Element;

const LARGEST_CHARGE: u64 = 1_000;

impl Reader<'_> {
    /// Charge, mark and phase, in this order; then the formula.
    pub(super) fn tail(mut self) -> Result<Formula, FormulaProblem> {
        let charge_from = self.at;
        let charge = self.charge()?;
        let taken = usize::from(charge.from_count);
        let charge_range = self.range(charge_from - taken, self.at);
        self.name.truncate(self.name.len() - taken);
        let mut composite = false;
        let mut phase = Phase::Aqueous;
        if self.peek() == Some('*') {
            composite = true;
            self.at += 1;
        }
        if self.peek() == Some('(') {
            phase = self.phase(charge, composite)?;
            if self.peek() == Some('*') && !composite {
                composite = true;
                self.at += 1;
            }
        }
        if let Some(found) = self.peek() {
            let kind = Kind::UnexpectedCharacter { found };
            return self.problem(self.at, self.at + 1, kind);
        }
        let mut formula = Formula {
            name: std::mem::take(&mut self.name),
            elements: self.groups.take_apart(&self.total),
            atoms: self.total,
            charge: charge.value as i32,
            phase,
            composite,
        };
        if formula.phase == Phase::Liquid && formula.is_water() {
            formula.phase = Phase::Aqueous;
        }
        formula.name.push_str(&tail_name(charge.value, composite, &formula.phase));
        if charge.unclear {
            let kind = Kind::AmbiguousCharge { suggestion: formula.name };
            return Err(FormulaProblem { range: charge_range, kind });
        }
        Ok(formula)
    }

    fn charge(&mut self) -> Result<Charge, FormulaProblem> {
        let from = self.at;
        let clear = |value: i64| Charge { value, unclear: false, from_count: false };
        let unclear = |value: i64| Charge { value, unclear: true, from_count: false };
        let caret = self.peek() == Some('^');
        if caret {
            self.at += 1;
        }
        let before = self.charge_number()?;
        let signs_from = self.at;
        let direction = match self.peek().and_then(sign) {
            Some(direction) => i64::from(direction),
            None if caret => return self.problem(from, self.at, Kind::MissingChargeSign),
            None => return Ok(clear(0)),
        };
        while self.peek().and_then(sign) == Some(direction as i32) {
            self.at += 1;
        }
        let signs = (self.at - signs_from) as u64;
        if signs > LARGEST_CHARGE {
            return self.problem(from, self.at, Kind::NumberTooLarge);
        }
        let signed = |amount: u64| direction * amount as i64;
        if let Some(found) = self.peek().filter(|c| sign(*c).is_some()) {
            let kind = Kind::UnexpectedCharacter { found };
            return self.problem(self.at, self.at + 1, kind);
        }
        let after = self.charge_number()?;
        Ok(match (before, signs, after) {
            (Some(0), _, None) => unclear(0),
            (Some(amount), 1, None) => clear(signed(amount)),
            (None, 1, None) if caret => clear(direction),
            (None, 1, None) => match self.unclear_digits_before(signs_from) {
                Some(amount) => Charge { from_count: true, ..unclear(signed(amount)) },
                None => clear(direction),
            },
            (None, _, None) => unclear(signed(signs)),
            (None, 1, Some(amount)) => unclear(signed(amount)),
            _ => {
                let found = self.chars[signs_from].0;
                let kind = Kind::UnexpectedCharacter { found };
                return self.problem(signs_from, self.at, kind);
            }
        })
    }

    fn charge_number(&mut self) -> Result<Option<u64>, FormulaProblem> {
        let from = self.at;
        let number = self.number()?;
        if number.is_some_and(|number| number > LARGEST_CHARGE) {
            return self.problem(from, self.at, Kind::NumberTooLarge);
        }
        Ok(number)
    }

    /// The charge that the last digit before index `sign_at` may be, where that is
    /// unclear.
    fn unclear_digits_before(&self, sign_at: usize) -> Option<u64> {
        let is_digit = |(c, _): &&(char, usize)| c.is_ascii_digit();
        let digits = self.chars[..sign_at].iter().rev().take_while(is_digit).count();
        let run: String = self.chars[sign_at - digits..sign_at].iter().map(|(c, _)| *c).collect();
        let hydrogen_of_carbon = self.last == Some(Atom::Element(Element::HYDROGEN))
            && self.total.contains_key(&Atom::Element(Element::CARBON));
        let count = unclear_digits(&run, hydrogen_of_carbon)?;
        run[count..].parse().ok()
    }

    /// `(aq)`, `(s)`, `(s, calcite)`, `(g)`, `(l)`, from its opening parenthesis.
    fn phase(&mut self, charge: Charge, composite: bool) -> Result<Phase, FormulaProblem> {
        let from = self.at;
        let Some(length) = self.chars[from..].iter().position(|(c, _)| *c == ')') else {
            return self.problem(from, from + 1, Kind::UnbalancedParenthesis);
        };
        self.at += length + 1;
        let inside: String = self.chars[from + 1..self.at - 1].iter().map(|(c, _)| *c).collect();
        let (phase, form) = match inside.split_once(',') {
            Some((phase, form)) => (phase.trim(), Some(form)),
            None => (inside.trim(), None),
        };
        let form = form.map(|form| form.split_whitespace().collect::<Vec<_>>().join(" "));
        let plain = |c: char| c.is_alphanumeric() || " -'_".contains(c);
        let readable = |form: &str| !form.is_empty() && form.chars().all(plain);
        Ok(match (phase, form.as_deref()) {
            ("aq", None) => Phase::Aqueous,
            ("s", None) => Phase::Solid(None),
            ("g", None) => Phase::Gas,
            ("l", None) => Phase::Liquid,
            ("s", Some(form)) if readable(form) => Phase::Solid(Some(Arc::from(form))),
            _ => {
                let guess = match phase {
                    _ if form.is_some() => None,
                    "gas" => Some(Phase::Gas),
                    "liq" | "liquid" => Some(Phase::Liquid),
                    "solid" | "cr" | "ppt" => Some(Phase::Solid(None)),
                    "aqueous" => Some(Phase::Aqueous),
                    word if word.chars().count() > 1 && readable(word) => {
                        Some(Phase::Solid(Some(Arc::from(word))))
                    }
                    _ => None,
                };
                let suggestion = guess
                    .map(|phase| self.name.clone() + &tail_name(charge.value, composite, &phase));
                let kind = Kind::UnknownPhase { phase: inside.trim().to_owned(), suggestion };
                return self.problem(from, self.at, kind);
            }
        })
    }
}

#[derive(Clone, Copy)]
struct Charge {
    value: i64,
    /// Written so that it may be read in more ways than one.
    unclear: bool,
    /// The last digit of what was read as a count is the charge's.
    from_count: bool,
}

/// What follows the atoms in a canonical name.
fn tail_name(charge: i64, composite: bool, phase: &Phase) -> String {
    let mut name = written(charge);
    if composite {
        name.push('*');
    }
    match phase {
        Phase::Aqueous => {}
        Phase::Solid(None) => name.push_str("(s)"),
        Phase::Solid(Some(form)) => name.push_str(&format!("(s, {form})")),
        Phase::Gas => name.push_str("(g)"),
        Phase::Liquid => name.push_str("(l)"),
    }
    name
}
