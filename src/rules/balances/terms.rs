//! The terms of a written balance in words, where they stand, and the edits that put them
//! right.

use num_rational::Rational64;
use num_traits::{One, Signed};

use crate::balance::Part;
use crate::balance::written::{Difference, Made, Side, TermOf, Verdict};
use crate::problem::model::{
    BalanceKindResolved, Problem, WrittenBalance, WrittenTerm, WrittenWhat,
};
use crate::rules::context::Context;
use crate::rules::outcome::State;
use crate::text::span::{Place, Span};

/// A written balance that is wrong, and what is wrong with it.
pub struct Wrong<'a> {
    pub balance: &'a WrittenBalance,
    pub differences: &'a [Difference],
}

/// The balances that are wrong. Where something else has to be put right first, the amounts
/// are not known well enough to judge a proton balance.
pub fn wrong<'a>(context: &Context<'a>) -> impl Iterator<Item = Wrong<'a>> {
    let blocked = is_blocked(context);
    let problem = context.problem;
    context.compared.iter().filter_map(move |compared| {
        let balance = &problem.balances[compared.balance];
        match &compared.verdict {
            Verdict::Wrong { differences, .. }
                if !(blocked && balance.kind == BalanceKindResolved::Protons) =>
            {
                Some(Wrong { balance, differences })
            }
            _ => None,
        }
    })
}

pub fn is_blocked(context: &Context) -> bool {
    matches!(context.state, State::NotWellPosed)
}

impl<'a> Wrong<'a> {
    pub fn term(&self, index: usize) -> Option<&'a WrittenTerm> {
        self.balance.left.iter().chain(&self.balance.right).nth(index)
    }

    pub fn side(&self, index: usize) -> Side {
        if index < self.balance.left.len() { Side::Left } else { Side::Right }
    }

    pub fn terms(&self, side: Side) -> &'a [WrittenTerm] {
        match side {
            Side::Left => &self.balance.left,
            Side::Right => &self.balance.right,
        }
    }

    /// From the first term of a side to its last; the equation where the side is empty.
    pub fn whole_side(&self, side: Side) -> Place {
        match self.terms(side) {
            [] => self.balance.equation,
            [first, .., last] => Place { span: first.at.span.to(last.at.span), ..first.at },
            [only] => only.at,
        }
    }

    /// An edit that adds terms to a side; none where that has no term to stand behind.
    pub fn append(&self, side: Side, terms: &[String]) -> Option<(Place, String)> {
        let last = self.terms(side).last()?;
        let sum = terms.join(" + ");
        Some(match last.what {
            // A lone zero gives way.
            WrittenWhat::Amount { value: 0.0, .. } if self.terms(side).len() == 1 => (last.at, sum),
            _ => {
                let end = last.at.span.end;
                (Place { span: Span { start: end, end }, ..last.at }, format!(" + {sum}"))
            }
        })
    }

    /// An edit that takes a term out, with the sign that joins it; none where a sign before
    /// the first term stands in the way.
    pub fn remove(&self, index: usize) -> Option<(Place, String)> {
        let side = self.side(index);
        let terms = self.terms(side);
        let at = if side == Side::Left { index } else { index - self.balance.left.len() };
        let term = terms.get(at)?;
        let cut = |span: Span| Place { span, ..term.at };
        if let Some(before) = at.checked_sub(1).and_then(|before| terms.get(before)) {
            let span = Span { start: before.at.span.end, end: term.at.span.end };
            return Some((cut(span), String::new()));
        }
        if term.coefficient.is_negative() {
            return None;
        }
        match terms.get(at + 1) {
            Some(next) => {
                let span = Span { start: term.at.span.start, end: next.at.span.start };
                let sign = if next.coefficient.is_negative() { "- " } else { "" };
                Some((cut(span), sign.to_owned()))
            }
            None => Some((term.at, "0".to_owned())),
        }
    }
}

/// `2 [SO4^2-]`, `total NH3`, `added NaOH`; none for what can only be given as a number.
pub fn term_text(problem: &Problem, term: TermOf, coefficient: Rational64) -> Option<String> {
    let what = match term {
        TermOf::Species(row) => format!("[{}]", problem.row_name(row)),
        TermOf::Constant(Part::Total(j)) => {
            format!("total {}", problem.scope.components[j].formula.name)
        }
        TermOf::Constant(Part::Added(r)) => {
            format!("added {}", problem.reagents.get(r)?.formula.name)
        }
        TermOf::Constant(Part::Precipitated(solid)) => {
            format!("precipitated {}", problem.precipitate_name(solid))
        }
        TermOf::Constant(Part::Held(_)) => return None,
    };
    Some(counted(coefficient, &what))
}

/// The term in a message, whatever it is.
pub fn term_words(problem: &Problem, term: TermOf, coefficient: Rational64) -> String {
    term_text(problem, term, coefficient).unwrap_or_else(|| match term {
        TermOf::Constant(Part::Held(k)) => {
            let what = match (problem.held.get(k), problem.excess(k)) {
                (Some(held), _) => held.words.as_str(),
                (None, Some(solid)) => problem.solid_name(solid),
                (None, None) => "what is held",
            };
            counted(coefficient, &format!("the amount that {what} brings"))
        }
        _ => "a term".to_owned(),
    })
}

fn counted(coefficient: Rational64, what: &str) -> String {
    if coefficient.is_one() { what.to_owned() } else { format!("{coefficient} {what}") }
}

/// A written term without its coefficient, as it stands in the text.
pub fn bare<'a>(context: &Context<'a>, term: &WrittenTerm) -> &'a str {
    let start = term.coefficient_at.map_or(term.at.span.start, |at| at.span.end);
    let span = Span { start, end: term.at.span.end };
    context.text(Place { span, ..term.at }).trim()
}

pub fn on(side: Side) -> &'static str {
    match side {
        Side::Left => "on the left",
        Side::Right => "on the right",
    }
}

pub fn other(side: Side) -> Side {
    match side {
        Side::Left => Side::Right,
        Side::Right => Side::Left,
    }
}

/// `the charge balance`, `the balance of NH3`.
pub fn kind_words(problem: &Problem, kind: BalanceKindResolved) -> String {
    match kind {
        BalanceKindResolved::Charge => "the charge balance".to_owned(),
        BalanceKindResolved::Protons => "the proton balance".to_owned(),
        BalanceKindResolved::Component(_) => {
            format!("the balance of `{}`", kind.words(&problem.scope))
        }
    }
}

/// `charge − NH3 + 2 SO4^2- − Na+`: balances by their names.
pub fn combination(problem: &Problem, made: &Made) -> String {
    let mut words = String::new();
    let mut add = |factor: Rational64, name: &str| {
        let sign = match (words.is_empty(), factor.is_negative()) {
            (true, true) => "−",
            (true, false) => "",
            (false, true) => " − ",
            (false, false) => " + ",
        };
        words.push_str(sign);
        words.push_str(&counted(factor.abs(), name));
    };
    add(made.charge, "charge");
    for &(j, factor) in &made.masses {
        add(factor, &problem.scope.components[j].formula.name);
    }
    words
}
