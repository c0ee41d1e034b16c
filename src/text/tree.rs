//! The tree of a problem file: what was written, statement by statement, with the
//! range of every part. It knows layout and syntax and nothing of chemistry: a
//! formula or a unit is here the text that was written.

use std::sync::Arc;

use super::problem::{SyntaxProblem, SyntaxProblemKind};
use super::span::{Span, Spanned};
use super::token::Token;

/// A whole file. `pieces` cover `text` without gap or overlap.
#[derive(Clone, Debug)]
pub struct Document {
    pub text: Arc<str>,
    pub pieces: Vec<Piece>,
    /// The base first, then the cases in the order written. A case's first statement
    /// is its own `case "…"` line.
    pub sections: Vec<Section>,
}

/// A run of the text: blank and comment lines between statements, or a statement.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Piece {
    pub start: usize,
    pub end: usize,
    /// The section and the statement in it, where the piece is a statement.
    pub statement: Option<(u32, u32)>,
}

#[derive(Clone, Debug, Default)]
pub struct Section {
    pub statements: Vec<Placed>,
}

/// A statement and where it starts in the file.
#[derive(Clone, Debug)]
pub struct Placed {
    pub start: usize,
    pub parsed: Arc<Parsed>,
}

/// One statement with everything inside it, comments and white space too. All ranges
/// count from the statement's own start, so equal text gives an equal tree.
#[derive(Debug)]
pub struct Parsed {
    pub text: Box<str>,
    /// Of `text`; for keeping work between edits.
    pub hash: u64,
    /// Every token, white space and comments included: joined they give `text`.
    pub tokens: Vec<(Token, Span)>,
    pub statement: Statement,
    pub problems: Vec<SyntaxProblem>,
}

impl Parsed {
    /// Whether all of it was read: a stray indent takes nothing from its meaning, nor does a
    /// plus without its spaces, which is taken apart.
    pub fn is_read_whole(&self) -> bool {
        use SyntaxProblemKind::{NoSpaceRoundPlus, StrayIndent};
        let harmless = |kind: &_| matches!(kind, StrayIndent | NoSpaceRoundPlus { .. });
        self.problems.iter().all(|problem| harmless(&problem.kind))
    }
}

/// A name as written: a formula, a unit, a model. Its meaning is found later.
pub type Name = Spanned<String>;

#[derive(Clone, Debug, PartialEq)]
pub enum Statement {
    Problem {
        title: Name,
    },
    Use(Use),
    Temperature {
        value: Quantity,
    },
    Activity {
        model: Name,
    },
    IonicStrength {
        value: Quantity,
    },
    Group {
        symbol: Name,
        formula: Option<Name>,
    },
    Component {
        items: Vec<ComponentItem>,
    },
    Reaction(Box<Reaction>),
    Total {
        component: Name,
        value: Quantity,
    },
    Add {
        reagent: Name,
        amount: Quantity,
        /// `add 2 mL/L of 30 % NaOH`: the amount is one of this stock.
        stock: Option<Strength>,
        giving: Option<Vec<Member>>,
    },
    Blend {
        parts: Vec<BlendPart>,
    },
    Hold {
        subject: Spanned<Subject>,
        value: Quantity,
        by: Option<Spanned<By>>,
    },
    Precipitate {
        solid: Name,
    },
    Saturate {
        solid: Name,
    },
    Balance {
        kind: Spanned<BalanceKind>,
        left: Vec<Term>,
        right: Vec<Term>,
        equals: Span,
    },
    Expect {
        subject: Spanned<Subject>,
        relation: Relation,
        /// `confidence 95 %`: how sure it must be that the answer meets it.
        confidence: Option<Quantity>,
        source: Option<Name>,
    },
    Curve {
        over: Spanned<Over>,
        from: Quantity,
        to: Quantity,
        /// `, 200 points`, both ends among them.
        points: Option<Spanned<u32>>,
    },
    Case {
        title: Name,
    },
    Without(Spanned<Without>),
    /// A statement that could not be read; its problems say why.
    Broken,
}

#[derive(Clone, Debug, PartialEq)]
pub enum Use {
    /// `use aqueous`, `use aqueous 1`.
    Set { name: Name, edition: Option<Spanned<u32>> },
    /// `use "../shared/amines.lyate"`.
    File { path: Name },
}

#[derive(Clone, Debug, PartialEq)]
pub struct ComponentItem {
    pub name: Name,
    pub title: Option<Name>,
}

#[derive(Clone, Debug, PartialEq)]
pub struct Reaction {
    pub left: Vec<Member>,
    pub right: Vec<Member>,
    /// The equation, from its first member to its last.
    pub equation: Span,
    pub constants: Vec<Constant>,
    pub enthalpy: Option<Quantity>,
    pub heat_capacity: Option<Quantity>,
    /// `at 20 °C`: the temperature that the constant is for.
    pub at: Option<Quantity>,
    pub valid: Option<(Quantity, Quantity)>,
    pub source: Option<Name>,
}

/// A species with its coefficient, in a reaction or after `giving`.
#[derive(Clone, Debug, PartialEq)]
pub struct Member {
    pub coefficient: Option<Spanned<Fraction>>,
    pub name: Name,
    pub span: Span,
}

