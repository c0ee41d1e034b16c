//! Numbers, units glued from the tokens that touch, uncertainties and bases.

use chumsky::prelude::*;

use super::basic::{Extra, Lexeme, Rule, Tokens, name, one, sign, span_of, word};
use super::failure::{Expect, Failure};
use crate::text::number;
use crate::text::span::{Span, Spanned};
use crate::text::token::Token;
use crate::text::tree::{Fraction, Name, Number, Quantity, Uncertainty};

/// Words that follow a quantity and are no unit.
const RESERVED: [&str; 17] = [
    "by",
    "at",
    "as",
    "and",
    "to",
    "from",
    "of",
    "giving",
    "source",
    "valid",
    "with",
    "enthalpy",
    "heat",
    "density",
    "confidence",
    "total",
    "added",
];

/// A number without a sign.
pub(super) fn number<'s>() -> impl Rule<'s, Number> + Copy {
    one(Expect::Number, move |lexeme| {
        if lexeme.token != Token::Number {
            return None;
        }
        let (value, half_digit) = number::read(lexeme.text)?;
        Some(Number { value, half_digit, text: lexeme.text.to_owned(), span: lexeme.span() })
    })
}

fn signed_number<'s>() -> impl Rule<'s, Number> + Copy {
    let minus = sign(Token::Minus, Expect::Nothing);
    let plus = sign(Token::Plus, Expect::Nothing);
    minus.or(plus).or_not().then(number()).map(|(sign, mut number): (_, Number)| {
        if let Some(sign) = sign {
            number.span = sign.span().to(number.span);
            if sign.token == Token::Minus {
                number.value = -number.value;
            }
        }
        number
    })
}

/// A whole number or a simple fraction such as `1/2`.
pub(super) fn fraction<'s>() -> impl Rule<'s, Spanned<Fraction>> + Copy {
    whole_number()
        .then(sign(Token::Slash, Expect::Nothing).ignore_then(whole_number()).or_not())
        .map(|(numerator, denominator)| {
            let span = numerator.span.to(denominator.as_ref().map_or(numerator.span, |d| d.span));
            let denominator = denominator.map_or(1, |d| d.value);
            Spanned::new(Fraction { numerator: numerator.value, denominator }, span)
        })
}

fn whole_number<'s>() -> impl Rule<'s, Spanned<i64>> + Copy {
    one(Expect::WholeNumber, move |lexeme| {
        let value = (lexeme.token == Token::Number).then(|| lexeme.text.parse::<i64>().ok())??;
        (value > 0).then(|| Spanned::new(value, lexeme.span()))
    })
}

/// The edition of a set, or how many points a curve has.
pub(super) fn count<'s>() -> impl Rule<'s, Spanned<u32>> + Copy {
    one(Expect::WholeNumber, move |lexeme| {
        let value = (lexeme.token == Token::Number).then(|| lexeme.text.parse().ok())??;
        Some(Spanned::new(value, lexeme.span()))
    })
}

/// One thing that follows a number, in whatever order they are written.
enum Part<'s> {
    Uncertainty(Uncertainty, &'s Lexeme<'s>),
    Unit(Name, &'s Lexeme<'s>),
    Basis(Name, &'s Lexeme<'s>),
}

/// A quantity while it is read, with the first thing that is wrong with it.
struct Reading {
    quantity: Quantity,
    failure: Option<Failure>,
}

impl Reading {
    fn of(number: Number) -> Reading {
        let span = number.span;
        let quantity = Quantity { number, uncertainty: None, unit: None, basis: None, span };
        Reading { quantity, failure: None }
    }

    fn finish(self, span: Span) -> Result<Quantity, Failure> {
        match self.failure {
            None => Ok(Quantity { span, ..self.quantity }),
            Some(failure) => Err(failure),
        }
    }

    fn with(mut self, part: Part<'_>) -> Reading {
        let quantity = &mut self.quantity;
        let failure = match part {
            Part::Uncertainty(uncertainty, _) if quantity.uncertainty.is_none() => {
                quantity.uncertainty = Some(uncertainty);
                None
            }
            Part::Unit(unit, _) if quantity.unit.is_none() => {
                quantity.unit = Some(unit);
                None
            }
            // `12 mg/L ± 0.5 mg/L`
            Part::Unit(unit, _)
                if quantity.unit.as_ref().is_some_and(|u| u.value == unit.value) =>
            {
                None
            }
            Part::Basis(basis, _) if quantity.basis.is_none() => {
                quantity.basis = Some(basis);
                None
            }
            Part::Uncertainty(_, at) | Part::Unit(_, at) | Part::Basis(_, at) => {
                Some(Failure::unexpected(at, Expect::End))
            }
        };
        self.failure = self.failure.or(failure);
        self
    }
}

/// A number, which may be negative, with what belongs to it.
pub(super) fn quantity<'s>() -> impl Rule<'s, Quantity> {
    with_parts(signed_number())
}

/// The same where a sign belongs to the sum round it.
pub(super) fn unsigned_quantity<'s>() -> impl Rule<'s, Quantity> {
    with_parts(number())
}

/// A number with its unit, and nothing after it that could be a unit too: what follows is
/// a formula.
pub(super) fn strength<'s>() -> impl Rule<'s, Quantity> {
    let unit = unit(Expect::Unit).map(|(unit, at)| Part::Unit(unit, at));
    number()
        .map(Reading::of)
        .foldl(bare_uncertainty().or_not(), Reading::with)
        .then(unit)
        .map(|(reading, unit)| reading.with(unit))
        .foldl(uncertainty().or_not(), Reading::with)
        .map_with(|reading, extra| (reading, span_of(extra.slice())))
        .try_map(|(reading, span), _| reading.finish(span))
}

