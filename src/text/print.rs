//! The canonical form of a statement, on one line. Read again, it gives the same tree.

use std::fmt::{self, Display, Formatter};

use super::tree::{
    BalanceKind, By, Constant, ConstantKind, ConstantValue, Expression, Fraction, Member, Number,
    Operator, Over, Quantity, Reaction, Relation, Statement, Strength, Subject, Term, TermKind,
    Uncertainty, Use, Without,
};

/// A statement that could not be read prints as nothing: its text is all there is.
impl Display for Statement {
    fn fmt(&self, f: &mut Formatter<'_>) -> fmt::Result {
        match self {
            Statement::Problem { title } => write!(f, "problem \"{}\"", title.value),
            Statement::Use(Use::Set { name, edition: None }) => write!(f, "use {}", name.value),
            Statement::Use(Use::Set { name, edition: Some(edition) }) => {
                write!(f, "use {} {}", name.value, edition.value)
            }
            Statement::Use(Use::File { path }) => write!(f, "use \"{}\"", path.value),
            Statement::Temperature { value } => write!(f, "temperature {value}"),
            Statement::Activity { model } => write!(f, "activity {}", model.value),
            Statement::IonicStrength { value } => write!(f, "ionic strength {value}"),
            Statement::Group { symbol, formula: None } => write!(f, "group {}", symbol.value),
            Statement::Group { symbol, formula: Some(formula) } => {
                write!(f, "group {} = {}", symbol.value, formula.value)
            }
            Statement::Component { items } => {
                f.write_str("component ")?;
                for (i, item) in items.iter().enumerate() {
                    if i > 0 {
                        f.write_str(", ")?;
                    }
                    f.write_str(&item.name.value)?;
                    if let Some(title) = &item.title {
                        write!(f, " \"{}\"", title.value)?;
                    }
                }
                Ok(())
            }
            Statement::Reaction(reaction) => reaction.fmt(f),
            Statement::Total { component, value } => {
                write!(f, "total {} = {value}", component.value)
            }
            Statement::Add { reagent, amount, stock, giving } => {
                match stock {
                    None => write!(f, "add {} {amount}", reagent.value)?,
                    Some(strength) => {
                        write!(f, "add {amount} of ")?;
                        of_stock(f, &reagent.value, strength)?;
                    }
                }
                match giving {
                    None => Ok(()),
                    Some(giving) => {
                        f.write_str(", giving ")?;
                        members(f, giving)
                    }
                }
            }
            Statement::Hold { subject, value, by } => {
                write!(f, "hold {} = {value}", subject.value)?;
                match by.as_ref().map(|by| &by.value) {
                    None => Ok(()),
                    Some(By::Reagent(reagent, None)) => write!(f, " by {}", reagent.value),
                    Some(By::Reagent(reagent, Some(strength))) => {
                        f.write_str(" by dose of ")?;
                        of_stock(f, &reagent.value, strength)
                    }
                    Some(By::Total(component)) => write!(f, " by total {}", component.value),
                }
            }
            Statement::Blend { parts } => {
                f.write_str("blend ")?;
                for (i, part) in parts.iter().enumerate() {
                    if i > 0 {
                        f.write_str(", ")?;
                    }
                    write!(f, "{} of \"{}\"", part.share, part.file.value)?;
                    if let Some(case) = &part.case {
                        write!(f, " case \"{}\"", case.value)?;
                    }
                }
                Ok(())
            }
            Statement::Precipitate { solid } => write!(f, "precipitate {}", solid.value),
            Statement::Saturate { solid } => write!(f, "saturate with {}", solid.value),
            Statement::Balance { kind, left, right, .. } => {
                write!(f, "balance {} ", kind.value)?;
                terms(f, left)?;
                f.write_str(" = ")?;
                terms(f, right)
            }
            Statement::Expect { subject, relation, confidence, source } => {
                write!(f, "expect {} {relation}", subject.value)?;
                if let Some(confidence) = confidence {
                    write!(f, ", confidence {confidence}")?;
                }
                match source {
                    None => Ok(()),
                    Some(source) => write!(f, ", source \"{}\"", source.value),
                }
            }
            Statement::Curve { over, from, to, points } => {
                write!(f, "curve over {} from {from} to {to}", over.value)?;
                match points {
                    None => Ok(()),
                    Some(points) => write!(f, ", {} points", points.value),
                }
            }
            Statement::Case { title } => write!(f, "case \"{}\"", title.value),
            Statement::Without(without) => write!(f, "without {}", without.value),
            Statement::Broken => Ok(()),
        }
    }
}

impl Display for Reaction {
    fn fmt(&self, f: &mut Formatter<'_>) -> fmt::Result {
        f.write_str("reaction ")?;
        members(f, &self.left)?;
        f.write_str(" <=> ")?;
        members(f, &self.right)?;
        for constant in &self.constants {
            write!(f, ", {constant}")?;
        }
        if let Some(enthalpy) = &self.enthalpy {
            write!(f, ", enthalpy = {enthalpy}")?;
        }
        if let Some(capacity) = &self.heat_capacity {
            write!(f, ", heat capacity = {capacity}")?;
        }
        if let Some(at) = &self.at {
            write!(f, ", at {at}")?;
        }
        if let Some((from, to)) = &self.valid {
            write!(f, ", valid {from} to {to}")?;
        }
        if let Some(source) = &self.source {
            write!(f, ", source \"{}\"", source.value)?;
        }
        Ok(())
    }
}

