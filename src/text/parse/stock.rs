//! What comes `of` something: an amount of a stock, and the shares of a blend.

use chumsky::prelude::*;

use super::basic::{Rule, name, sign, span_of, string, word};
use super::failure::Expect;
use super::quantity::{quantity, share, strength};
use crate::text::token::Token;
use crate::text::tree::{BlendPart, Name, Statement, Strength};

/// `of 30 % NaOH`, `of 10 mol/L HCl`, `of 30 % NaOH, density = 1.33 kg/L`
pub(super) fn of_stock<'s>() -> impl Rule<'s, (Name, Strength)> {
    let density = sign(Token::Comma, Expect::Comma)
        .ignore_then(word("density", Expect::Density))
        .ignore_then(sign(Token::Equals, Expect::Equals))
        .ignore_then(quantity());
    word("of", Expect::Of)
        .ignore_then(strength().labelled(Expect::Stock))
        .then(name(Expect::Formula))
        .then(density.or_not())
        .map(|((value, reagent), density)| (reagent, Strength { value, density }))
}

/// `blend 70 % of "river.lyate", 30 % of "well.lyate" case "winter"`
pub(super) fn blend<'s>() -> impl Rule<'s, Statement> {
    let part = share()
        .labelled(Expect::Share)
        .then_ignore(word("of", Expect::Of))
        .then(string())
        .then(word("case", Expect::Nothing).ignore_then(string()).or_not())
        .map_with(|((share, file), case), extra| {
            let span = span_of(extra.slice());
            BlendPart { share, file, case, span }
        });
    part.separated_by(sign(Token::Comma, Expect::Comma))
        .at_least(1)
        .collect()
        .map(|parts| Statement::Blend { parts })
}
