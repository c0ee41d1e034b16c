//! What is in scope: the reactions, the components, and the species that belong. It
//! depends only on `use`, `group`, `component` and `reaction`, so cases share it.

use std::collections::{BTreeMap, HashMap, HashSet};
use std::path::PathBuf;
use std::sync::Arc;

use num_rational::Rational64;
use num_traits::Zero;

use super::belong::{Belonging, Equation, belonging};
use super::charge_reading;
use super::compare::compare_with_used;
use super::defect::{Defect, DefectKind};
use super::effective::Written;
use super::import::{Definitions, add_new};
use super::reaction::{Constant, LogK, Origin, Participant, Reaction};
use super::resolve::Resolver;
use super::split::Reagents;
use super::stoichiometry::{SpeciesRow, Stoichiometry};
use crate::chemistry::formula::{Formula, Groups, Phase};
use crate::text::span::{Place, Span};
use crate::text::tree::{ConstantKind, Statement};

/// Index of `H+` among the species, and of its component.
pub const PROTON: usize = 0;
/// Index of `H2O` among the species.
pub const WATER: usize = 1;

#[derive(Debug)]
pub struct Scope {
    pub groups: Groups,
    pub reactions: Vec<Arc<Reaction>>,
    /// Every species of the reactions in scope and every component, by its index.
    pub species: Vec<Arc<Formula>>,
    index: HashMap<String, usize>,
    /// `H+` first, then those declared.
    pub components: Vec<Component>,
    pub belonging: Belonging,
    /// Names of the species of balanced reactions.
    pub balanced: HashSet<String>,
    /// The dissolved species that belong, components first; the rows of `stoichiometry`.
    pub dissolved: Vec<usize>,
    pub stoichiometry: Stoichiometry,
    pub defects: Vec<Defect>,
    pub(super) reagents: Reagents,
    /// Files that were read for it.
    pub files: Vec<PathBuf>,
}

#[derive(Clone, Debug)]
pub struct Component {
    pub formula: Arc<Formula>,
    pub title: Option<String>,
    /// Its name in the `component` statement; none for `H+`.
    pub at: Option<Place>,
    /// Its index among the species.
    pub species: usize,
}

impl Scope {
    /// `uses` is what each `use` brought, with its place.
    pub fn new(
        statements: &[Written],
        uses: Vec<(Place, Result<Arc<Definitions>, DefectKind>)>,
    ) -> Scope {
        let mut resolver = Resolver::default();
        let mut used = Definitions::default();
        for (at, result) in uses {
            match result {
                Ok(definitions) => {
                    if definitions.errors > 0
                        && let Some(path) = definitions.files.first()
                    {
                        let (path, count) = (path.clone(), definitions.errors);
                        resolver.report(at, DefectKind::ImportBroken { path, count });
                    }
                    used.join(&definitions);
                }
                Err(kind) => resolver.report(at, kind),
            }
        }
        resolver.groups.extend(&used.groups);
        resolver.declare_groups(statements);
        let own = Origin::Own(Place {
            section: crate::text::span::Part::Base,
            statement: 0,
            span: Span::default(),
        });
        let mut reactions = resolver.reactions(statements, &own);
        compare_with_used(&reactions, &used.reactions, &mut resolver);
        add_new(&mut reactions, &used.reactions);
        add_new(&mut reactions, &[Arc::new(water_reaction())]);
        let mut builder = Builder {
            resolver,
            species: Vec::new(),
            index: HashMap::new(),
            components: Vec::new(),
        };
        builder.build(statements, reactions, used.files)
    }

    /// The index of a species by its canonical name.
    pub fn find(&self, name: &str) -> Option<usize> {
        self.index.get(name).copied()
    }

    /// Whether a species belongs to the problem.
    pub fn belongs(&self, species: usize) -> bool {
        self.belonging.made[species].is_some()
    }

    /// The index of a component by its canonical name.
    pub fn component(&self, name: &str) -> Option<usize> {
        self.components.iter().position(|component| component.formula.name == name)
    }

    /// The row of `stoichiometry` of a species, where it is dissolved and belongs.
    pub fn row_of(&self, species: usize) -> Option<usize> {
        self.dissolved.iter().position(|&s| s == species)
    }

    /// The reactions that belong, by index.
    pub fn reactions_in_use(&self) -> impl Iterator<Item = (usize, &Arc<Reaction>)> {
        self.reactions.iter().enumerate().filter(|(r, _)| self.belonging.used[*r])
    }

