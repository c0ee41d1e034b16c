//! Expressions in T, after `log K(T) =`. They alone may nest, so they are read with a
//! stack of their own by the precedence of their operators: how deep an expression goes
//! never depends on the thread's stack.

use super::basic::{Lexeme, span_of};
use super::failure::{Expect, Failure};
use crate::text::number;
use crate::text::problem::SyntaxProblemKind;
use crate::text::span::{Span, Spanned};
use crate::text::token::Token;
use crate::text::tree::{Expression, Operator};

/// How deep parentheses may nest.
pub const DEEPEST: usize = 64;
/// How many operators an expression may hold. With `DEEPEST` this bounds how deep its
/// tree is, for all that walk it.
pub const LONGEST: usize = 256;

/// Reads an expression of `length` tokens at the start of `rest`. `before` is the range
/// of what stands before it.
pub(super) fn read(
    rest: &[Lexeme<'_>],
    length: usize,
    before: Span,
) -> Result<Spanned<Expression>, Failure> {
    let lexemes = rest.get(..length).unwrap_or(rest);
    let mut reader = Reader::default();
    let read = lexemes.iter().enumerate().try_for_each(|(at, lexeme)| reader.take(at, lexeme));
    match read.and_then(|()| reader.finish(lexemes.len())) {
        Ok(expression) => Ok(Spanned::new(expression, span_of(lexemes))),
        Err(failure) => {
            let problem = failure.into_problem(rest, before);
            Err(Failure::problem(problem.span, problem.kind))
        }
    }
}

/// What waits for its right side, or for its closing parenthesis.
#[derive(Clone, Copy)]
enum Waiting {
    Open(Function),
    Minus,
    Infix(Operator),
}

#[derive(Clone, Copy)]
enum Function {
    None,
    Log,
    Ln,
}

impl Waiting {
    /// How tightly it holds the operand on its right. A sign before a power is taken
    /// of the whole power, and before a product of its first factor.
    fn precedence(self) -> u8 {
        match self {
            Waiting::Open(_) => 0,
            Waiting::Infix(Operator::Add | Operator::Subtract) => 1,
            Waiting::Infix(Operator::Multiply | Operator::Divide) => 2,
            Waiting::Minus => 3,
            Waiting::Infix(Operator::Power) => 4,
        }
    }
}

/// What may come next.
#[derive(Clone, Copy, Default)]
enum Next {
    #[default]
    Operand,
    /// The parenthesis of a function.
    Open(Function),
    Operator,
}

#[derive(Default)]
struct Reader {
    operands: Vec<Expression>,
    waiting: Vec<Waiting>,
    next: Next,
    open: usize,
    operators: usize,
}

impl Reader {
    fn take(&mut self, at: usize, lexeme: &Lexeme<'_>) -> Result<(), Failure> {
        match self.next {
            Next::Operand => self.operand(at, lexeme),
            Next::Open(function) if lexeme.token == Token::LeftParen => self.open(function, lexeme),
            Next::Open(_) => Err(Failure::at(at, Expect::LeftParen)),
            Next::Operator => self.operator(at, lexeme),
        }
    }

    fn operand(&mut self, at: usize, lexeme: &Lexeme<'_>) -> Result<(), Failure> {
        let operand = match (lexeme.token, lexeme.text) {
            (Token::Number, text) => number::read(text).map(|(value, _)| Expression::Number(value)),
            (Token::Temperature, _) => Some(Expression::T),
            (Token::LeftParen, _) => return self.open(Function::None, lexeme),
            (Token::Plus, _) => return self.count(lexeme),
            (Token::Minus, _) => {
                self.waiting.push(Waiting::Minus);
                return self.count(lexeme);
            }
            (Token::Word, "log") => {
                self.next = Next::Open(Function::Log);
                return Ok(());
            }
            (Token::Word, "ln") => {
                self.next = Next::Open(Function::Ln);
                return Ok(());
            }
            _ => None,
        };
        self.operands.push(operand.ok_or_else(|| Failure::at(at, Expect::Operand))?);
        self.next = Next::Operator;
        Ok(())
    }

    fn open(&mut self, function: Function, lexeme: &Lexeme<'_>) -> Result<(), Failure> {
        self.waiting.push(Waiting::Open(function));
        self.next = Next::Operand;
        self.open += 1;
        if self.open > DEEPEST {
            let kind = SyntaxProblemKind::NestingTooDeep { limit: DEEPEST };
            return Err(Failure::problem(lexeme.span(), kind));
        }
        Ok(())
    }

    fn operator(&mut self, at: usize, lexeme: &Lexeme<'_>) -> Result<(), Failure> {
        let operator = match lexeme.token {
            Token::Plus => Operator::Add,
            Token::Minus => Operator::Subtract,
            Token::Times => Operator::Multiply,
            Token::Slash => Operator::Divide,
            Token::Caret => Operator::Power,
            Token::RightParen if self.open > 0 => {
                self.close();
                return Ok(());
            }
            _ => return Err(self.expects_operator(at)),
        };
        let waiting = Waiting::Infix(operator);
        match operator {
            // From the right: `a^b^c` is `a^(b^c)`.
            Operator::Power => {}
            _ => self.reduce(waiting.precedence()),
        }
        self.waiting.push(waiting);
        self.next = Next::Operand;
        self.count(lexeme)
    }

    fn expects_operator(&self, at: usize) -> Failure {
        let failure = Failure::at(at, Expect::Operator);
        if self.open > 0 { failure.or(Expect::RightParen) } else { failure }
    }

    fn count(&mut self, lexeme: &Lexeme<'_>) -> Result<(), Failure> {
        self.operators += 1;
        if self.operators > LONGEST {
            let kind = SyntaxProblemKind::ExpressionTooLong { limit: LONGEST };
            return Err(Failure::problem(lexeme.span(), kind));
        }
        Ok(())
    }

    fn close(&mut self) {
        self.reduce(1);
        self.open -= 1;
        let function = self.waiting.pop();
        if let Some(operand) = self.operands.pop() {
            self.operands.push(match function {
                Some(Waiting::Open(Function::Log)) => Expression::Log(Box::new(operand)),
                Some(Waiting::Open(Function::Ln)) => Expression::Ln(Box::new(operand)),
                _ => operand,
            });
        }
    }

    /// Completes what waits and holds its right operand at least as tightly as that.
    fn reduce(&mut self, precedence: u8) {
        while let Some(waiting) = self.waiting.last().copied()
            && waiting.precedence() >= precedence
            && let Some(right) = self.operands.pop()
        {
            self.waiting.pop();
            let whole = match waiting {
                Waiting::Infix(operator) => match self.operands.pop() {
                    Some(left) => Expression::Binary(Box::new(left), operator, Box::new(right)),
                    None => right,
                },
                Waiting::Minus => Expression::Negative(Box::new(right)),
                Waiting::Open(_) => right,
            };
            self.operands.push(whole);
        }
    }

    fn finish(mut self, end: usize) -> Result<Expression, Failure> {
        match self.next {
            Next::Operand => return Err(Failure::at(end, Expect::Operand)),
            Next::Open(_) => return Err(Failure::at(end, Expect::LeftParen)),
            Next::Operator if self.open > 0 => return Err(self.expects_operator(end)),
            Next::Operator => {}
        }
        self.reduce(1);
        self.operands.pop().ok_or_else(|| Failure::at(end, Expect::Operand))
    }
}
