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
use super::reaction::{Constant, LogK, Origin, Participant, Reaction, key};
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
        let mut brought = Vec::new();
        let several = uses.len() > 1;
        for (at, result) in uses {
            match result {
                Ok(definitions) => {
                    if definitions.errors > 0
                        && let Some(path) = definitions.files.first()
                    {
                        let (path, count) = (path.clone(), definitions.errors);
                        resolver.report(at, DefectKind::ImportBroken { path, count });
                    }
                    brought.push(definitions);
                }
                Err(kind) => resolver.report(at, kind),
            }
        }
        let mut used = Definitions::default();
        used.join(brought.iter().map(Arc::as_ref));
        resolver.groups.extend(&used.groups);
        resolver.declare_groups(statements);
        let own = Origin::Own(Place {
            section: crate::text::span::Part::Base,
            statement: 0,
            span: Span::default(),
        });
        let mut reactions = resolver.reactions(statements, &own);
        // A group that means something else here takes the used reactions with it that were
        // written with the other meaning.
        if several || statements.iter().any(|w| matches!(w.statement(), Statement::Group { .. })) {
            used.reactions.retain(|reaction| resolver.means_the_same(reaction));
        }
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

    /// Two names for one composition, charge and phase: only where the file itself writes
    /// one of them, and the species meet.
    fn report_names(&mut self, belonging: &Belonging, reactions: &[Arc<Reaction>]) {
        let written = self.written(reactions);
        let mut pairs: Vec<(usize, usize)> = Vec::new();
        for &s in written.keys() {
            let formula = &self.species[s];
            if formula.is_electron() || formula.composite || formula.elements().is_none() {
                continue;
            }
            let same = (0..self.species.len()).filter(|&other| {
                let other_formula = &self.species[other];
                other != s && !other_formula.composite && other_formula.same_matter(formula)
            });
            pairs.extend(same.map(|other| (s.max(other), s.min(other))));
        }
        pairs.sort_unstable();
        pairs.dedup();
        for (s, other) in pairs {
            let (here, there) = (written.get(&s).copied(), written.get(&other).copied());
            let (at, name, other_at, other) = match (here, there) {
                (Some(at), there) => (at, s, there, other),
                (None, Some(at)) => (at, other, None, s),
                (None, None) => continue,
            };
            if belonging.made[name].is_none() && belonging.made[other].is_none() {
                continue;
            }
            // Isomers: two substances that a set or a file tells apart.
            let is_used = |s: usize| {
                let name = &self.species[s].name;
                let of_used = |reaction: &&Arc<Reaction>| reaction.origin.own().is_none();
                let mut used = reactions.iter().filter(of_used);
                used.any(|reaction| reaction.participants.iter().any(|p| p.formula.name == *name))
            };
            if is_used(name) && is_used(other) {
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

    /// The species that the file itself writes, with the first place of each: as a component
    /// or in a reaction.
    fn written(&self, reactions: &[Arc<Reaction>]) -> BTreeMap<usize, Place> {
        let mut written = BTreeMap::new();
        for component in &self.components {
            if let Some(at) = component.at {
                written.entry(component.species).or_insert(at);
            }
        }
        for reaction in reactions {
            let Some(place) = reaction.origin.own() else { continue };
            for participant in &reaction.participants {
                if let Some(&s) = self.index.get(&participant.formula.name) {
                    let at = Place { span: participant.span, ..place };
                    written.entry(s).or_insert(at);
                }
            }
        }
        written
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
    let participants: Vec<_> = [("H2O", -1), ("H+", 1), ("OH-", 1)]
        .iter()
        .filter_map(|(text, n)| participant(text, *n))
        .collect();
    Reaction {
        equation: "H2O <=> H+ + OH-".into(),
        key: key(&participants),
        participants,
        constant: Some(Constant {
            kind: ConstantKind::PK,
            value: LogK::Water,
            uncertainty: None,
            span: Span::default(),
        }),
        enthalpy: None,
        heat_capacity: None,
        enthalpy_uncertainty: None,
        heat_capacity_uncertainty: None,
        valid: Some((273.15, 373.15)),
        source: Some("IAPWS R11-07(2019)".into()),
        origin: Origin::Set { name: "water", edition: 1 },
        conserved: true,
    }
}
