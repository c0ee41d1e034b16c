//! Where a parser stopped and what it could have gone on with. It holds no text, so
//! that an alternative which fails costs nothing; the words come at the end.

use chumsky::DefaultExpected;
use chumsky::error::{Error, LabelError};
use chumsky::span::SimpleSpan;
use chumsky::util::MaybeRef;

use super::basic::{Lexeme, Tokens};
use super::reaction::CLAUSES;
use crate::text::number::shortened;
use crate::text::problem::{SyntaxProblem, SyntaxProblemKind};
use crate::text::span::Span;
use crate::text::token::Token;

macro_rules! expectations {
    ($($name:ident $words:literal,)*) => {
        /// What may stand at a place, for the reader of a message.
        #[derive(Clone, Copy, Debug, PartialEq, Eq)]
        #[repr(u8)]
        pub(super) enum Expect {
            /// Possible, but not worth naming.
            Nothing,
            $($name,)*
        }

        const WORDS: &[(Expect, &str)] = &[$((Expect::$name, $words),)*];
    };
}

expectations! {
    Number "a number",
    WholeNumber "a whole number",
    Amount "an amount such as 12 mmol/L",
    Temperature "a temperature such as 25 °C",
    Unit "a unit such as mmol/L",
    Percent "`%`",
    Formula "a formula such as NH4+",
    Symbol "a symbol such as Cit",
    Basis "an element, a group or CaCO3",
    Species "a species in square brackets, such as [NH4+]",
    Text "text in double quotes",
    Model "an activity model such as davies",
    Set "the name of a set such as aqueous, or a path in double quotes",
    Subject "a quantity such as pH, [NH4+] or CO2(g)",
    Removed "something to take away such as `hold pH`",
    Kind "`charge`, `protons` or a component",
    Term "a term such as [NH4+], total NH3, added NaOH or 2 mmol/L",
    Over "pH, temperature, a reagent, or `total` and a component",
    Found "a reagent, `dose of` a stock such as 30 % NaOH, or `total` and a component",
    Of "`of`",
    Stock "a stock such as 30 % NaOH",
    Density "`density`",
    Share "a share such as 70 % of \"river.lyate\"",
    Confidence "`confidence`",
    Clause "a clause such as pKa = 9.25",
    Equals "`=`",
    Relation "`=`, `<`, `<=`, `>`, `>=` or `between`",
    Arrow "`<=>`",
    Plus "`+`",
    RightBracket "`]`",
    RightBrace "`}`",
    Operand "a number, T, log(, ln( or an opening parenthesis",
    Operator "`+`, `-`, `*`, `/` or `^`",
    LeftParen "`(`",
    RightParen "`)`",
    Beta "`K`, `K(T)` or `beta`",
    Strength "`strength`",
    Capacity "`capacity`",
    Hardness "`hardness`",
    Index "`index`",
    Imbalance "`imbalance`",
    With "`with`",
    OverWord "`over`",
    From "`from`",
    To "`to`",
    And "`and`",
    Points "`points`",
    Giving "`giving`",
    Source "`source`",
    Comma "a comma",
    End "the end of the statement",
}

impl Expect {
    fn bit(self) -> u128 {
        match self {
            Expect::Nothing => 0,
            expect => 1 << (expect as u8),
        }
    }

    pub fn words(self) -> &'static str {
        WORDS.iter().find(|(expect, _)| *expect == self).map_or("", |(_, words)| words)
    }
}

/// A set of expectations at one token; or a problem that is already put in words.
#[derive(Clone, Debug)]
pub(super) struct Failure {
    at: usize,
    expected: u128,
    problem: Option<Box<SyntaxProblem>>,
}

impl Failure {
    pub fn at(at: usize, expect: Expect) -> Failure {
        Failure { at, expected: expect.bit(), problem: None }
    }

    pub fn or(mut self, expect: Expect) -> Failure {
        self.expected |= expect.bit();
        self
    }

    pub fn problem(span: Span, kind: SyntaxProblemKind) -> Failure {
        Failure { at: 0, expected: 0, problem: Some(Box::new(SyntaxProblem { span, kind })) }
    }

    pub fn unexpected(lexeme: &Lexeme<'_>, expect: Expect) -> Failure {
        let kind = SyntaxProblemKind::Unexpected {
            found: shortened(lexeme.text),
            expected: vec![expect.words().to_owned()],
        };
        Failure::problem(lexeme.span(), kind)
    }

