//! The tokens of a statement. Every byte lands in one, white space and comments too,
//! so that the tokens joined give back the text.

use logos::{Lexer, Logos};

use super::number;
use super::problem::{MOST_PROBLEMS, SyntaxProblem, SyntaxProblemKind};
use super::run;
use super::span::Span;

#[derive(Logos, Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Token {
    #[regex(r"[ \t\x0B\x0C\u{85}\u{A0}\u{1680}\u{2000}-\u{200A}\u{2028}\u{2029}\u{202F}\u{205F}\u{3000}]+")]
    Space,
    #[token("\n")]
    #[token("\r\n")]
    #[token("\r")]
    Newline,
    #[regex(r"#[^\r\n]*", allow_greedy = true)]
    Comment,
    /// A keyword, a unit's first part, a model: starts in lower case.
    #[regex(r"[a-z][A-Za-z0-9_]*")]
    #[regex(r"[µμ°]")]
    Word,
    /// A formula as written, with its charge and phase; or a unit such as `K`.
    #[regex(r"[A-Z][A-Za-z0-9]*")]
    #[regex(r"\([A-Z(]")]
    Name,
    /// `e-`
    Electron,
    #[regex(r"[0-9]+(\.[0-9]+)?([eE][+\-−]?[0-9]+)?")]
    #[regex(r"10(\^[+\-−]?[0-9]+|[⁺⁻]?[⁰¹²³⁴⁵⁶⁷⁸⁹]+)")]
    #[regex(
        r"[0-9]+(\.[0-9]+)?[ \t]*[×xX·⋅*][ \t]*10(\^[+\-−]?[0-9]+|[⁺⁻]?[⁰¹²³⁴⁵⁶⁷⁸⁹]+)",
        priority = 20
    )]
    Number,
    /// Starts like a number and is none, or is not finite.
    #[regex(r"\.[0-9]+")]
    BrokenNumber,
    /// With its quotes.
    #[regex(r#""[^"\r\n]*""#)]
    #[regex("[“”„][^“”\"\r\n]*[“”\"]")]
    String,
    #[regex(r#""[^"\r\n]*"#)]
    #[regex("[“”„][^“”\"\r\n]*")]
    UnclosedString,
    #[token("[")]
    LeftBracket,
    #[token("]")]
    RightBracket,
    #[token("{")]
    LeftBrace,
    #[token("}")]
    RightBrace,
    #[token("(")]
    LeftParen,
    #[token(")")]
    RightParen,
    #[token(",")]
    Comma,
    #[token("=")]
    Equals,
    #[token("<=>")]
    #[token("⇌")]
    #[token("⇋")]
    Arrow,
    /// `->` and its like, where `<=>` is meant.
    #[regex(r"<?-+>|<-{2,}|<={2,}>|=+>|<=>>|[→↔⇄⇆⟶⟷]")]
    WrongArrow,
    #[token("<")]
    Less,
    #[token("<=")]
    #[token("≤")]
    LessOrEqual,
    #[token(">")]
    Greater,
    #[token(">=")]
    #[token("≥")]
    GreaterOrEqual,
    #[token("±")]
    #[token("+/-")]
    PlusMinus,
    #[token("+")]
    Plus,
    #[token("-")]
    #[token("−")]
    #[token("–")]
    Minus,
    #[token("*")]
    #[token("×")]
    Times,
    #[token("/")]
    Slash,
    #[token("^")]
    Caret,
    #[token("%")]
    Percent,
    /// `·` or a full stop between units.
    #[token(".")]
    #[token("·")]
    #[token("⋅")]
    Dot,
    /// `T` in an expression.
    Temperature,
    /// A sign of ASCII that no statement uses.
    #[regex(r"[!$&':;?@\\_`|~]")]
    Punctuation,
    /// Any other character, or a run of them.
    #[regex(r".", priority = 0)]
    #[regex(r"[\x00-\x08\x0E-\x1F\x7F]", priority = 1)]
    Unknown,
}