fn of_stock(f: &mut Formatter<'_>, reagent: &str, strength: &Strength) -> fmt::Result {
    write!(f, "{} {reagent}", strength.value)?;
    match &strength.density {
        None => Ok(()),
        Some(density) => write!(f, ", density = {density}"),
    }
}

fn members(f: &mut Formatter<'_>, members: &[Member]) -> fmt::Result {
    for (i, member) in members.iter().enumerate() {
        if i > 0 {
            f.write_str(" + ")?;
        }
        if let Some(coefficient) = &member.coefficient {
            write!(f, "{} ", coefficient.value)?;
        }
        f.write_str(&member.name.value)?;
    }
    Ok(())
}

fn terms(f: &mut Formatter<'_>, terms: &[Term]) -> fmt::Result {
    for (i, term) in terms.iter().enumerate() {
        f.write_str(match (i, term.negative) {
            (0, false) => "",
            (0, true) => "-",
            (_, false) => " + ",
            (_, true) => " - ",
        })?;
        if let Some(coefficient) = &term.coefficient {
            write!(f, "{} ", coefficient.value)?;
        }
        match &term.what {
            TermKind::Concentration(species) => write!(f, "[{}]", species.value)?,
            TermKind::Total(component) => write!(f, "total {}", component.value)?,
            TermKind::Added(reagent) => write!(f, "added {}", reagent.value)?,
            TermKind::Precipitated(solid) => write!(f, "precipitated {}", solid.value)?,
            TermKind::Amount(amount) => amount.fmt(f)?,
        }
    }
    Ok(())
}

impl Display for Fraction {
    fn fmt(&self, f: &mut Formatter<'_>) -> fmt::Result {
        write!(f, "{}", self.numerator)?;
        if self.denominator != 1 {
            write!(f, "/{}", self.denominator)?;
        }
        Ok(())
    }
}

impl Display for Constant {
    fn fmt(&self, f: &mut Formatter<'_>) -> fmt::Result {
        write!(f, "{} = ", self.kind.value)?;
        match &self.value {
            ConstantValue::Number(quantity) => quantity.fmt(f),
            ConstantValue::Expression(expression) => expression.value.fmt(f),
        }
    }
}

impl Display for ConstantKind {
    fn fmt(&self, f: &mut Formatter<'_>) -> fmt::Result {
        f.write_str(match self {
            ConstantKind::PKa => "pKa",
            ConstantKind::PKsp => "pKsp",
            ConstantKind::LogBeta => "log beta",
            ConstantKind::PK => "pK",
            ConstantKind::LogK => "log K",
            ConstantKind::K => "K",
            ConstantKind::LogKOfT => "log K(T)",
        })
    }
}

impl Display for Quantity {
    fn fmt(&self, f: &mut Formatter<'_>) -> fmt::Result {
        self.number.fmt(f)?;
        // A percent sign after an uncertainty would be read as the uncertainty's.
        let percent = |uncertainty: &Uncertainty| {
            uncertainty.percent || self.unit.as_ref().is_some_and(|unit| unit.starts_with('%'))
        };
        let (before, after) = match &self.uncertainty {
            Some(uncertainty) if percent(uncertainty) => (None, Some(uncertainty)),
            uncertainty => (uncertainty.as_ref(), None),
        };
        if let Some(uncertainty) = before {
            write!(f, " {uncertainty}")?;
        }
        if let Some(unit) = &self.unit {
            write!(f, " {}", unit.value)?;
        }
        if let Some(uncertainty) = after {
            write!(f, " {uncertainty}")?;
        }
        if let Some(basis) = &self.basis {
            write!(f, " as {}", basis.value)?;
        }
        Ok(())
    }
}

impl Display for Number {
    fn fmt(&self, f: &mut Formatter<'_>) -> fmt::Result {
        let sign = if self.value.is_sign_negative() { "-" } else { "" };
        write!(f, "{sign}{}", self.text)
    }
}

impl Display for Uncertainty {
    fn fmt(&self, f: &mut Formatter<'_>) -> fmt::Result {
        write!(f, "± {}{}", self.number, if self.percent { " %" } else { "" })
    }
}

impl Display for BalanceKind {
    fn fmt(&self, f: &mut Formatter<'_>) -> fmt::Result {
        f.write_str(match self {
            BalanceKind::Charge => "charge",
            BalanceKind::Protons => "protons",
            BalanceKind::Component(component) => &component.value,
        })
    }
}