    /// Components that would bring a species in: the bases that it, or what it is made of,
    /// is an acid of.
    pub fn missing_for(&self, species: usize) -> Vec<String> {
        let base = self.base_of(species);
        let made_of = self.reactions.iter().find_map(|reaction| {
            let name = &self.species[base].name;
            let mut right = reaction.participants.iter().filter(|p| p.coefficient > Zero::zero());
            if right.next()?.formula.name != *name || right.next().is_some() {
                return None;
            }
            let left: Vec<usize> = reaction
                .participants
                .iter()
                .filter(|p| p.coefficient < Zero::zero() && p.formula.phase == Phase::Aqueous)
                .filter_map(|p| self.find(&p.formula.name))
                .filter(|&s| s != WATER && s != PROTON)
                .collect();
            (left.len() > 1).then_some(left)
        });
        let missing = |s: usize| (!self.belongs(s)).then(|| self.base_of(s));
        let mut wanted: Vec<usize> = match made_of {
            Some(left) => left.into_iter().filter_map(missing).collect(),
            None => vec![base],
        };
        if wanted.is_empty() {
            wanted.push(base);
        }
        wanted.dedup();
        wanted.into_iter().map(|s| self.species[s].name.clone()).collect()
    }

    /// The species with all its protons given off, by the acid reactions in scope; of a gas
    /// or solid, what it dissolves into.
    fn base_of(&self, species: usize) -> usize {
        let mut base = species;
        // No acid has more protons to give than this.
        for _ in 0..12 {
            let name = &self.species[base].name;
            let next = self.reactions.iter().find_map(|reaction| {
                let of = |left: bool| {
                    reaction.participants.iter().filter(move |p| {
                        (p.coefficient < Zero::zero()) == left
                            && !p.formula.is_water()
                            && !p.formula.is_proton()
                    })
                };
                let (mut left, mut right) = (of(true), of(false));
                let (from, to) = (left.next()?, right.next()?);
                let one_each = left.next().is_none() && right.next().is_none();
                (one_each && from.formula.name == *name).then(|| self.find(&to.formula.name))?
            });
            match next {
                Some(next) if next != base => base = next,
                _ => break,
            }
        }
        base
    }
}

struct Builder {
    resolver: Resolver,
    species: Vec<Arc<Formula>>,
    index: HashMap<String, usize>,
    components: Vec<Component>,
}

impl Builder {
    fn build(
        &mut self,
        statements: &[Written],
        reactions: Vec<Arc<Reaction>>,
        files: Vec<PathBuf>,
    ) -> Scope {
        for name in ["H+", "H2O"] {
            if let Some(formula) = self.resolver.quiet_formula(name) {
                self.add(&formula);
            }
        }
        self.components.push(Component {
            formula: self.species[PROTON].clone(),
            title: None,
            at: None,
            species: PROTON,
        });
        self.declare_components(statements);
        let equations: Vec<_> = reactions.iter().map(|reaction| self.equation(reaction)).collect();
        let made_by: Vec<_> = self.components.iter().map(|component| component.species).collect();
        let belonging = belonging(self.species.len(), &made_by, Some(WATER), &equations);
        self.report_links(&belonging, &reactions);
        self.report_names(&belonging, &reactions);
        let balanced = charge_reading::balanced(&reactions);
        for written in statements.iter().filter(|w| charge_reading::defines(w.statement())) {
            charge_reading::look(&mut self.resolver, written, &balanced);
        }
        let mut dissolved = made_by;
        let is_dissolved = |s: usize| self.species[s].phase == Phase::Aqueous && s != WATER;
        dissolved.retain(|&s| !self.species[s].is_electron());
        for s in 0..self.species.len() {
            if belonging.made[s].is_some() && is_dissolved(s) && !dissolved.contains(&s) {
                dissolved.push(s);
            }
        }
        dissolved.retain(|&s| !self.species[s].is_electron());
        let stoichiometry = Stoichiometry {
            components: self.components.iter().map(|c| c.formula.name.clone()).collect(),
            component_charges: self.components.iter().map(|c| c.formula.charge).collect(),
            species: dissolved
                .iter()
                .map(|&s| SpeciesRow {
                    name: self.species[s].name.clone(),
                    charge: self.species[s].charge,
                    row: belonging.made[s].as_ref().map(|m| m.row.clone()).unwrap_or_default(),
                })
                .collect(),
        };
        Scope {
            groups: std::mem::take(&mut self.resolver.groups),
            defects: std::mem::take(&mut self.resolver.defects),
            species: std::mem::take(&mut self.species),
            index: std::mem::take(&mut self.index),
            components: std::mem::take(&mut self.components),
            reactions,
            belonging,
            balanced,
            dissolved,
            stoichiometry,
            reagents: Reagents::default(),
            files,
        }
    }

    fn add(&mut self, formula: &Arc<Formula>) -> usize {
        if let Some(&known) = self.index.get(&formula.name) {
            return known;
        }
        let index = self.species.len();
        self.species.push(formula.clone());
        self.index.insert(formula.name.clone(), index);
        index
    }