impl Token {
    fn may_be_broken(self) -> bool {
        use Token::{BrokenNumber, String, UnclosedString, Unknown};
        matches!(self, BrokenNumber | UnclosedString | String | Unknown)
    }

    /// White space or a comment: nothing that a parser looks at.
    pub fn is_trivia(self) -> bool {
        matches!(self, Token::Space | Token::Newline | Token::Comment)
    }
}

/// The tokens of the right side of `log K(T) =`, where letters and signs mean
/// arithmetic and not formulas.
#[derive(Logos, Clone, Copy, Debug, PartialEq, Eq)]
enum ExpressionToken {
    #[regex(r"[ \t\x0B\x0C\u{85}\u{A0}\u{1680}\u{2000}-\u{200A}\u{2028}\u{2029}\u{202F}\u{205F}\u{3000}]+")]
    Space,
    #[token("\n")]
    #[token("\r\n")]
    #[token("\r")]
    Newline,
    #[regex(r"#[^\r\n]*", allow_greedy = true)]
    Comment,
    #[token("T", priority = 5)]
    Temperature,
    #[regex(r"[A-Za-z][A-Za-z0-9_]*")]
    Word,
    #[regex(r"[0-9]+(\.[0-9]+)?([eE][+\-−]?[0-9]+)?")]
    Number,
    #[regex(r"\.[0-9]+")]
    BrokenNumber,
    #[token("(")]
    LeftParen,
    #[token(")")]
    RightParen,
    #[token("+")]
    Plus,
    #[token("-")]
    #[token("−")]
    #[token("–")]
    Minus,
    #[token("*")]
    #[token("×")]
    #[token("·")]
    #[token("⋅")]
    Times,
    #[token("/")]
    Slash,
    #[token("^")]
    Caret,
    #[token(",")]
    Comma,
    #[regex(r#""[^"\r\n]*""#)]
    String,
    #[regex(r#""[^"\r\n]*"#)]
    UnclosedString,
    #[regex(r"[!$&':;?@\\_`|~=<>\[\]{}%.]")]
    Punctuation,
    #[regex(r".", priority = 0)]
    #[regex(r"[\x00-\x08\x0E-\x1F\x7F]", priority = 1)]
    Unknown,
}

impl From<ExpressionToken> for Token {
    fn from(token: ExpressionToken) -> Token {
        match token {
            ExpressionToken::Space => Token::Space,
            ExpressionToken::Newline => Token::Newline,
            ExpressionToken::Comment => Token::Comment,
            ExpressionToken::Temperature => Token::Temperature,
            ExpressionToken::Word => Token::Word,
            ExpressionToken::Number => Token::Number,
            ExpressionToken::BrokenNumber => Token::BrokenNumber,
            ExpressionToken::LeftParen => Token::LeftParen,
            ExpressionToken::RightParen => Token::RightParen,
            ExpressionToken::Plus => Token::Plus,
            ExpressionToken::Minus => Token::Minus,
            ExpressionToken::Times => Token::Times,
            ExpressionToken::Slash => Token::Slash,
            ExpressionToken::Caret => Token::Caret,
            ExpressionToken::Comma => Token::Comma,
            ExpressionToken::String => Token::String,
            ExpressionToken::UnclosedString => Token::UnclosedString,
            ExpressionToken::Punctuation => Token::Punctuation,
            ExpressionToken::Unknown => Token::Unknown,
        }
    }
}

/// How much of `log K(T) =` stands before the next token.
#[derive(Clone, Copy, PartialEq, Eq)]
enum Lead {
    None,
    Log,
    LogK,
    LogKOfT,
}

impl Lead {
    fn after(self, token: Token, text: &str) -> Lead {
        match (self, token, text) {
            (_, Token::Word, "log") => Lead::Log,
            (Lead::Log, Token::Name, "K") => Lead::LogK,
            (Lead::Log, Token::Name, "K(T)") | (Lead::LogK, Token::Name, "(T)") => Lead::LogKOfT,
            _ => Lead::None,
        }
    }
}