impl Display for Subject {
    fn fmt(&self, f: &mut Formatter<'_>) -> fmt::Result {
        match self {
            Subject::Ph => f.write_str("pH"),
            Subject::Poh => f.write_str("pOH"),
            Subject::Pe => f.write_str("pe"),
            Subject::Potential => f.write_str("potential"),
            Subject::Concentration(species) => write!(f, "[{}]", species.value),
            Subject::Activity(species) => write!(f, "{{{}}}", species.value),
            Subject::Pressure(gas) => f.write_str(&gas.value),
            Subject::Total(component) => write!(f, "total {}", component.value),
            Subject::Fraction(species) => write!(f, "fraction {}", species.value),
            Subject::Alkalinity => f.write_str("alkalinity"),
            Subject::Acidity => f.write_str("acidity"),
            Subject::Hardness => f.write_str("hardness"),
            Subject::CarbonateHardness => f.write_str("carbonate hardness"),
            Subject::IonicStrength => f.write_str("ionic strength"),
            Subject::BufferCapacity => f.write_str("buffer capacity"),
            Subject::Precipitated(solid) => write!(f, "precipitated {}", solid.value),
            Subject::SaturationIndex(solid) => write!(f, "saturation index {}", solid.value),
            Subject::Dose(reagent) => write!(f, "dose {}", reagent.value),
            Subject::ChargeImbalance => f.write_str("charge imbalance"),
        }
    }
}

impl Display for Relation {
    fn fmt(&self, f: &mut Formatter<'_>) -> fmt::Result {
        match self {
            Relation::Equal(value) => write!(f, "= {value}"),
            Relation::Less(value) => write!(f, "< {value}"),
            Relation::LessOrEqual(value) => write!(f, "<= {value}"),
            Relation::Greater(value) => write!(f, "> {value}"),
            Relation::GreaterOrEqual(value) => write!(f, ">= {value}"),
            Relation::Between(from, to) => write!(f, "between {from} and {to}"),
        }
    }
}

impl Display for Over {
    fn fmt(&self, f: &mut Formatter<'_>) -> fmt::Result {
        match self {
            Over::Ph => f.write_str("pH"),
            Over::Reagent(reagent) => write!(f, "dose {}", reagent.value),
            Over::Total(component) => write!(f, "total {}", component.value),
            Over::Temperature => f.write_str("temperature"),
            Over::Blend(file) => write!(f, "blend \"{}\"", file.value),
        }
    }
}

impl Display for Without {
    fn fmt(&self, f: &mut Formatter<'_>) -> fmt::Result {
        match self {
            Without::Hold(subject) => write!(f, "hold {subject}"),
            Without::Expect(subject) => write!(f, "expect {subject}"),
            Without::Total(component) => write!(f, "total {}", component.value),
            Without::Add(reagent) => write!(f, "add {}", reagent.value),
            Without::Balance(kind) => write!(f, "balance {kind}"),
            Without::Precipitate(solid) => write!(f, "precipitate {}", solid.value),
            Without::Saturate(solid) => write!(f, "saturate with {}", solid.value),
            Without::IonicStrength => f.write_str("ionic strength"),
            Without::Blend => f.write_str("blend"),
        }
    }
}

/// How tightly an expression holds together; a looser one inside needs parentheses.
#[derive(Clone, Copy, PartialEq, PartialOrd)]
enum Binding {
    Sum,
    Product,
    Sign,
    Power,
    Operand,
}

impl Expression {
    fn binding(&self) -> Binding {
        match self {
            Expression::Binary(_, Operator::Add | Operator::Subtract, _) => Binding::Sum,
            Expression::Binary(_, Operator::Multiply | Operator::Divide, _) => Binding::Product,
            Expression::Binary(_, Operator::Power, _) => Binding::Power,
            Expression::Negative(_) => Binding::Sign,
            _ => Binding::Operand,
        }
    }

    fn write(&self, f: &mut Formatter<'_>, least: Binding) -> fmt::Result {
        if self.binding() < least { write!(f, "({self})") } else { self.fmt(f) }
    }
}

/// Expressions are at most as deep as the parser lets them be, so this recursion is too.
impl Display for Expression {
    fn fmt(&self, f: &mut Formatter<'_>) -> fmt::Result {
        match self {
            Expression::Number(value) if (1e-5..1e15).contains(value) || *value == 0.0 => {
                write!(f, "{value}")
            }
            Expression::Number(value) => write!(f, "{value:e}"),
            Expression::T => f.write_str("T"),
            Expression::Log(of) => write!(f, "log({of})"),
            Expression::Ln(of) => write!(f, "ln({of})"),
            Expression::Negative(of) => {
                f.write_str("-")?;
                of.write(f, Binding::Sign)
            }
            Expression::Binary(left, operator, right) => {
                let (left_least, sign, right_least) = match operator {
                    Operator::Add => (Binding::Sum, " + ", Binding::Product),
                    Operator::Subtract => (Binding::Sum, " - ", Binding::Product),
                    Operator::Multiply => (Binding::Product, " * ", Binding::Sign),
                    Operator::Divide => (Binding::Product, " / ", Binding::Sign),
                    Operator::Power => (Binding::Operand, "^", Binding::Sign),
                };
                left.write(f, left_least)?;
                f.write_str(sign)?;
                right.write(f, right_least)
            }
        }
    }
}
