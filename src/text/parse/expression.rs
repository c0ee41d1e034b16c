//! Expressions in T, after `log K(T) =`. How deep one may nest is counted before it is
//! parsed, so that neither the parser nor anything that walks the tree can run out of
//! stack.

use chumsky::prelude::*;
use chumsky::primitive::select_ref;

use super::basic::{Lexeme, Rule, sign, span_of, word};
use super::failure::{Expect, Failure};
use super::quantity::number;
use crate::text::problem::SyntaxProblemKind;
use crate::text::span::{Span, Spanned};
use crate::text::token::Token;
use crate::text::tree::{Expression, Operator};

/// How deep parentheses, powers and signs may nest.
pub const DEEPEST: usize = 64;
/// How many operators an expression may hold.
pub const LONGEST: usize = 256;

/// Reads an expression of `length` tokens at the start of `rest`. `before` is the range
/// of what stands before it.
pub(super) fn read(
    rest: &[Lexeme<'_>],
    length: usize,
    before: Span,
) -> Result<Spanned<Expression>, Failure> {
    let lexemes = rest.get(..length).unwrap_or(rest);
    measure(lexemes)?;
    let (expression, failures) = expression().parse(lexemes).into_output_errors();
    match (expression, failures.into_iter().next()) {
        (Some(expression), None) => Ok(Spanned::new(expression, span_of(lexemes))),
        (_, Some(failure)) => {
            let problem = failure.into_problem(rest, before);
            Err(Failure::problem(problem.span, problem.kind))
        }
        (None, None) => Err(Failure::at(0, Expect::Operand)),
    }
}

/// Counts what the parser would recurse for: open parentheses, and the powers and
/// signs that wait for their right side.
fn measure(lexemes: &[Lexeme<'_>]) -> Result<(), Failure> {
    let mut open: Vec<usize> = Vec::new();
    let mut waiting = 0;
    let mut depth = 0;
    let mut operators = 0;
    let mut after_operand = false;
    for lexeme in lexemes {
        match lexeme.token {
            Token::LeftParen => {
                open.push(waiting);
                waiting = 0;
                depth += 1;
                after_operand = false;
            }
            Token::RightParen => {
                depth -= waiting;
                if let Some(outer) = open.pop() {
                    waiting = outer;
                    depth = depth.saturating_sub(1);
                } else {
                    waiting = 0;
                }
                after_operand = true;
            }
            Token::Caret => {
                waiting += 1;
                depth += 1;
                operators += 1;
                after_operand = false;
            }
            Token::Plus | Token::Minus if !after_operand => {
                waiting += 1;
                depth += 1;
                operators += 1;
            }
            Token::Plus | Token::Minus | Token::Times | Token::Slash => {
                depth -= waiting;
                waiting = 0;
                operators += 1;
                after_operand = false;
            }
            Token::Word => after_operand = false,
            _ => after_operand = true,
        }
        if depth > DEEPEST {
            let kind = SyntaxProblemKind::NestingTooDeep { limit: DEEPEST };
            return Err(Failure::problem(lexeme.span(), kind));
        }
        if operators > LONGEST {
            let kind = SyntaxProblemKind::ExpressionTooLong { limit: LONGEST };
            return Err(Failure::problem(lexeme.span(), kind));
        }
    }
    Ok(())
}

fn expression<'s>() -> impl Rule<'s, Expression> {
    recursive(|expression| {
        let open = sign(Token::LeftParen, Expect::LeftParen);
        let close = sign(Token::RightParen, Expect::RightParen);
        let inner = open.ignore_then(expression).then_ignore(close);
        let temperature = select_ref(|lexeme: &'s Lexeme<'s>, _: &mut _| {
            (lexeme.token == Token::Temperature).then_some(Expression::T)
        });
        let log = word("log", Expect::Operand)
            .ignore_then(inner.clone())
            .map(|of| Expression::Log(Box::new(of)));
        let ln = word("ln", Expect::Operand)
            .ignore_then(inner.clone())
            .map(|of| Expression::Ln(Box::new(of)));
        let number = number().map(|number| Expression::Number(number.value));
        let operand = choice((number, temperature, log, ln, inner)).labelled(Expect::Operand);

        let binary =
            |left, (operator, right)| Expression::Binary(Box::new(left), operator, Box::new(right));
        let infix = |token, operator| sign(token, Expect::Operator).to(operator);
        let negative = sign(Token::Minus, Expect::Nothing).to(true);
        let positive = sign(Token::Plus, Expect::Nothing).to(false);
        // One value for every minus sign that stands before the operand.
        let minuses = negative.or(positive).repeated().collect::<Vec<bool>>();
        let signed = minuses.then(operand).labelled(Expect::Operand);
        let power = signed
            .separated_by(sign(Token::Caret, Expect::Operator))
            .at_least(1)
            .collect::<Vec<_>>()
            .map(power);
        let product = power.clone().foldl(
            infix(Token::Times, Operator::Multiply)
                .or(infix(Token::Slash, Operator::Divide))
                .then(power)
                .repeated(),
            binary,
        );
        product.clone().foldl(
            infix(Token::Plus, Operator::Add)
                .or(infix(Token::Minus, Operator::Subtract))
                .then(product)
                .repeated(),
            binary,
        )
    })
}

/// `a ^ -b ^ c` is `a ^ (-(b ^ c))`; a sign before a power is taken of the whole power.
fn power(operands: Vec<(Vec<bool>, Expression)>) -> Expression {
    let mut result: Option<Expression> = None;
    for (minuses, operand) in operands.into_iter().rev() {
        let mut whole = match result {
            None => operand,
            Some(exponent) => {
                Expression::Binary(Box::new(operand), Operator::Power, Box::new(exponent))
            }
        };
        for _ in minuses.into_iter().filter(|minus| *minus) {
            whole = Expression::Negative(Box::new(whole));
        }
        result = Some(whole);
    }
    result.unwrap_or(Expression::Number(0.0))
}
