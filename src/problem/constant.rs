//! The constant of a reaction and the clauses that go with it.

use num_traits::{One, Zero};

use super::defect::{DefectKind, Expected};
use super::effective::Written;
use super::reaction::{Constant, LogK, Participant, STANDARD};
use super::resolve::Resolver;
use super::uncertain::Carries;
use crate::chemistry::formula::Phase;
use crate::text::tree::{self, ConstantKind, ConstantValue};

/// What the clauses of a reaction say.
#[derive(Default)]
pub struct Terms {
    pub constant: Option<Constant>,
    pub enthalpy: Option<f64>,
    pub heat_capacity: Option<f64>,
    pub enthalpy_uncertainty: Option<f64>,
    pub heat_capacity_uncertainty: Option<f64>,
    pub valid: Option<(f64, f64)>,
}

impl Resolver {
    pub fn constant_terms(
        &mut self,
        written: &Written,
        tree: &tree::Reaction,
        participants: &[Participant],
    ) -> Terms {
        let mut terms = Terms::default();
        if let Some(quantity) = &tree.enthalpy
            && let Some(read) = self.molar_energy(written, quantity)
        {
            terms.enthalpy = Some(read.value);
            terms.enthalpy_uncertainty = self.carried(written, quantity, Carries::Signed, &read);
        }
        if let Some(quantity) = &tree.heat_capacity
            && let Some(read) = self.molar_entropy(written, quantity)
        {
            terms.heat_capacity = Some(read.value);
            let size = self.carried(written, quantity, Carries::Signed, &read);
            terms.heat_capacity_uncertainty = size;
        }
        if let Some((low, high)) = &tree.valid {
            let shared = tree::Quantity { unit: high.unit.clone(), ..low.clone() };
            let low = if low.unit.is_none() { &shared } else { low };
            self.carries_nothing(written, low);
            self.carries_nothing(written, high);
            terms.valid = self.kelvin(written, low).zip(self.kelvin(written, high));
            if let Some((from, to)) = terms.valid
                && from > to
            {
                let why = "the valid range ends below where it begins";
                let at = written.place(low.span.to(high.span));
                self.report(at, DefectKind::ImpossibleValue { why });
                terms.valid = Some((to, from));
            }
        }
        let kelvin = match &tree.at {
            Some(at) => {
                self.carries_nothing(written, at);
                self.kelvin(written, at).unwrap_or(STANDARD)
            }
            None => STANDARD,
        };
        match &tree.constants[..] {
            [] => {
                // A broken clause has been reported already.
                if written.parsed.is_read_whole() {
                    self.report(written.place(tree.equation), DefectKind::NoConstant);
                }
            }
            [first, more @ ..] => {
                for second in more {
                    let other = written.place(first.span);
                    let kind = DefectKind::TwoConstants { other };
                    self.report(written.place(second.span), kind);
                }
                self.check_kind(written, first, participants);
                terms.constant = self.constant(written, first, kelvin);
            }
        }
        if tree.source.is_none() && written.parsed.is_read_whole() {
            self.report(written.place(tree.equation), DefectKind::NoSource);
        }
        self.base_reaction(written, tree, participants);
        terms
    }

    fn constant(
        &mut self,
        written: &Written,
        tree: &tree::Constant,
        kelvin: f64,
    ) -> Option<Constant> {
        let value = match &tree.value {
            ConstantValue::Expression(expression) => {
                let value = LogK::OfT(expression.value.clone());
                return Some(Constant {
                    kind: tree.kind.value,
                    value,
                    uncertainty: None,
                    span: tree.span,
                });
            }
            ConstantValue::Number(quantity) => quantity,
        };
        let read = self.number(written, value, Expected::Plain)?;
        let (log_k, carries) = match tree.kind.value {
            ConstantKind::PKa | ConstantKind::PKsp | ConstantKind::PK => {
                (-read.value, Carries::Logarithm)
            }
            ConstantKind::LogBeta | ConstantKind::LogK | ConstantKind::LogKOfT => {
                (read.value, Carries::Logarithm)
            }
            ConstantKind::K => {
                if read.value <= 0.0 {
                    let why = "an equilibrium constant is above zero";
                    let at = written.place(value.span);
                    self.report(at, DefectKind::ImpossibleValue { why });
                    return None;
                }
                (read.value.log10(), Carries::Positive)
            }
        };
        if log_k.abs() > LARGEST_LOG_K {
            let why = "a log K beyond ±300 is a slip of the pen";
            self.report(written.place(value.span), DefectKind::ImpossibleValue { why });
            return None;
        }
        let carried = self.carried(written, value, carries, &read);
        let uncertainty = match carries {
            Carries::Positive => carried.map(|u| u / read.value / std::f64::consts::LN_10),
            _ => carried,
        };
        Some(Constant {
            kind: tree.kind.value,
            value: LogK::At { log_k, kelvin },
            uncertainty,
            span: tree.span,
        })
    }

    /// Whether the word for the constant suits the reaction.
    fn check_kind(&mut self, written: &Written, tree: &tree::Constant, both: &[Participant]) {
        let right = || both.iter().filter(|p| p.coefficient > Zero::zero());
        let left = || both.iter().filter(|p| p.coefficient < Zero::zero());
        let (fits, kind, needs) = match tree.kind.value {
            ConstantKind::PKa => (right().any(|p| p.formula.is_proton()), "pKa", "H+ on the right"),
            ConstantKind::PKsp => (
                left().any(|p| matches!(p.formula.phase, Phase::Solid(_))),
                "pKsp",
                "a solid on the left",
            ),
            ConstantKind::LogBeta => (
                right().filter(|p| !p.formula.is_water() && !p.formula.is_proton()).count() == 1,
                "log beta",
                "one complex on the right",
            ),
            _ => return,
        };
        if !fits {
            let at = written.place(tree.kind.span);
            self.report(at, DefectKind::ConstantKindMismatch { kind, needs });
        }
    }

    /// `NH3 + H2O <=> NH4+ + OH-`: right, but by common practice entered as its acid.
    fn base_reaction(&mut self, written: &Written, tree: &tree::Reaction, both: &[Participant]) {
        let one = num_rational::Rational64::one();
        let is = |p: &Participant, left: bool| p.coefficient == if left { -one } else { one };
        let (left, right): (Vec<_>, Vec<_>) =
            both.iter().partition(|p| p.coefficient < Zero::zero());
        let ([a, b], [c, d]) = (&left[..], &right[..]) else { return };
        let (base, water) = if b.formula.is_water() { (a, b) } else { (b, a) };
        let (acid, hydroxide) = if d.formula.is_hydroxide() { (c, d) } else { (d, c) };
        let fits = water.formula.is_water()
            && hydroxide.formula.is_hydroxide()
            && is(base, true)
            && is(water, true)
            && is(acid, false)
            && is(hydroxide, false)
            && base.formula.phase == Phase::Aqueous;
        if !fits {
            return;
        }
        let acid = format!("{} <=> {} + H+", acid.formula.name, base.formula.name);
        let kind = DefectKind::BaseReaction { acid };
        self.report(written.place(tree.equation), kind);
    }
}

/// Past this no arithmetic is left.
const LARGEST_LOG_K: f64 = 300.0;