    /// The problem in words. `lexemes` are those that the parser ran over.
    pub fn into_problem(self, lexemes: &[Lexeme<'_>], start: Span) -> SyntaxProblem {
        if let Some(problem) = self.problem {
            return *problem;
        }
        let Some(lexeme) = lexemes.get(self.at) else {
            let end = lexemes.last().map_or(start, Lexeme::span).end;
            let kind =
                SyntaxProblemKind::Unexpected { found: String::new(), expected: self.words(true) };
            return SyntaxProblem { span: Span { start: end, end }, kind };
        };
        if let Some(number) = self.at.checked_sub(1).and_then(|before| lexemes.get(before))
            && number.token == Token::Number
            && lexeme.token == Token::Electron
            && number.touches(lexeme)
        {
            // `1e-`: an exponent without digits, where no electron can stand.
            let text = format!("{}{}", number.text, lexeme.text);
            let kind = SyntaxProblemKind::BrokenNumber { text };
            return SyntaxProblem { span: number.span().to(lexeme.span()), kind };
        }
        let expected = match self.nearest(lexeme) {
            None if self.expects(Expect::Term) && lexeme.token == Token::Name => {
                vec![format!("`[{}]`", shortened(lexeme.text))]
            }
            Some(word) => vec![format!("`{word}`")],
            None => self.words(false),
        };
        let kind = SyntaxProblemKind::Unexpected { found: shortened(lexeme.text), expected };
        SyntaxProblem { span: lexeme.span(), kind }
    }

    fn expects(&self, expect: Expect) -> bool {
        self.expected & expect.bit() != 0
    }

    fn words(&self, at_end: bool) -> Vec<String> {
        WORDS
            .iter()
            .filter(|(expect, _)| self.expects(*expect) && !(at_end && *expect == Expect::End))
            .map(|(_, words)| (*words).to_owned())
            .collect()
    }

    /// The word that may stand here and that a misspelt one most likely means.
    fn nearest(&self, lexeme: &Lexeme<'_>) -> Option<&'static str> {
        if lexeme.token != Token::Word {
            return None;
        }
        if self.expects(Expect::Operand) {
            return match lexeme.text {
                "t" => Some("T"),
                "log10" | "lg" => Some("log"),
                _ => None,
            };
        }
        let words: &[&str] = if self.expects(Expect::Clause) {
            &CLAUSES
        } else if self.expects(Expect::Subject) {
            &SUBJECTS
        } else if self.expects(Expect::Kind) {
            &["charge", "protons"]
        } else {
            return None;
        };
        nearest(lexeme.text, words)
    }
}

/// The words that a quantity of the answer begins with, those of three letters and less left
/// out: nearly everything is near to them.
const SUBJECTS: [&str; 12] = [
    "alkalinity",
    "acidity",
    "hardness",
    "carbonate",
    "potential",
    "ionic",
    "buffer",
    "saturation",
    "fraction",
    "charge",
    "total",
    "dose",
];

/// The word of a list that a misspelt word is nearest to, where one is near.
pub(super) fn nearest(word: &str, words: &[&'static str]) -> Option<&'static str> {
    /// No word of the language is longer, nor would more letters make it nearer.
    const LONGEST: usize = 24;
    if word.len() > LONGEST {
        return None;
    }
    let lower = word.to_lowercase();
    words
        .iter()
        .map(|known| (strsim::damerau_levenshtein(&lower, &known.to_lowercase()), *known))
        .filter(|(distance, known)| *distance <= known.len() / 3)
        .min_by_key(|(distance, _)| *distance)
        .map(|(_, known)| known)
}

impl<'s> Error<'s, Tokens<'s>> for Failure {
    fn merge(mut self, other: Self) -> Self {
        self.expected |= other.expected;
        self.problem = self.problem.or(other.problem);
        self
    }
}

impl<'s> LabelError<'s, Tokens<'s>, DefaultExpected<'s, Lexeme<'s>>> for Failure {
    fn expected_found<E: IntoIterator<Item = DefaultExpected<'s, Lexeme<'s>>>>(
        expected: E,
        _: Option<MaybeRef<'s, Lexeme<'s>>>,
        span: SimpleSpan<usize>,
    ) -> Self {
        let mut failure = Failure::at(span.start, Expect::Nothing);
        for expected in expected {
            if matches!(expected, DefaultExpected::EndOfInput) {
                failure.expected |= Expect::End.bit();
            }
        }
        failure
    }
}

impl<'s> LabelError<'s, Tokens<'s>, Expect> for Failure {
    fn expected_found<E: IntoIterator<Item = Expect>>(
        expected: E,
        _: Option<MaybeRef<'s, Lexeme<'s>>>,
        span: SimpleSpan<usize>,
    ) -> Self {
        let mut failure = Failure::at(span.start, Expect::Nothing);
        for expect in expected {
            failure.expected |= expect.bit();
        }
        failure
    }

    fn label_with(&mut self, label: Expect) {
        self.expected = label.bit();
    }
}
