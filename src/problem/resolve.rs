//! Resolving what is written: formulas by the groups in scope, groups, reactions.

use std::collections::{BTreeMap, HashMap};
use std::sync::Arc;

use num_rational::Rational64;
use num_traits::{CheckedAdd, CheckedMul, Zero};

use super::defect::{Conserved, Defect, DefectKind};
use super::effective::Written;
use super::reaction::{Origin, Participant, Reaction, key};
use super::scope::Scope;
use crate::chemistry::formula::{Atom, Formula, FormulaProblem, GroupProblem, Groups};
use crate::text::span::{Place, Span};
use crate::text::tree::{self, Fraction, Member, Name, Statement};

/// What the names of one file mean, and what was found wrong on the way.
#[derive(Default)]
pub struct Resolver {
    pub groups: Groups,
    pub defects: Vec<Defect>,
    formulas: HashMap<String, Result<Arc<Formula>, FormulaProblem>>,
    scope: Option<Arc<Scope>>,
}

/// Coefficients past this are a slip of the pen, and keep exact numbers from growing.
pub const LARGEST_COEFFICIENT: i64 = 1000;

impl Resolver {
    /// With what a scope already knows: its groups, and its species by name.
    pub fn within(scope: Arc<Scope>) -> Self {
        Self { groups: scope.groups.clone(), scope: Some(scope), ..Self::default() }
    }

    pub fn report(&mut self, at: Place, kind: DefectKind) {
        self.defects.push(Defect { at, kind });
    }

    /// The file's own groups, which go before those that it uses.
    pub fn declare_groups(&mut self, statements: &[Written]) {
        let declared: Vec<_> = statements
            .iter()
            .filter_map(|written| match written.statement() {
                Statement::Group { symbol, formula } => Some((*written, symbol, formula.as_ref())),
                _ => None,
            })
            .collect();
        if declared.is_empty() {
            return;
        }
        let definitions: Vec<_> = declared
            .iter()
            .map(|(_, symbol, formula)| {
                (symbol.value.as_str(), formula.map(|formula| formula.value.as_str()))
            })
            .collect();
        let (own, problems) = Groups::from_definitions(&definitions);
        for (index, problem) in problems {
            let (written, symbol, formula) = declared[index];
            let name = formula.unwrap_or(symbol);
            match problem {
                GroupProblem::Formula(problem) => {
                    let span = inside(name, &problem.range);
                    let kind =
                        DefectKind::Formula { text: name.value.clone(), problem: problem.kind };
                    self.report(written.place(span), kind);
                }
                GroupProblem::InvalidSymbol => {
                    let kind = DefectKind::GroupSymbol { symbol: symbol.value.clone() };
                    self.report(written.place(symbol.span), kind);
                }
                GroupProblem::Circular => {
                    let kind = DefectKind::GroupCircular { symbol: symbol.value.clone() };
                    self.report(written.place(symbol.span), kind);
                }
                // Found already, as a statement that stands twice.
                GroupProblem::Repeated => {}
            }
        }
        self.groups.extend(&own);
        self.formulas.clear();
    }

    /// Reads a formula; a problem with it becomes a defect at its place.
    pub fn formula(&mut self, written: &Written, name: &Name) -> Option<Arc<Formula>> {
        match self.look_up(&name.value) {
            Ok(formula) => Some(formula),
            Err(problem) => {
                let at = written.place(inside(name, &problem.range));
                let kind = DefectKind::Formula { text: name.value.clone(), problem: problem.kind };
                self.report(at, kind);
                None
            }
        }
    }

    /// Whether the groups in scope give the names of a used reaction the meaning that they
    /// were written with.
    pub fn means_the_same(&mut self, reaction: &Reaction) -> bool {
        let grouped =
            |formula: &Formula| formula.atoms.keys().any(|atom| matches!(atom, Atom::Group(_)));
        reaction.participants.iter().map(|participant| &participant.formula).all(|formula| {
            !grouped(formula)
                || self.quiet_formula(&formula.name).is_some_and(|read| read.same_matter(formula))
        })
    }

    /// Reads a formula without a word about what is wrong with it.
    pub fn quiet_formula(&mut self, text: &str) -> Option<Arc<Formula>> {
        self.look_up(text).ok()
    }

    fn look_up(&mut self, text: &str) -> Result<Arc<Formula>, FormulaProblem> {
        // Most names are those of species in scope, spelt as they are.
        if let Some(scope) = &self.scope
            && let Some(s) = scope.find(text)
        {
            return Ok(scope.species[s].clone());
        }
        if let Some(known) = self.formulas.get(text) {
            return known.clone();
        }
        let read = if text == "e-" {
            Ok(Arc::new(Formula::electron()))
        } else {
            Formula::parse(text, &self.groups).map(Arc::new)
        };
        self.formulas.insert(text.to_owned(), read.clone());
        read
    }

    /// The reactions among these statements, with what is wrong with each.
    pub fn reactions(&mut self, statements: &[Written], origin: &Origin) -> Vec<Arc<Reaction>> {
        let mut reactions = Vec::new();
        for written in statements {
            if let Statement::Reaction(tree) = written.statement() {
                let origin = match origin {
                    Origin::Own(_) => Origin::Own(written.place(tree.equation)),
                    other => other.clone(),
                };
                reactions.extend(self.reaction(written, tree, origin).map(Arc::new));
            }
        }
        reactions
    }

