//! What every statement is built from: words, signs, formulas, strings.

use chumsky::prelude::*;

use super::failure::{Expect, Failure};
use crate::text::span::{Span, Spanned};
use crate::text::token::Token;
use crate::text::tree::Name;

/// A token that a parser looks at, with its text.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Lexeme<'s> {
    pub token: Token,
    pub start: u32,
    pub end: u32,
    pub text: &'s str,
}

impl Lexeme<'_> {
    pub fn span(&self) -> Span {
        Span { start: self.start, end: self.end }
    }

    /// No space between.
    pub fn touches(&self, next: &Lexeme<'_>) -> bool {
        self.end == next.start
    }

    pub fn name(&self) -> Name {
        Spanned::new(self.text.to_owned(), self.span())
    }
}

pub(super) type Tokens<'s> = &'s [Lexeme<'s>];
pub(super) type Extra = extra::Err<Failure>;

/// A parser over the tokens of one statement.
pub(super) trait Rule<'s, O>: Parser<'s, Tokens<'s>, O, Extra> + Clone {}
impl<'s, O, P: Parser<'s, Tokens<'s>, O, Extra> + Clone> Rule<'s, O> for P {}

/// The bytes that a run of tokens covers.
pub(super) fn span_of(lexemes: &[Lexeme<'_>]) -> Span {
    match (lexemes.first(), lexemes.last()) {
        (Some(first), Some(last)) => first.span().to(last.span()),
        _ => Span::default(),
    }
}

/// One token that `read` makes something of.
pub(super) fn one<'s, O, F>(expect: Expect, read: F) -> impl Rule<'s, O> + Copy
where
    F: Fn(&'s Lexeme<'s>) -> Option<O> + Copy,
{
    // Not `select_ref` with a label, which makes its error twice: most of the time of
    // reading goes into alternatives that fail.
    custom::<_, Tokens<'s>, O, Extra>(move |input| match input.peek_ref().and_then(read) {
        Some(value) => {
            input.next_ref();
            Ok(value)
        }
        None => Err(Failure::at(*input.cursor().inner(), expect)),
    })
}

pub(super) fn sign<'s>(token: Token, expect: Expect) -> impl Rule<'s, &'s Lexeme<'s>> + Copy {
    one(expect, move |lexeme| (lexeme.token == token).then_some(lexeme))
}

pub(super) fn word<'s>(text: &'static str, expect: Expect) -> impl Rule<'s, &'s Lexeme<'s>> + Copy {
    one(expect, move |lexeme| {
        (lexeme.token == Token::Word && lexeme.text == text).then_some(lexeme)
    })
}

/// Any word, or a name where one is written with a capital: the rules judge it.
pub(super) fn any_word<'s>(expect: Expect) -> impl Rule<'s, Name> + Copy {
    one(expect, move |lexeme| {
        matches!(lexeme.token, Token::Word | Token::Name).then(|| lexeme.name())
    })
}

/// A formula, the electron among them.
pub(super) fn name<'s>(expect: Expect) -> impl Rule<'s, Name> + Copy {
    one(expect, move |lexeme| {
        matches!(lexeme.token, Token::Name | Token::Electron).then(|| lexeme.name())
    })
}

/// The text between quotes; the range is that of the quotes too.
pub(super) fn string<'s>() -> impl Rule<'s, Name> + Copy {
    one(Expect::Text, move |lexeme| {
        let mut inside = lexeme.text.chars();
        inside.next();
        match lexeme.token {
            Token::String => inside.next_back().is_some(),
            Token::UnclosedString => true,
            _ => return None,
        };
        Some(Spanned::new(inside.as_str().to_owned(), lexeme.span()))
    })
}

/// A comma, or the end: looked at, not taken.
pub(super) fn clause_end<'s>() -> impl Rule<'s, ()> + Copy {
    sign(Token::Comma, Expect::Comma).ignored().or(end()).rewind()
}

/// Whatever stands before the next comma: what is left out where a clause is broken.
pub(super) fn to_comma<'s>() -> impl Rule<'s, ()> + Copy {
    one(Expect::Nothing, |lexeme| (lexeme.token != Token::Comma).then_some(())).repeated()
}