/// Splits the text of one statement into tokens, which are put at the end of `tokens`;
/// what is wrong with single tokens goes to `problems`.
pub fn lex(text: &str, tokens: &mut Vec<(Token, Span)>, problems: &mut Vec<SyntaxProblem>) {
    let mut sink = Sink { text, tokens, problems };
    let mut lexer = Token::lexer(text);
    let mut lead = Lead::None;
    while let Some(token) = lexer.next() {
        let token = complete(token.unwrap_or(Token::Unknown), &mut lexer);
        let span = lexer.span();
        sink.push(token, span.start, span.end);
        if token.is_trivia() {
            continue;
        }
        if token == Token::Equals && lead == Lead::LogKOfT {
            lexer = lex_expression(lexer.morph(), &mut sink).morph();
        }
        lead = lead.after(token, &text[span]);
    }
}

/// Reads on in the language of expressions, to the comma that ends one.
fn lex_expression<'s>(
    mut lexer: Lexer<'s, ExpressionToken>,
    sink: &mut Sink<'s, '_>,
) -> Lexer<'s, ExpressionToken> {
    while let Some(token) = lexer.next() {
        let mut token = Token::from(token.unwrap_or(ExpressionToken::Unknown));
        if matches!(token, Token::Number | Token::BrokenNumber) {
            let (kind, more) = run::number(lexer.slice(), lexer.remainder(), false);
            lexer.bump(more);
            token = if token == Token::Number { kind } else { token };
        }
        let span = lexer.span();
        sink.push(token, span.start, span.end);
        if token == Token::Comma {
            break;
        }
    }
    lexer
}

/// Takes in what belongs to a token and no regular expression can tell.
fn complete(token: Token, lexer: &mut Lexer<'_, Token>) -> Token {
    let (token, more) = match token {
        Token::Word => run::word(lexer.slice(), lexer.remainder()),
        Token::Name => (Token::Name, run::name(lexer.remainder())),
        Token::Number => run::number(lexer.slice(), lexer.remainder(), true),
        Token::BrokenNumber => {
            (Token::BrokenNumber, run::number(lexer.slice(), lexer.remainder(), true).1)
        }
        Token::Unknown => match lexer.slice().chars().next() {
            Some(c) if c.is_uppercase() => (Token::Name, run::name(lexer.remainder())),
            Some(c) if c.is_alphabetic() => run::word(lexer.slice(), lexer.remainder()),
            _ => (Token::Unknown, 0),
        },
        other => (other, 0),
    };
    lexer.bump(more);
    token
}

/// Where tokens go, with the problems that they carry.
struct Sink<'s, 'o> {
    text: &'s str,
    tokens: &'o mut Vec<(Token, Span)>,
    problems: &'o mut Vec<SyntaxProblem>,
}

impl Sink<'_, '_> {
    fn push(&mut self, token: Token, start: usize, end: usize) {
        let span = Span::new(start, end);
        if !token.may_be_broken() {
            self.tokens.push((token, span));
            return;
        }
        let text = &self.text[start..end];
        let kind = match token {
            Token::BrokenNumber => {
                SyntaxProblemKind::BrokenNumber { text: number::shortened(text) }
            }
            Token::UnclosedString => SyntaxProblemKind::UnclosedString,
            Token::String if !text.starts_with('"') || !text.ends_with('"') => {
                SyntaxProblemKind::UnknownCharacter(text.chars().next().unwrap_or('“'))
            }
            Token::Unknown => {
                // A run of them is one token and one problem.
                if let Some((Token::Unknown, last)) = self.tokens.last_mut() {
                    last.end = span.end;
                    if let Some(problem) = self.problems.last_mut()
                        && problem.span.end == span.start
                    {
                        problem.span.end = span.end;
                    }
                    return;
                }
                SyntaxProblemKind::UnknownCharacter(text.chars().next().unwrap_or('\u{FFFD}'))
            }
            _ => {
                self.tokens.push((token, span));
                return;
            }
        };
        self.tokens.push((token, span));
        if self.problems.len() < MOST_PROBLEMS {
            self.problems.push(SyntaxProblem { span, kind });
        }
    }
}