    fn declare_components(&mut self, statements: &[Written]) {
        for written in statements {
            let Statement::Component { items } = written.statement() else { continue };
            for item in items {
                let Some(formula) = self.resolver.formula(written, &item.name) else { continue };
                let at = written.place(item.name.span);
                let name = formula.name.clone();
                if self.components.iter().any(|c| c.formula.name == name) || formula.is_water() {
                    let kind =
                        DefectKind::NotIndependent { name, from: Vec::new(), reaction: None };
                    self.resolver.report(at, kind);
                    continue;
                }
                let species = self.add(&formula);
                let title = item.title.as_ref().map(|title| title.value.clone());
                self.components.push(Component { formula, title, at: Some(at), species });
            }
        }
    }

    /// A reaction as numbers; empty where it does not conserve what it must.
    fn equation(&mut self, reaction: &Reaction) -> Equation {
        let mut sum: BTreeMap<usize, Rational64> = BTreeMap::new();
        if reaction.conserved && reaction.constant.is_some() {
            for participant in &reaction.participants {
                let s = self.add(&participant.formula);
                *sum.entry(s).or_default() += participant.coefficient;
            }
        }
        let participants = sum.into_iter().filter(|(_, nu)| !nu.is_zero()).collect();
        Equation { participants }
    }

    fn report_links(&mut self, belonging: &Belonging, reactions: &[Arc<Reaction>]) {
        for (r, link) in &belonging.links {
            // The component declared last is the one too many; electrons are listed for what
            // they make.
            let is_electron = |j: usize| self.components[j].formula.is_electron();
            let matter = link.iter().rev().find(|&&(j, _)| j != PROTON && !is_electron(j));
            let Some(&(last, _)) = matter.or(link.last()) else { continue };
            let component = &self.components[last];
            let others = link.iter().filter(|&&(j, _)| j != last);
            let mut from: Vec<String> =
                others.map(|&(j, _)| self.components[j].formula.name.clone()).collect();
            if from.is_empty() {
                from.push(self.species[WATER].name.clone());
            }
            let name = component.formula.name.clone();
            let reaction = reactions[*r].origin.own();
            if let Some(at) = component.at.or(reaction) {
                self.resolver.report(at, DefectKind::NotIndependent { name, from, reaction });
            }
        }
    }

    /// Two names for one composition, charge and phase.
    fn report_names(&mut self, belonging: &Belonging, reactions: &[Arc<Reaction>]) {
        let mut seen: HashMap<(String, i32, Phase), usize> = HashMap::new();
        for s in 0..self.species.len() {
            let formula = self.species[s].clone();
            let Some(elements) = formula.elements() else { continue };
            if formula.is_electron() || formula.composite {
                continue;
            }
            let composition: String =
                elements.iter().map(|(e, n)| format!("{}{n} ", e.symbol())).collect();
            let key = (composition, formula.charge, formula.phase.clone());
            let Some(&other) = seen.get(&key) else {
                seen.insert(key, s);
                continue;
            };
            // Only where the file itself writes one of them, and both can meet.
            let of = |s: usize| self.written_at(s, reactions);
            let (here, there) = (of(s), of(other));
            let (at, name, other_at, other) = match (here, there) {
                (Some(at), there) => (at, s, there, other),
                (None, Some(at)) => (at, other, None, s),
                (None, None) => continue,
            };
            if belonging.made[name].is_none() && belonging.made[other].is_none() {
                continue;
            }
            let kind = DefectKind::TwoNames {
                name: self.species[name].name.clone(),
                other: self.species[other].name.clone(),
                other_at,
            };
            self.resolver.report(at, kind);
        }
    }

    /// Where the file itself first writes a species: as a component or in a reaction.
    fn written_at(&self, s: usize, reactions: &[Arc<Reaction>]) -> Option<Place> {
        let component = self.components.iter().find(|c| c.species == s).and_then(|c| c.at);
        component.or_else(|| {
            reactions.iter().find_map(|reaction| {
                let place = reaction.origin.own()?;
                let participant = reaction
                    .participants
                    .iter()
                    .find(|p| p.formula.name == self.species[s].name)?;
                Some(Place { span: participant.span, ..place })
            })
        })
    }
}

/// Water's own reaction, with pKw(T) from IAPWS R11-07(2019).
fn water_reaction() -> Reaction {
    let participant = |text: &str, coefficient: i64| {
        // These three formulas are in every element table.
        Formula::parse(text, &Groups::default()).ok().map(|formula| Participant {
            formula: Arc::new(formula),
            coefficient: Rational64::from_integer(coefficient),
            span: Span::default(),
        })
    };
    Reaction {
        participants: [("H2O", -1), ("H+", 1), ("OH-", 1)]
            .iter()
            .filter_map(|(text, n)| participant(text, *n))
            .collect(),
        equation: "H2O <=> H+ + OH-".into(),
        constant: Some(Constant {
            kind: ConstantKind::PK,
            value: LogK::Water,
            uncertainty: None,
            span: Span::default(),
        }),
        enthalpy: None,
        heat_capacity: None,
        valid: Some((273.15, 373.15)),
        source: Some("IAPWS R11-07(2019)".into()),
        origin: Origin::Set { name: "water", edition: 1 },
        conserved: true,
    }
}
