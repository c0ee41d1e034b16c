//! Balances as written by hand, with each term resolved.

use num_rational::Rational64;

use super::case::CaseResolver;
use super::defect::{DefectKind, Expected};
use super::effective::Written;
use super::model::{
    BalanceKindResolved, Presence, Problem, WrittenBalance, WrittenTerm, WrittenWhat,
};
use super::resolve::small_fraction;
use crate::chemistry::formula::canonical;
use crate::text::tree::{BalanceKind, Statement, Term, TermKind, Without};

pub fn read(case: &mut CaseResolver, problem: &Problem) -> Vec<WrittenBalance> {
    let mut balances = Vec::new();
    for written in case.statements {
        let Statement::Balance { kind, left, right, .. } = written.statement() else { continue };
        let resolved = match &kind.value {
            BalanceKind::Charge => BalanceKindResolved::Charge,
            BalanceKind::Protons => BalanceKindResolved::Protons,
            BalanceKind::Component(name) => match case.component(written, name) {
                Some(j) => BalanceKindResolved::Component(j),
                None => continue,
            },
        };
        let mut side = |terms: &[Term]| -> Vec<Option<WrittenTerm>> {
            terms.iter().map(|term| self::term(case, problem, written, term)).collect()
        };
        let (left_terms, right_terms) = (side(left), side(right));
        let complete = left_terms.iter().chain(&right_terms).all(Option::is_some)
            && written.parsed.is_read_whole();
        let terms = || left.iter().chain(right);
        let equation = match (terms().next(), terms().last()) {
            (Some(first), Some(last)) => first.span.to(last.span),
            _ => kind.span,
        };
        balances.push(WrittenBalance {
            kind: resolved,
            at: written.place(kind.span),
            equation: written.place(equation),
            left: left_terms.into_iter().flatten().collect(),
            right: right_terms.into_iter().flatten().collect(),
            complete,
        });
    }
    balances
}

fn is_taken_out(case: &CaseResolver, reagent: &str) -> bool {
    case.statements.iter().any(|written| match written.statement() {
        Statement::Without(without) => {
            matches!(&without.value, Without::Add(name) if canonical(name) == reagent)
        }
        _ => false,
    })
}

fn is_let_go(case: &CaseResolver, solid: &str) -> bool {
    case.statements.iter().any(|written| match written.statement() {
        Statement::Without(without) => {
            matches!(&without.value, Without::Precipitate(name) if canonical(name) == solid)
        }
        _ => false,
    })
}

fn term(
    case: &mut CaseResolver,
    problem: &Problem,
    written: &Written,
    term: &Term,
) -> Option<WrittenTerm> {
    let mut coefficient = Rational64::from_integer(1);
    if let Some(fraction) = &term.coefficient {
        match small_fraction(fraction.value) {
            Some(value) => coefficient = value,
            None => {
                let why = "a coefficient lies between 1/1000 and 1000";
                let at = written.place(fraction.span);
                case.resolver.report(at, DefectKind::ImpossibleValue { why });
                return None;
            }
        }
    }
    if term.negative {
        coefficient = -coefficient;
    }
    let what = match &term.what {
        TermKind::Concentration(name) => {
            let species = case.species(written, name)?;
            match case.scope.row_of(species) {
                Some(row) => WrittenWhat::Species(row),
                None => {
                    let kind = DefectKind::WrongPhase {
                        name: case.scope.species[species].name.clone(),
                        needs: "a dissolved species",
                    };
                    case.resolver.report(written.place(name.span), kind);
                    return None;
                }
            }
        }
        TermKind::Total(name) => WrittenWhat::Total(case.component(written, name)?),
        TermKind::Added(name) => {
            let formula = case.resolver.formula(written, name)?;
            let known = problem.reagents.iter().position(|r| r.formula.name == formula.name);
            match known {
                Some(reagent) => WrittenWhat::Added(reagent),
                // Taken out by this case: none of it is added.
                None if is_taken_out(case, &formula.name) => {
                    WrittenWhat::Amount { value: 0.0, half_digit: 0.0 }
                }
                None => {
                    let kind = DefectKind::NotAdded { name: formula.name.clone() };
                    case.resolver.report(written.place(name.span), kind);
                    return None;
                }
            }
        }
        TermKind::Precipitated(name) => {
            let species = case.species(written, name)?;
            let known =
                problem.solids_that_are(Presence::Forms).position(|solid| solid.species == species);
            match known {
                Some(candidate) => WrittenWhat::Precipitated(candidate),
                // Taken out by this case: none of it forms.
                None if is_let_go(case, &case.scope.species[species].name) => {
                    WrittenWhat::Amount { value: 0.0, half_digit: 0.0 }
                }
                None => {
                    let name_text = case.scope.species[species].name.clone();
                    let kind = DefectKind::SolidNotStated { name: name_text };
                    case.resolver.report(written.place(name.span), kind);
                    return None;
                }
            }
        }
        TermKind::Amount(quantity) => {
            // Zero needs no unit: it is zero in every one.
            if quantity.number.value == 0.0 && quantity.unit.is_none() {
                WrittenWhat::Amount { value: 0.0, half_digit: 0.0 }
            } else {
                let read = case.concentration(written, quantity, None, Expected::Equivalents)?;
                case.resolver.carries_nothing(written, quantity);
                let half_digit = read.per_unit * quantity.number.half_digit;
                WrittenWhat::Amount { value: read.value, half_digit }
            }
        }
    };
    Some(WrittenTerm {
        coefficient,
        what,
        at: written.place(term.span),
        coefficient_at: term.coefficient.as_ref().map(|c| written.place(c.span)),
    })
}
