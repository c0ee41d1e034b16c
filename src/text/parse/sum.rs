//! Sums: the members of a reaction and the terms of a balance.

use chumsky::prelude::*;

use super::basic::{Lexeme, Rule, name, sign, span_of, word};
use super::failure::{Expect, Failure};
use super::quantity::{fraction, unsigned_quantity};
use crate::text::problem::SyntaxProblemKind;
use crate::text::span::{Span, Spanned};
use crate::text::token::Token;
use crate::text::tree::{Fraction, Member, Name, Term, TermKind};

/// `NH3 + 2 H+`. A sum written without spaces is taken apart, and said to be one.
pub(super) fn members<'s>() -> impl Rule<'s, Vec<Member>> {
    let member = fraction()
        .or_not()
        .labelled(Expect::Nothing)
        .then(name(Expect::Formula))
        .map_with(|(coefficient, name), extra| (coefficient, name, span_of(extra.slice())));
    let plus = sign(Token::Plus, Expect::Plus);
    member
        .map(|first| (None, first))
        .labelled(Expect::Formula)
        .then(plus.map(Some).then(member).repeated().collect::<Vec<_>>())
        .validate(|(first, more), _, emitter| {
            let mut members = Vec::with_capacity(1 + more.len());
            for (plus, (coefficient, name, span)) in std::iter::once(first).chain(more) {
                if let Some(plus) = plus
                    && let Some(failure) =
                        crowded(plus, members.last(), coefficient.as_ref(), &name)
                {
                    emitter.emit(failure);
                }
                // The plus at the end of a formula is its charge.
                let last = name.value.len().saturating_sub(1);
                let mut parts = match name.value.find('+') {
                    Some(plus) if plus < last => split(&name),
                    _ => Vec::new(),
                };
                if parts.len() < 2 {
                    members.push(Member { coefficient, name, span });
                    continue;
                }
                if let Some(first) = parts.first_mut() {
                    first.coefficient = coefficient;
                    first.span = Span { start: span.start, end: first.name.span.end };
                }
                let fixed: Vec<String> = parts
                    .iter()
                    .map(|part| joined(part.coefficient.as_ref(), &part.name))
                    .collect();
                let kind = SyntaxProblemKind::NoSpaceRoundPlus { fixed: fixed.join(" + ") };
                emitter.emit(Failure::problem(span, kind));
                members.append(&mut parts);
            }
            members
        })
}

/// A plus that stands on its own but touches what it joins.
fn crowded(
    plus: &Lexeme<'_>,
    before: Option<&Member>,
    coefficient: Option<&Spanned<Fraction>>,
    after: &Name,
) -> Option<Failure> {
    let start = coefficient.map_or(after.span, |coefficient| coefficient.span);
    let left = before.filter(|before| before.span.end == plus.start);
    let right = plus.end == start.start;
    if left.is_none() && !right {
        return None;
    }
    let mut span = plus.span();
    let mut fixed = String::new();
    if let Some(left) = left {
        span = left.name.span.to(span);
        fixed = format!("{} ", left.name.value);
    }
    fixed.push('+');
    if right {
        span = span.to(after.span);
        fixed.push(' ');
        fixed.push_str(&joined(coefficient, after));
    }
    Some(Failure::problem(span, SyntaxProblemKind::NoSpaceRoundPlus { fixed }))
}

fn joined(coefficient: Option<&Spanned<Fraction>>, name: &Name) -> String {
    match coefficient {
        Some(coefficient) => format!("{} {}", coefficient.value, name.value),
        None => name.value.clone(),
    }
}

/// The formulas of a run such as `NH3+H+` or `Fe^3++2Cl-`: one where it is no sum.
fn split(name: &Name) -> Vec<Member> {
    let text = name.value.as_str();
    let mut members = Vec::new();
    let mut start = 0;
    let push = |members: &mut Vec<Member>, from: usize, to: usize| {
        let part = &text[from..to];
        // Only a part after a plus may start with digits: they are its coefficient.
        let digits = part.find(|c: char| !c.is_ascii_digit()).unwrap_or(0);
        let base = name.span.start as usize;
        let coefficient = part[..digits].parse().ok().map(|numerator| {
            Spanned::new(
                Fraction { numerator, denominator: 1 },
                Span::new(base + from, base + from + digits),
            )
        });
        let formula =
            Spanned::new(part[digits..].to_owned(), Span::new(base + from + digits, base + to));
        members.push(Member {
            coefficient,
            name: formula,
            span: Span::new(base + from, base + to),
        });
    };
    for (offset, _) in text.match_indices('+') {
        if offset > start && starts_formula(&text[offset + 1..]) {
            push(&mut members, start, offset);
            start = offset + 1;
        }
    }
    push(&mut members, start, text.len());
    members
}

/// Digits are looked past, but only a few: a coefficient is short.
fn starts_formula(text: &str) -> bool {
    let digits = text.bytes().take(4).take_while(u8::is_ascii_digit).count();
    let mut chars = text[digits..].chars();
    match chars.next() {
        Some('(') => chars.next().is_some_and(char::is_uppercase),
        Some('e') => matches!(chars.next(), Some('-' | '−' | '⁻')),
        Some(c) => c.is_uppercase(),
        None => false,
    }
}

/// One side of a balance: `[NH4+] + 2 [SO4^2-] - total NH3`.
pub(super) fn terms<'s>() -> impl Rule<'s, Vec<Term>> {
    let species = sign(Token::LeftBracket, Expect::Species)
        .ignore_then(name(Expect::Formula))
        .then_ignore(sign(Token::RightBracket, Expect::RightBracket))
        .map(TermKind::Concentration);
    let total =
        word("total", Expect::Nothing).ignore_then(name(Expect::Formula)).map(TermKind::Total);
    let added =
        word("added", Expect::Nothing).ignore_then(name(Expect::Formula)).map(TermKind::Added);
    let precipitated = word("precipitated", Expect::Nothing)
        .ignore_then(name(Expect::Formula))
        .map(TermKind::Precipitated);
    let counted = fraction().labelled(Expect::Nothing).or_not().then(choice((
        species,
        total,
        added,
        precipitated,
    )));
    let amount = unsigned_quantity().map(|amount| (None, TermKind::Amount(amount)));
    let term = choice((counted, amount))
        .labelled(Expect::Term)
        .map_with(|(coefficient, what), extra| (coefficient, what, span_of(extra.slice())));
    let plus = sign(Token::Plus, Expect::Plus).to(false);
    let minus = sign(Token::Minus, Expect::Nothing).to(true);
    let first = minus.or_not().map(|minus| minus.unwrap_or(false)).then(term.clone());
    first.then(plus.or(minus).then(term).repeated().collect::<Vec<_>>()).map(|(first, more)| {
        std::iter::once(first)
            .chain(more)
            .map(|(negative, (coefficient, what, span))| Term { negative, coefficient, what, span })
            .collect()
    })
}