/// A share of a blend: a number of parts, or one in percent.
pub(super) fn share<'s>() -> impl Rule<'s, Quantity> {
    let unit = unit(Expect::Unit).map(|(unit, at)| Part::Unit(unit, at));
    signed_number()
        .map(Reading::of)
        .foldl(bare_uncertainty().or_not(), Reading::with)
        .foldl(unit.or_not(), Reading::with)
        .foldl(uncertainty().or_not(), Reading::with)
        .map_with(|reading, extra| (reading, span_of(extra.slice())))
        .try_map(|(reading, span), _| reading.finish(span))
}

/// The percent sign of `30 ± 1 % NaOH` is the unit of both.
fn bare_uncertainty<'s>() -> impl Rule<'s, Part<'s>> {
    sign(Token::PlusMinus, Expect::Nothing)
        .then(number())
        .map(|(at, number)| Part::Uncertainty(Uncertainty { number, percent: false }, at))
}

/// `± 0.02`, `± 5 %`
fn uncertainty<'s>() -> impl Rule<'s, Part<'s>> {
    sign(Token::PlusMinus, Expect::Nothing).then(number()).then(lone_percent().or_not()).map(
        |((at, number), percent)| {
            Part::Uncertainty(Uncertainty { number, percent: percent.is_some() }, at)
        },
    )
}

fn with_parts<'s>(number: impl Rule<'s, Number>) -> impl Rule<'s, Quantity> {
    let basis = word("as", Expect::Nothing)
        .then(name(Expect::Basis))
        .map(|(at, basis)| Part::Basis(basis, at));
    let unit = |expect| unit(expect).map(|(unit, at)| Part::Unit(unit, at));
    number
        .map(Reading::of)
        .foldl(uncertainty().or_not(), Reading::with)
        .foldl(unit(Expect::Unit).or_not(), Reading::with)
        .foldl(choice((uncertainty(), unit(Expect::Nothing), basis)).repeated(), Reading::with)
        .map_with(|reading, extra| (reading, span_of(extra.slice())))
        .try_map(|(reading, span), _| reading.finish(span))
}

/// The percent sign of an uncertainty, and not that of `% w/w`.
fn lone_percent<'s>() -> impl Rule<'s, ()> + Copy {
    custom::<_, Tokens<'s>, (), Extra>(|input| {
        let start = input.cursor();
        let rest = input.slice_from(&start..);
        let percent = rest.first().is_some_and(|first| first.token == Token::Percent);
        if percent && !rest.get(1).is_some_and(is_share) {
            input.skip();
            return Ok(());
        }
        Err(Failure::at(*start.inner(), Expect::Nothing))
    })
    .labelled(Expect::Percent)
}

/// A unit as written, whether or not there is one of that name.
fn unit<'s>(expect: Expect) -> impl Rule<'s, (Name, &'s Lexeme<'s>)> + Copy {
    custom::<_, Tokens<'s>, _, Extra>(|input| {
        let start = input.cursor();
        let rest: &'s [Lexeme<'s>] = input.slice_from(&start..);
        let length = unit_length(rest);
        let (Some(first), Some(parts)) = (rest.first(), rest.get(..length)) else {
            return Err(Failure::at(*start.inner(), Expect::Nothing));
        };
        if parts.is_empty() {
            return Err(Failure::at(*start.inner(), Expect::Nothing));
        }
        for _ in 0..length {
            input.skip();
        }
        let mut text = String::with_capacity(8);
        let mut last: Option<&Lexeme<'_>> = None;
        for part in parts {
            if last.is_some_and(|last| !last.touches(part)) {
                text.push(' ');
            }
            text.push_str(part.text);
            last = Some(part);
        }
        Ok((Spanned::new(text, span_of(parts)), first))
    })
    .labelled(expect)
}

/// How many tokens make the unit that `rest` starts with.
fn unit_length(rest: &[Lexeme<'_>]) -> usize {
    let Some(first) = rest.first() else { return 0 };
    if !(is_word(first) || first.token == Token::Percent) {
        return 0;
    }
    let mut length = 1;
    while let (Some(last), Some(next)) = (rest.get(length - 1), rest.get(length)) {
        let after = rest.get(length + 1);
        let joins = if last.touches(next) {
            match next.token {
                Token::Word | Token::Name | Token::Percent | Token::LeftParen => true,
                Token::RightParen | Token::Caret => true,
                Token::Slash | Token::Times | Token::Dot | Token::Minus => {
                    after.is_some_and(|after| next.touches(after) && !is_species_bracket(after))
                }
                Token::Number => {
                    !matches!(last.token, Token::Slash | Token::RightParen | Token::Times)
                }
                _ => false,
            }
        } else {
            match next.token {
                Token::Slash => after.is_some_and(is_word),
                Token::Word | Token::Name if last.token == Token::Slash => is_word(next),
                Token::Word => last.token == Token::Percent && is_share(next),
                Token::Percent => length == 1,
                _ => false,
            }
        };
        if !joins {
            break;
        }
        length += 1;
    }
    length
}

fn is_word(lexeme: &Lexeme<'_>) -> bool {
    match lexeme.token {
        Token::Word => !RESERVED.contains(&lexeme.text),
        Token::Name => true,
        _ => false,
    }
}

/// The `w` of `% w/w`, and the other shares that are written so.
fn is_share(lexeme: &Lexeme<'_>) -> bool {
    lexeme.token == Token::Word && matches!(lexeme.text, "w" | "wt" | "m" | "v" | "vol")
}

fn is_species_bracket(lexeme: &Lexeme<'_>) -> bool {
    matches!(lexeme.token, Token::LeftBracket | Token::LeftBrace)
}
