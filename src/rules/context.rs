//! What a rule looks at.

use super::compared::Compared;
use super::outcome::State;
use crate::equilibrium::quantities::Solved;
use crate::equilibrium::uncertainty::{Budget, Uncertainties};
use crate::problem::defect::Defect;
use crate::problem::effective::{InForce, Written};
use crate::problem::model::{Held, HeldWhat, Problem, Sought};
use crate::text::problem::SyntaxProblem;
use crate::text::span::{Part, Place, Span};

pub struct Context<'a> {
    /// The statements in force, in the order written, the base's first.
    pub statements: &'a [Written<'a>],
    /// Statements that repeat another and do not count.
    pub left_out: &'a [Written<'a>],
    pub problem: &'a Problem,
    pub state: &'a State,
    /// The written balances, held against the implied ones.
    pub compared: &'a [Compared],
    uncertainties: &'a Uncertainties,
    /// Whether this is a case that shares the base's scope, looked over already.
    pub inherited: bool,
    syntax: Vec<(Written<'a>, &'a SyntaxProblem)>,
}

impl<'a> Context<'a> {
    pub fn new(
        in_force: &'a InForce<'a>,
        problem: &'a Problem,
        state: &'a State,
        (compared, uncertainties): (&'a [Compared], &'a Uncertainties),
        inherited: bool,
    ) -> Self {
        let InForce { statements, left_out, .. } = in_force;
        // A case has only its own to add to what the base was told.
        let is_case = statements.iter().any(|written| written.part == Part::Case);
        let syntax = statements
            .iter()
            .chain(left_out)
            .filter(|written| !is_case || written.part == Part::Case)
            .flat_map(|written| written.parsed.problems.iter().map(|problem| (*written, problem)))
            .collect();
        Self { statements, left_out, problem, state, compared, uncertainties, inherited, syntax }
    }

    /// What was found while resolving; what a case only inherits is left out.
    pub fn defects(&self) -> impl Iterator<Item = &'a Defect> {
        let scope: &[Defect] = if self.inherited { &[] } else { &self.problem.scope.defects };
        scope.iter().chain(&self.problem.defects)
    }

    /// What is wrong with the writing of the statements, those left out too.
    pub fn syntax(&self) -> impl Iterator<Item = (Written<'a>, &'a SyntaxProblem)> {
        self.syntax.iter().copied()
    }

    pub fn solved(&self) -> Option<&'a Solved> {
        match self.state {
            State::Solved(solved) => Some(solved),
            _ => None,
        }
    }

    /// What a quantity is uncertain by; none where nothing is uncertain.
    pub fn budget(&self, sought: Sought) -> Option<Budget> {
        let (problem, solved) = (self.problem, self.solved()?);
        self.uncertainties.budget(problem, solved, sought)
    }

    pub fn statement(&self, place: Place) -> Option<&Written<'a>> {
        // Both are in the order of the text, the base before the case.
        [self.statements, self.left_out].into_iter().find_map(|statements| {
            let key = (place.section, place.statement);
            let at = statements.binary_search_by_key(&key, |w| (w.part, w.index)).ok()?;
            statements.get(at)
        })
    }

    /// The text at a place; empty where it is no text of this file.
    pub fn text(&self, place: Place) -> &'a str {
        self.statement(place)
            .and_then(|written| written.parsed.text.get(place.span.range()))
            .unwrap_or_default()
    }

    /// The place of a whole name of which a place covers a part.
    pub fn whole_name(&self, part: Place, name: &str) -> Option<Place> {
        let text = &self.statement(part)?.parsed.text;
        let (start, end) = (part.span.start as usize, part.span.end as usize);
        let from = start.saturating_sub(name.len());
        let at = (from..=start).find(|&at| {
            at + name.len() >= end && text.get(at..).is_some_and(|rest| rest.starts_with(name))
        })?;
        Some(Place { span: Span::new(at, at + name.len()), ..part })
    }

    /// Where something stands that is about the problem as a whole: its title, or else the
    /// first statement in force.
    pub fn anchor(&self) -> Option<Place> {
        let title = self.problem.title_at;
        title.or_else(|| self.statements.first().map(|written| written.whole()))
    }

    /// A held concentration or activity of an ion, which has more than one state or none more
    /// often than other equations do.
    pub fn held_ion(&self) -> Option<&'a Held> {
        self.problem.held.iter().find(|held| match held.what {
            HeldWhat::Activity { species, .. } | HeldWhat::Concentration { species, .. } => {
                self.problem.scope.species[species].charge != 0
            }
            _ => false,
        })
    }

    /// The place just after a place.
    pub fn after(&self, place: Place) -> Place {
        Place { span: Span { start: place.span.end, end: place.span.end }, ..place }
    }
}
