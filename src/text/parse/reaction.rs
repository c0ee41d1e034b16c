//! `reaction A <=> B + C, …`: the equation and its clauses. A broken clause costs that
//! clause.

use chumsky::prelude::*;

use super::basic::{
    Extra, Lexeme, Rule, Tokens, clause_end, one, sign, span_of, string, to_comma, word,
};
use super::expression;
use super::failure::{Expect, Failure};
use super::quantity::quantity;
use super::sum::members;
use crate::text::problem::SyntaxProblemKind;
use crate::text::span::{Span, Spanned};
use crate::text::token::Token;
use crate::text::tree::{
    Constant, ConstantKind, ConstantValue, Name, Quantity, Reaction, Statement,
};

/// The words that start a clause and can be nothing else.
pub const CLAUSES: [&str; 9] =
    ["pKa", "pKsp", "pK", "log", "enthalpy", "heat", "at", "valid", "source"];

#[derive(Clone)]
enum Clause {
    Constant(Spanned<ConstantKind>, ConstantValue),
    Enthalpy(Quantity),
    HeatCapacity(Quantity),
    At(Quantity),
    Valid(Box<(Quantity, Quantity)>),
    Source(Name),
    /// Could not be read; its problem is told.
    Broken,
}

pub(super) fn reaction<'s>() -> impl Rule<'s, Statement> {
    let equation = members().then_ignore(arrow()).then(members());
    let clause = clause()
        .map_with(|clause, extra| (clause, span_of(extra.slice())))
        .then_ignore(clause_end().or(first_word().rewind().ignored()))
        .recover_with(via_parser(to_comma().map(|()| (Clause::Broken, Span::default()))));
    let clauses = separator().ignore_then(clause).repeated().collect::<Vec<_>>();
    equation
        .map_with(|(left, right), extra| (left, right, span_of(extra.slice())))
        .then(clauses)
        .validate(|((left, right, equation), clauses), _, emitter| {
            let mut reaction = Box::new(Reaction {
                left,
                right,
                equation,
                constants: Vec::new(),
                enthalpy: None,
                heat_capacity: None,
                at: None,
                valid: None,
                source: None,
            });
            for (clause, span) in clauses {
                if let Err(clause) = take(&mut reaction, clause, span) {
                    let kind = SyntaxProblemKind::RepeatedClause { clause };
                    emitter.emit(Failure::problem(span, kind));
                }
            }
            Statement::Reaction(reaction)
        })
}

/// The comma before a clause. Where it is left out before the first word of one, the
/// clause is read all the same.
fn separator<'s>() -> impl Rule<'s, ()> {
    let missing = first_word().rewind().validate(|next: &Lexeme<'_>, _, emitter| {
        emitter.emit(Failure::unexpected(next, Expect::Comma));
    });
    sign(Token::Comma, Expect::Comma).ignored().or(missing)
}

/// A word that can only start a clause.
fn first_word<'s>() -> impl Rule<'s, &'s Lexeme<'s>> + Copy {
    one(Expect::Nothing, |lexeme| {
        (lexeme.token == Token::Word && CLAUSES.contains(&lexeme.text)).then_some(lexeme)
    })
}

/// `<=>`; another arrow is read as that and said to be wrong.
fn arrow<'s>() -> impl Rule<'s, ()> {
    let wrong = sign(Token::WrongArrow, Expect::Nothing).or(sign(Token::Equals, Expect::Nothing));
    choice((
        sign(Token::Arrow, Expect::Arrow).ignored(),
        wrong.validate(|wrong, _, emitter| {
            emitter.emit(Failure::unexpected(wrong, Expect::Arrow));
        }),
    ))
}

/// Puts a clause in its place; the name of a clause that is there already.
fn take(reaction: &mut Reaction, clause: Clause, span: Span) -> Result<(), &'static str> {
    fn put<T>(place: &mut Option<T>, value: T, clause: &'static str) -> Result<(), &'static str> {
        if place.is_some() {
            return Err(clause);
        }
        *place = Some(value);
        Ok(())
    }
    match clause {
        Clause::Constant(kind, value) => {
            reaction.constants.push(Constant { kind, value, span });
            Ok(())
        }
        Clause::Enthalpy(value) => put(&mut reaction.enthalpy, value, "enthalpy"),
        Clause::HeatCapacity(value) => put(&mut reaction.heat_capacity, value, "heat capacity"),
        Clause::At(value) => put(&mut reaction.at, value, "at"),
        Clause::Valid(range) => put(&mut reaction.valid, *range, "valid"),
        Clause::Source(value) => put(&mut reaction.source, value, "source"),
        Clause::Broken => Ok(()),
    }
}

