//! One parser for each statement, started by its first word.

use chumsky::prelude::*;

use super::basic::{Lexeme, Rule, any_word, clause_end, name, sign, string, to_comma, word};
use super::failure::Expect;
use super::quantity::{count, quantity};
use super::reaction::reaction;
use super::stock::{blend, of_stock};
use super::subject::{expect, hold, without};
use super::sum::{members, terms};
use crate::text::problem::{MOST_PROBLEMS, SyntaxProblem};
use crate::text::span::{Span, Spanned};
use crate::text::token::Token;
use crate::text::tree::{BalanceKind, ComponentItem, Name, Over, Statement, Use};

/// The first words of all statements.
pub const KEYWORDS: [&str; 19] = [
    "problem",
    "use",
    "temperature",
    "activity",
    "ionic",
    "group",
    "component",
    "reaction",
    "total",
    "add",
    "blend",
    "hold",
    "precipitate",
    "saturate",
    "balance",
    "expect",
    "curve",
    "case",
    "without",
];

/// Reads a statement. Nothing where its first word starts none.
pub(super) fn read(lexemes: &[Lexeme<'_>], problems: &mut Vec<SyntaxProblem>) -> Option<Statement> {
    let (first, rest) = lexemes.split_first()?;
    if first.token != Token::Word {
        return None;
    }
    let run = Run { rest, start: first.span(), problems };
    Some(match first.text {
        "problem" => run.parse(string().map(|title| Statement::Problem { title })),
        "use" => run.parse(used().map(Statement::Use)),
        "temperature" => run.parse(
            quantity().labelled(Expect::Temperature).map(|value| Statement::Temperature { value }),
        ),
        "activity" => run.parse(any_word(Expect::Model).map(|model| Statement::Activity { model })),
        "ionic" => run.parse(
            word("strength", Expect::Strength)
                .ignore_then(quantity().labelled(Expect::Amount))
                .map(|value| Statement::IonicStrength { value }),
        ),
        "group" => run.parse(group()),
        "component" => run.parse(components()),
        "reaction" => run.parse(reaction()),
        "total" => run.parse(
            name(Expect::Formula)
                .then_ignore(sign(Token::Equals, Expect::Equals))
                .then(quantity().labelled(Expect::Amount))
                .map(|(component, value)| Statement::Total { component, value }),
        ),
        "add" => run.parse(add()),
        "blend" => run.parse(blend()),
        "hold" => run.parse(hold()),
        "precipitate" => {
            run.parse(name(Expect::Formula).map(|solid| Statement::Precipitate { solid }))
        }
        "saturate" => run.parse(
            word("with", Expect::With)
                .ignore_then(name(Expect::Formula))
                .map(|solid| Statement::Saturate { solid }),
        ),
        "balance" => run.parse(balance()),
        "expect" => run.parse(expect()),
        "curve" => run.parse(curve()),
        "case" => run.parse(string().map(|title| Statement::Case { title })),
        "without" => run.parse(without().map(Statement::Without)),
        _ => return None,
    })
}

/// The rest of a statement, after its first word.
struct Run<'s, 'p> {
    rest: &'s [Lexeme<'s>],
    start: Span,
    problems: &'p mut Vec<SyntaxProblem>,
}

impl<'s> Run<'s, '_> {
    fn parse(self, rule: impl Rule<'s, Statement>) -> Statement {
        let (statement, failures) = rule.parse(self.rest).into_output_errors();
        let told = failures.into_iter().take(MOST_PROBLEMS);
        self.problems.extend(told.map(|failure| failure.into_problem(self.rest, self.start)));
        statement.unwrap_or(Statement::Broken)
    }
}

fn used<'s>() -> impl Rule<'s, Use> {
    let set = any_word(Expect::Set)
        .then(count().or_not())
        .map(|(name, edition)| Use::Set { name, edition });
    let file = string().map(|path| Use::File { path });
    set.or(file.labelled(Expect::Set))
}

