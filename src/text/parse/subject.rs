//! Quantities of the answer, and the statements that speak of them: `hold`, `expect`
//! and `without`.

use chumsky::prelude::*;

use super::basic::{Rule, name, one, sign, span_of, word};
use super::failure::{Expect, Failure};
use super::quantity::quantity;
use super::reaction::source;
use super::statement::balance_kind;
use super::stock::of_stock;
use crate::text::number::shortened;
use crate::text::problem::SyntaxProblemKind;
use crate::text::span::Spanned;
use crate::text::token::Token;
use crate::text::tree::{By, Name, Quantity, Relation, Statement, Subject, Without};

/// A quantity of the answer, as it is named.
fn subject<'s>() -> impl Rule<'s, Spanned<Subject>> {
    let single = one(Expect::Nothing, |lexeme| {
        if lexeme.token != Token::Word {
            return None;
        }
        match lexeme.text {
            "pH" => Some(Subject::Ph),
            "pOH" => Some(Subject::Poh),
            "pe" => Some(Subject::Pe),
            "potential" => Some(Subject::Potential),
            "alkalinity" => Some(Subject::Alkalinity),
            "acidity" => Some(Subject::Acidity),
            "hardness" => Some(Subject::Hardness),
            _ => None,
        }
    });
    let two = |first, second, expect, subject: Subject| {
        word(first, Expect::Subject).ignore_then(word(second, expect)).to(subject)
    };
    let of = |text, subject: fn(Name) -> Subject| {
        word(text, Expect::Subject).ignore_then(name(Expect::Formula)).map(subject)
    };
    let enclosed = |open, close, expect, subject: fn(Name) -> Subject| {
        sign(open, Expect::Subject)
            .ignore_then(name(Expect::Formula))
            .then_ignore(sign(close, expect))
            .map(subject)
    };
    let pressure = name(Expect::Subject).try_map(|name: Name, _| match not_a_gas(&name) {
        None => Ok(Subject::Pressure(name)),
        Some(failure) => Err(failure),
    });
    choice((
        single,
        enclosed(
            Token::LeftBracket,
            Token::RightBracket,
            Expect::RightBracket,
            Subject::Concentration,
        ),
        enclosed(Token::LeftBrace, Token::RightBrace, Expect::RightBrace, Subject::Activity),
        pressure,
        of("total", Subject::Total),
        of("fraction", Subject::Fraction),
        of("dose", Subject::Dose),
        of("precipitated", Subject::Precipitated),
        two("carbonate", "hardness", Expect::Hardness, Subject::CarbonateHardness),
        two("ionic", "strength", Expect::Strength, Subject::IonicStrength),
        two("buffer", "capacity", Expect::Capacity, Subject::BufferCapacity),
        two("charge", "imbalance", Expect::Imbalance, Subject::ChargeImbalance),
        word("saturation", Expect::Subject)
            .ignore_then(word("index", Expect::Index))
            .ignore_then(name(Expect::Formula))
            .map(Subject::SaturationIndex),
    ))
    .labelled(Expect::Subject)
    .map_with(|subject, extra| Spanned::new(subject, span_of(extra.slice())))
}

/// A bare formula is a partial pressure, so it must be a gas.
fn not_a_gas(name: &Name) -> Option<Failure> {
    if name.value.ends_with("(g)") {
        return None;
    }
    let found = shortened(&name.value);
    let expected =
        vec![format!("`[{found}]`"), format!("`{{{found}}}`"), "a gas such as CO2(g)".to_owned()];
    Some(Failure::problem(name.span, SyntaxProblemKind::Unexpected { found, expected }))
}