/// An integer or simple fraction as a coefficient; the denominator is positive.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Fraction {
    pub numerator: i64,
    pub denominator: i64,
}

#[derive(Clone, Debug, PartialEq)]
pub struct Constant {
    pub kind: Spanned<ConstantKind>,
    pub value: ConstantValue,
    /// The whole clause, `pKa = 9.25 ± 0.02`.
    pub span: Span,
}

#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum ConstantKind {
    PKa,
    PKsp,
    LogBeta,
    PK,
    LogK,
    K,
    LogKOfT,
}

#[derive(Clone, Debug, PartialEq)]
pub enum ConstantValue {
    Number(Quantity),
    Expression(Spanned<Expression>),
}

/// An expression in T, the temperature in kelvin.
#[derive(Clone, Debug, PartialEq)]
pub enum Expression {
    Number(f64),
    T,
    Negative(Box<Expression>),
    Binary(Box<Expression>, Operator, Box<Expression>),
    /// Decadic logarithm.
    Log(Box<Expression>),
    Ln(Box<Expression>),
}

#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Operator {
    Add,
    Subtract,
    Multiply,
    Divide,
    Power,
}

/// A number with its uncertainty, unit and basis, as written: `12 ± 0.5 mg/L as N`.
#[derive(Clone, Debug, PartialEq)]
pub struct Quantity {
    pub number: Number,
    pub uncertainty: Option<Uncertainty>,
    pub unit: Option<Name>,
    /// What follows `as`.
    pub basis: Option<Name>,
    pub span: Span,
}

#[derive(Clone, Debug, PartialEq)]
pub struct Number {
    /// Finite; a number that cannot be read is a problem and never gets here.
    pub value: f64,
    /// Half a unit of the last written digit, as an absolute amount.
    pub half_digit: f64,
    /// The digits as written, without the sign.
    pub text: String,
    pub span: Span,
}

#[derive(Clone, Debug, PartialEq)]
pub struct Uncertainty {
    pub number: Number,
    pub percent: bool,
}

#[derive(Clone, Debug, PartialEq)]
pub enum By {
    /// `by NaOH`, or `by dose of 30 % NaOH`.
    Reagent(Name, Option<Box<Strength>>),
    Total(Name),
}

/// How strong a reagent comes: the `30 %` of `30 % NaOH`, with the stock's density where
/// it is written.
#[derive(Clone, Debug, PartialEq)]
pub struct Strength {
    pub value: Quantity,
    pub density: Option<Quantity>,
}

/// A share of a blend: `70 % of "river.lyate" case "winter"`.
#[derive(Clone, Debug, PartialEq)]
pub struct BlendPart {
    pub share: Quantity,
    pub file: Name,
    pub case: Option<Name>,
    pub span: Span,
}

#[derive(Clone, Debug, PartialEq)]
pub enum BalanceKind {
    Charge,
    Protons,
    Component(Name),
}

/// A term of a written balance.
#[derive(Clone, Debug, PartialEq)]
pub struct Term {
    /// A term after a minus sign.
    pub negative: bool,
    pub coefficient: Option<Spanned<Fraction>>,
    pub what: TermKind,
    pub span: Span,
}

#[derive(Clone, Debug, PartialEq)]
pub enum TermKind {
    /// `[SO4^2-]`
    Concentration(Name),
    /// `total NH3`
    Total(Name),
    /// `added NaOH`
    Added(Name),
    /// `precipitated CaCO3(s)`
    Precipitated(Name),
    /// `9 mmol/L`, or `0`
    Amount(Quantity),
}

/// A quantity of the answer, as named in `expect`, `hold` and `without`.
#[derive(Clone, Debug, PartialEq)]
pub enum Subject {
    Ph,
    Poh,
    Pe,
    /// Of an electrode, against the standard hydrogen electrode.
    Potential,
    Concentration(Name),
    Activity(Name),
    /// `CO2(g)`
    Pressure(Name),
    Total(Name),
    Fraction(Name),
    Alkalinity,
    Acidity,
    Hardness,
    CarbonateHardness,
    IonicStrength,
    BufferCapacity,
    SaturationIndex(Name),
    Precipitated(Name),
    Dose(Name),
    ChargeImbalance,
}

#[derive(Clone, Debug, PartialEq)]
pub enum Relation {
    /// `= v`, `= v ± u`
    Equal(Quantity),
    Less(Quantity),
    LessOrEqual(Quantity),
    Greater(Quantity),
    GreaterOrEqual(Quantity),
    Between(Quantity, Quantity),
}

#[derive(Clone, Debug, PartialEq)]
pub enum Over {
    Ph,
    Reagent(Name),
    Total(Name),
    Temperature,
    /// The share of the blend's part from this file.
    Blend(Name),
}

#[derive(Clone, Debug, PartialEq)]
pub enum Without {
    Hold(Subject),
    Expect(Subject),
    Total(Name),
    Add(Name),
    Balance(BalanceKind),
    Precipitate(Name),
    Saturate(Name),
    IonicStrength,
    Blend,
}