fn group<'s>() -> impl Rule<'s, Statement> {
    name(Expect::Symbol)
        .then(sign(Token::Equals, Expect::Equals).ignore_then(name(Expect::Formula)).or_not())
        .map(|(symbol, formula)| Statement::Group { symbol, formula })
}

/// The list of components; a broken item costs that item.
fn components<'s>() -> impl Rule<'s, Statement> {
    let item = name(Expect::Formula)
        .then(string().or_not())
        .then_ignore(clause_end())
        .map(|(name, title)| Some(ComponentItem { name, title }))
        .recover_with(via_parser(to_comma().map(|()| None)));
    item.separated_by(sign(Token::Comma, Expect::Comma)).at_least(1).collect::<Vec<_>>().map(
        |items| {
            let items: Vec<ComponentItem> = items.into_iter().flatten().collect();
            if items.is_empty() { Statement::Broken } else { Statement::Component { items } }
        },
    )
}

fn add<'s>() -> impl Rule<'s, Statement> {
    let giving = sign(Token::Comma, Expect::Comma)
        .ignore_then(word("giving", Expect::Giving))
        .ignore_then(members());
    let amount = || quantity().labelled(Expect::Amount);
    let pure =
        name(Expect::Formula).then(amount()).map(|(reagent, amount)| (reagent, amount, None));
    let stock = amount()
        .then(of_stock())
        .map(|(amount, (reagent, strength))| (reagent, amount, Some(strength)));
    pure.or(stock).then(giving.or_not()).map(|((reagent, amount, stock), giving)| Statement::Add {
        reagent,
        amount,
        stock,
        giving,
    })
}

/// `charge`, `protons` or a component.
pub(super) fn balance_kind<'s>() -> impl Rule<'s, Spanned<BalanceKind>> {
    let named = |text, kind: BalanceKind| {
        word(text, Expect::Kind)
            .map(move |lexeme: &Lexeme<'_>| Spanned::new(kind.clone(), lexeme.span()))
    };
    let component = name(Expect::Kind).map(|name: Name| {
        let span = name.span;
        Spanned::new(BalanceKind::Component(name), span)
    });
    choice((
        named("charge", BalanceKind::Charge),
        named("protons", BalanceKind::Protons),
        component,
    ))
}

fn balance<'s>() -> impl Rule<'s, Statement> {
    balance_kind().then(terms()).then(sign(Token::Equals, Expect::Equals)).then(terms()).map(
        |(((kind, left), equals), right)| Statement::Balance {
            kind,
            left,
            right,
            equals: equals.span(),
        },
    )
}

fn curve<'s>() -> impl Rule<'s, Statement> {
    let named = |text, over: Over| {
        word(text, Expect::Over)
            .map(move |lexeme: &Lexeme<'_>| Spanned::new(over.clone(), lexeme.span()))
    };
    let of = |text, over: fn(Name) -> Over| {
        word(text, Expect::Over).then(name(Expect::Formula)).map(
            move |(at, name): (&Lexeme<'_>, Name)| {
                let span = at.span().to(name.span);
                Spanned::new(over(name), span)
            },
        )
    };
    let reagent = name(Expect::Over).map(|name: Name| {
        let span = name.span;
        Spanned::new(Over::Reagent(name), span)
    });
    let over = choice((
        named("pH", Over::Ph),
        named("temperature", Over::Temperature),
        of("total", Over::Total),
        of("dose", Over::Reagent),
        word("blend", Expect::Over).then(string()).map(|(at, file): (&Lexeme<'_>, Name)| {
            let span = at.span().to(file.span);
            Spanned::new(Over::Blend(file), span)
        }),
        reagent,
    ));
    let points = sign(Token::Comma, Expect::Comma)
        .ignore_then(count())
        .then_ignore(word("points", Expect::Points));
    word("over", Expect::OverWord)
        .ignore_then(over)
        .then_ignore(word("from", Expect::From))
        .then(quantity())
        .then_ignore(word("to", Expect::To))
        .then(quantity())
        .then(points.or_not())
        .map(|(((over, from), to), points)| Statement::Curve { over, from, to, points })
}