/// `hold Q = v`, `hold Q = v by NaOH`, `hold Q = v by dose of 30 % NaOH`
pub(super) fn hold<'s>() -> impl Rule<'s, Statement> {
    let total = word("total", Expect::Found).ignore_then(name(Expect::Formula)).map(By::Total);
    let dose = word("dose", Expect::Found)
        .ignore_then(of_stock())
        .map(|(reagent, strength)| By::Reagent(reagent, Some(Box::new(strength))));
    let by = word("by", Expect::Nothing)
        .ignore_then(choice((total, dose, name(Expect::Found).map(|name| By::Reagent(name, None)))))
        .map_with(|by, extra| Spanned::new(by, span_of(extra.slice())));
    subject()
        .then_ignore(sign(Token::Equals, Expect::Equals))
        .then(quantity())
        .then(by.or_not())
        .map(|((subject, value), by)| Statement::Hold { subject, value, by })
}

/// `expect Q = v ± u`, `expect Q < v`, `expect Q between a and b`
pub(super) fn expect<'s>() -> impl Rule<'s, Statement> {
    let compared = |token, relation: fn(_) -> Relation| {
        sign(token, Expect::Relation).ignore_then(quantity()).map(relation)
    };
    let between = word("between", Expect::Relation)
        .ignore_then(quantity())
        .then_ignore(word("and", Expect::And))
        .then(quantity())
        .map(|(from, to)| Relation::Between(from, to));
    let relation = choice((
        compared(Token::Equals, Relation::Equal),
        compared(Token::Less, Relation::Less),
        compared(Token::Greater, Relation::Greater),
        compared(Token::LessOrEqual, Relation::LessOrEqual),
        compared(Token::GreaterOrEqual, Relation::GreaterOrEqual),
        between,
    ));
    subject().then(relation).then(closing()).map(|((subject, relation), (confidence, source))| {
        Statement::Expect { subject, relation, confidence, source }
    })
}

#[derive(Clone)]
enum Clause {
    Confidence(Quantity),
    Source(Name),
}

/// `, confidence 95 %` and `, source "…"`, each once and in either order.
fn closing<'s>() -> impl Rule<'s, (Option<Quantity>, Option<Name>)> {
    let confidence =
        word("confidence", Expect::Confidence).ignore_then(quantity()).map(Clause::Confidence);
    let clause = confidence.or(source().map(Clause::Source));
    let clauses = sign(Token::Comma, Expect::Comma).ignore_then(clause).repeated();
    clauses.collect::<Vec<_>>().validate(|clauses, _, emitter| {
        let (mut confidence, mut source) = (None, None);
        for clause in clauses {
            let (span, clause) = match clause {
                Clause::Confidence(value) if confidence.is_none() => {
                    confidence = Some(value);
                    continue;
                }
                Clause::Source(words) if source.is_none() => {
                    source = Some(words);
                    continue;
                }
                Clause::Confidence(again) => (again.span, "confidence"),
                Clause::Source(again) => (again.span, "source"),
            };
            emitter.emit(Failure::problem(span, SyntaxProblemKind::RepeatedClause { clause }));
        }
        (confidence, source)
    })
}

/// What `without` takes away.
pub(super) fn without<'s>() -> impl Rule<'s, Spanned<Without>> {
    let named = |text, without: fn(Name) -> Without| {
        word(text, Expect::Removed).ignore_then(name(Expect::Formula)).map(without)
    };
    choice((
        word("hold", Expect::Removed)
            .ignore_then(subject())
            .map(|subject| Without::Hold(subject.value)),
        word("expect", Expect::Removed)
            .ignore_then(subject())
            .map(|subject| Without::Expect(subject.value)),
        word("balance", Expect::Removed)
            .ignore_then(balance_kind())
            .map(|kind| Without::Balance(kind.value)),
        named("total", Without::Total),
        named("add", Without::Add),
        named("precipitate", Without::Precipitate),
        word("saturate", Expect::Removed)
            .ignore_then(word("with", Expect::With))
            .ignore_then(name(Expect::Formula))
            .map(Without::Saturate),
        word("ionic", Expect::Removed)
            .ignore_then(word("strength", Expect::Strength))
            .to(Without::IonicStrength),
        word("blend", Expect::Removed).to(Without::Blend),
    ))
    .map_with(|without, extra| Spanned::new(without, span_of(extra.slice())))
}