    fn reaction(
        &mut self,
        written: &Written,
        tree: &tree::Reaction,
        origin: Origin,
    ) -> Option<Reaction> {
        let left = self.side(written, &tree.left, -1);
        let right = self.side(written, &tree.right, 1);
        let mut participants = left?;
        participants.extend(right?);
        let conserved = self.conserved(written.place(tree.equation), &participants);
        let terms = self.constant_terms(written, tree, &participants);
        Some(Reaction {
            equation: equation(&participants),
            key: key(&participants),
            constant: terms.constant,
            enthalpy: terms.enthalpy,
            heat_capacity: terms.heat_capacity,
            enthalpy_uncertainty: terms.enthalpy_uncertainty,
            heat_capacity_uncertainty: terms.heat_capacity_uncertainty,
            valid: terms.valid,
            source: tree.source.as_ref().map(|source| source.value.clone()),
            origin,
            conserved,
            participants,
        })
    }

    /// The species of one side; none where one of them cannot be read.
    pub fn side(
        &mut self,
        written: &Written,
        members: &[Member],
        sign: i64,
    ) -> Option<Vec<Participant>> {
        let mut read = Vec::with_capacity(members.len());
        let mut all = true;
        for member in members {
            let coefficient = self.coefficient(written, member);
            match self.formula(written, &member.name).zip(coefficient) {
                Some((formula, coefficient)) => read.push(Participant {
                    formula,
                    coefficient: coefficient * Rational64::from_integer(sign),
                    span: member.name.span,
                }),
                None => all = false,
            }
        }
        all.then_some(read)
    }

    fn coefficient(&mut self, written: &Written, member: &Member) -> Option<Rational64> {
        let Some(fraction) = &member.coefficient else { return Some(Rational64::from_integer(1)) };
        match small_fraction(fraction.value) {
            Some(value) if !value.is_zero() => Some(value),
            _ => {
                let why = "a coefficient lies between 1/1000 and 1000";
                self.report(written.place(fraction.span), DefectKind::ImpossibleValue { why });
                None
            }
        }
    }

    /// Whether elements, groups and charge are conserved; reports each that is not.
    fn conserved(&mut self, at: Place, participants: &[Participant]) -> bool {
        let differences = differences(participants);
        let Some(differences) = differences else {
            let why = "the numbers in this reaction grow too large to be added exactly";
            self.report(at, DefectKind::ImpossibleValue { why });
            return false;
        };
        let conserved = differences.is_empty();
        for (what, left, right) in differences {
            self.report(at, DefectKind::NotConserved { what, left, right });
        }
        conserved
    }
}

/// The fraction as an exact number, where it is small enough to be meant.
pub fn small_fraction(fraction: Fraction) -> Option<Rational64> {
    let small = |n: i64| n.checked_abs().is_some_and(|n| n <= LARGEST_COEFFICIENT);
    (small(fraction.numerator) && small(fraction.denominator) && fraction.denominator > 0)
        .then(|| Rational64::new(fraction.numerator, fraction.denominator))
}

/// The part of a name that a range of its text covers, at least one byte where it can be.
fn inside(name: &Name, range: &std::ops::Range<usize>) -> Span {
    let start = name.span.start as usize;
    let end = name.span.end as usize;
    let from = (start + range.start).min(end.saturating_sub(1).max(start));
    Span::new(from, (start + range.end).clamp(from, end))
}

/// What left and right hold of each element, group and charge, where they differ. None
/// where the numbers outgrow 64 bits.
pub fn differences(
    participants: &[Participant],
) -> Option<Vec<(Conserved, Rational64, Rational64)>> {
    let mut atoms: BTreeMap<&Atom, [Rational64; 2]> = BTreeMap::new();
    let mut charge = [Rational64::zero(); 2];
    for participant in participants {
        let side = usize::from(participant.coefficient > Rational64::zero());
        let count = if side == 0 { -participant.coefficient } else { participant.coefficient };
        for (atom, per) in participant.formula.conserved() {
            let sum = &mut atoms.entry(atom).or_default()[side];
            *sum = sum.checked_add(&per.checked_mul(&count)?)?;
        }
        let per = Rational64::from_integer(i64::from(participant.formula.charge));
        charge[side] = charge[side].checked_add(&per.checked_mul(&count)?)?;
    }
    let mut differences: Vec<_> = atoms
        .into_iter()
        .filter(|(_, [left, right])| left != right)
        .map(|(atom, [left, right])| {
            let what = match atom {
                Atom::Element(element) => Conserved::Element(element.symbol().to_owned()),
                Atom::Group(symbol) => Conserved::Group(symbol.to_string()),
            };
            (what, left, right)
        })
        .collect();
    if charge[0] != charge[1] {
        differences.push((Conserved::Charge, charge[0], charge[1]));
    }
    Some(differences)
}

/// `NH4+ <=> NH3 + H+`
pub fn equation(participants: &[Participant]) -> String {
    let side = |left: bool| {
        let terms: Vec<_> = participants
            .iter()
            .filter(|p| (p.coefficient < Rational64::zero()) == left)
            .map(|p| {
                let count = if left { -p.coefficient } else { p.coefficient };
                if count == Rational64::from_integer(1) {
                    p.formula.name.clone()
                } else {
                    format!("{count} {}", p.formula.name)
                }
            })
            .collect();
        terms.join(" + ")
    };
    format!("{} <=> {}", side(true), side(false))
}