fn clause<'s>() -> impl Rule<'s, Clause> {
    let equals = sign(Token::Equals, Expect::Equals);
    let enthalpy = word("enthalpy", Expect::Clause)
        .ignore_then(equals)
        .ignore_then(quantity())
        .map(Clause::Enthalpy);
    let heat = word("heat", Expect::Clause)
        .ignore_then(word("capacity", Expect::Capacity))
        .ignore_then(equals)
        .ignore_then(quantity())
        .map(Clause::HeatCapacity);
    let at = word("at", Expect::Clause).ignore_then(quantity()).map(Clause::At);
    let valid = word("valid", Expect::Clause)
        .ignore_then(quantity())
        .then_ignore(word("to", Expect::To))
        .then(quantity())
        .map(|range| Clause::Valid(Box::new(range)));
    let source = source().map(Clause::Source);
    choice((constant(), of_temperature(), enthalpy, source, at, valid, heat))
        .labelled(Expect::Clause)
}

/// `source "…"`
pub(super) fn source<'s>() -> impl Rule<'s, Name> {
    word("source", Expect::Source).ignore_then(string())
}

fn constant<'s>() -> impl Rule<'s, Clause> {
    let single = one(Expect::Nothing, |lexeme| {
        let kind = match (lexeme.token, lexeme.text) {
            (Token::Word, "pKa") => ConstantKind::PKa,
            (Token::Word, "pKsp") => ConstantKind::PKsp,
            (Token::Word, "pK") => ConstantKind::PK,
            (Token::Name, "K") => ConstantKind::K,
            _ => return None,
        };
        Some(Spanned::new(kind, lexeme.span()))
    });
    let logarithm = one(Expect::Nothing, |lexeme| {
        let kind = match (lexeme.token, lexeme.text) {
            (Token::Name, "K") => ConstantKind::LogK,
            (Token::Word, "beta") => ConstantKind::LogBeta,
            _ => return None,
        };
        Some(Spanned::new(kind, lexeme.span()))
    });
    let log = word("log", Expect::Clause).then(logarithm.labelled(Expect::Beta)).map(
        |(log, kind): (&Lexeme<'_>, Spanned<ConstantKind>)| {
            Spanned::new(kind.value, log.span().to(kind.span))
        },
    );
    single
        .or(log)
        .then_ignore(sign(Token::Equals, Expect::Equals))
        .then(quantity())
        .map(|(kind, value)| Clause::Constant(kind, ConstantValue::Number(value)))
}

/// `log K(T) = …`
fn of_temperature<'s>() -> impl Rule<'s, Clause> {
    let named = |text: &'static str| {
        one(Expect::Nothing, move |lexeme| {
            (lexeme.token == Token::Name && lexeme.text == text).then_some(())
        })
    };
    let kind = word("log", Expect::Clause)
        .ignore_then(named("K(T)").or(named("K").ignore_then(named("(T)"))))
        .map_with(|(), extra| Spanned::new(ConstantKind::LogKOfT, span_of(extra.slice())));
    // The body with what follows it, so that a problem at its end can say what is there.
    let body = custom::<_, Tokens<'s>, _, Extra>(|input| {
        let start = input.cursor();
        let rest: Tokens<'s> = input.slice_from(&start..);
        let length = rest.iter().take_while(|lexeme| lexeme.token != Token::Comma).count();
        for _ in 0..length {
            input.skip();
        }
        Ok((rest, length))
    });
    kind.then_ignore(sign(Token::Equals, Expect::Equals)).then(body).validate(
        |(kind, (rest, length)): (Spanned<ConstantKind>, (Tokens<'s>, usize)), _, emitter| {
            match expression::read(rest, length, kind.span) {
                Ok(expression) => Clause::Constant(kind, ConstantValue::Expression(expression)),
                Err(failure) => {
                    emitter.emit(failure);
                    Clause::Broken
                }
            }
        },
    )
}
