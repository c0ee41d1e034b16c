//! Resolving a base or a case over its scope: conditions, amounts, held values, written
//! balances and expectations.

use std::sync::Arc;

use num_traits::ToPrimitive;

use super::amounts;
use super::belong::combined;
use super::blend::{self, Waters};
use super::charge_reading;
use super::curve;
use super::defect::{Defect, DefectKind, Expected};
use super::effective::Written;
use super::expect;
use super::held;
use super::input::Input;
use super::model::Problem;
use super::reaction::{Origin, STANDARD};
use super::resolve::Resolver;
use super::scope::Scope;
use super::solids;
use super::uncertain::{Carries, of_constants};
use super::written;
use crate::chemistry::activity::ActivityKind;
use crate::chemistry::formula::Formula;
use crate::chemistry::quantity::Scale;
use crate::text::span::{Part, Place};
use crate::text::tree::{Name, Statement, Use};

/// The work in hand for one base or case.
pub struct CaseResolver<'a> {
    pub resolver: Resolver,
    pub scope: &'a Scope,
    pub statements: &'a [Written<'a>],
    pub kelvin: f64,
    /// The file's scale, and where it was first seen.
    pub scale: Option<(Scale, Place)>,
    pub mixed: bool,
    /// Whether every statement that says how much there is could be read.
    pub all_amounts_read: bool,
}

/// Resolves the statements in force. `merging` are the defects found while merging.
/// `waters` are those of the parts of the blend in force.
pub fn resolve(
    statements: &[Written],
    merging: Vec<Defect>,
    scope: Arc<Scope>,
    waters: &Waters,
) -> Problem {
    let mut case = CaseResolver {
        resolver: Resolver::within(scope.clone()),
        scope: &scope,
        statements,
        kelvin: STANDARD,
        scale: None,
        mixed: false,
        all_amounts_read: true,
    };
    case.resolver.defects = merging;
    let mut problem = Problem {
        title: None,
        title_at: None,
        scope: scope.clone(),
        kelvin: STANDARD,
        temperature_at: None,
        activity: ActivityKind::Davies,
        activity_at: None,
        ionic_strength: None,
        scale: Scale::PerLitre,
        amounts: Vec::new(),
        blend: None,
        reagents: Vec::new(),
        held: Vec::new(),
        solids: Vec::new(),
        targets: Vec::new(),
        found: None,
        balances: Vec::new(),
        expectations: Vec::new(),
        curves: Vec::new(),
        log_k: Vec::new(),
        uncertain: Vec::new(),
        by_ln_density: Vec::new(),
        defects: Vec::new(),
        states_problem: statements.iter().any(|w| states_a_problem(w.statement())),
        blocked: false,
    };
    let blend = blend::read(&mut case, waters);
    if let Some(blend) = &blend {
        // Unless the file says another.
        case.kelvin = blend.kelvin();
        problem.kelvin = case.kelvin;
        problem.temperature_at = Some(blend.at);
    }
    conditions(&mut case, &mut problem);
    problem.blend = blend.and_then(|blend| blend::over_components(&mut case, blend));
    constants(&mut case, &mut problem);
    // Targets, read among the amounts, may ask for what forms of a solid.
    solids::read(&mut case, &mut problem);
    amounts::read(&mut case, &mut problem);
    held::read(&mut case, &mut problem);
    amounts::close(&mut case, &mut problem);
    problem.uncertain.extend(of_constants(&problem));
    problem.balances = written::read(&mut case, &problem);
    problem.expectations = expect::read(&mut case, &problem);
    problem.curves = curve::read(&mut case, &problem);
    // A case has only its own to add to what the base was told.
    let is_case = statements.iter().any(|written| written.part == Part::Case);
    for written in statements.iter().filter(|w| !is_case || w.part == Part::Case) {
        if !charge_reading::defines(written.statement()) {
            charge_reading::look(&mut case.resolver, written, &scope.balanced);
        }
    }
    if let Some((scale, _)) = case.scale {
        problem.scale = scale;
    }
    problem.defects = case.resolver.defects;
    problem.blocked = is_blocked(statements, &scope, &problem);
    problem
}

/// Temperature, activity model and ionic strength.
fn conditions(case: &mut CaseResolver, problem: &mut Problem) {
    for written in case.statements {
        match written.statement() {
            Statement::Problem { title } => {
                problem.title = Some(title.value.clone());
                problem.title_at = Some(written.whole());
            }
            Statement::Temperature { value } => {
                problem.temperature_at = Some(written.place(value.span));
                if let Some(read) = case.resolver.kelvin_read(written, value) {
                    problem.kelvin = read.value;
                    case.kelvin = read.value;
                    let carries = (Input::Temperature, Carries::Temperature);
                    let words = "temperature".into();
                    case.keep_uncertainty(problem, (written, value), carries, &read, words);
                }
            }
            Statement::Activity { model } => {
                problem.activity_at = Some(written.place(model.span));
                match ActivityKind::from_name(&model.value) {
                    Some(kind) => problem.activity = kind,
                    None => {
                        let word = model.value.clone();
                        let nearest = ActivityKind::nearest(&word).map(ActivityKind::name);
                        let kind = DefectKind::UnknownModel { word, nearest };
                        case.resolver.report(written.place(model.span), kind);
                    }
                }
            }
            _ => {}
        }
    }
    for written in case.statements {
        if let Statement::IonicStrength { value } = written.statement() {
            let read = case.concentration(written, value, None, Expected::Concentration);
            let Some(read) = read.filter(|_| case.not_negative(written, value)) else { continue };
            problem.ionic_strength = Some(read.value);
            let carries = (Input::IonicStrength, Carries::Positive);
            let words = "ionic strength".into();
            case.keep_uncertainty(problem, (written, value), carries, &read, words);
        }
    }
}

/// log10 K of the reactions in use at the problem's temperature.
fn constants(case: &mut CaseResolver, problem: &mut Problem) {
    let scope = case.scope;
    problem.log_k = vec![0.0; scope.reactions.len()];
    for (r, reaction) in scope.reactions_in_use() {
        let Some((log_k, issue)) = reaction.log_k(problem.kelvin) else { continue };
        problem.log_k[r] = log_k;
        let wanted = problem.kelvin;
        let own = match &reaction.origin {
            Origin::Own(place) => Some(*place),
            _ => None,
        };
        // Where water's own constant ends, so do its other properties: that is told as one.
        let Some(issue) = issue.filter(|_| !reaction.is_ion_product()) else { continue };
        let at = own.or(problem.temperature_at).or_else(|| first_use(case.statements));
        let Some(at) = at else { continue };
        let equation = reaction.equation.clone();
        let kind = DefectKind::at_temperature(issue, equation, wanted, own.is_some());
        case.resolver.report(at, kind);
    }
    for (_, combination) in &scope.belonging.cycles {
        // Told at the last of the file's own reactions in it; a set alone agrees with itself.
        let own = combination
            .iter()
            .filter_map(|&(r, n)| Some((scope.reactions[r].origin.own()?, n)))
            .max_by_key(|&(at, _)| at);
        let Some((at, share)) = own else { continue };
        let sum = combined(combination, |r| problem.log_k[r]);
        let by = sum / share.to_f64().unwrap_or(0.0);
        case.resolver.report(at, DefectKind::Follows { by });
    }
}

/// Where a constant that another file or set brought is told of, without a `temperature`.
fn first_use(statements: &[Written]) -> Option<Place> {
    statements.iter().find_map(|written| match written.statement() {
        Statement::Use(Use::Set { name, .. } | Use::File { path: name }) => {
            Some(written.place(name.span))
        }
        _ => None,
    })
}

impl CaseResolver<'_> {
    /// The species of a name that is spoken of; a defect where it does not belong.
    pub fn species(&mut self, written: &Written, name: &Name) -> Option<usize> {
        let formula = self.resolver.formula(written, name)?;
        let known = self.scope.find(&formula.name);
        if let Some(s) = known.filter(|&s| self.scope.belongs(s)) {
            return Some(s);
        }
        let missing = known.map_or_else(Vec::new, |s| self.scope.missing_for(s));
        let nearest = self.nearest_species(&formula);
        let kind = DefectKind::DoesNotBelong { name: formula.name.clone(), missing, nearest };
        self.resolver.report(written.place(name.span), kind);
        None
    }

    /// The component of a name; a defect where it is none.
    pub fn component(&mut self, written: &Written, name: &Name) -> Option<usize> {
        let formula = self.resolver.formula(written, name)?;
        if let Some(j) = self.scope.component(&formula.name) {
            return Some(j);
        }
        let kind = DefectKind::NotAComponent {
            name: formula.name.clone(),
            components: self.components_of(&formula),
        };
        self.resolver.report(written.place(name.span), kind);
        None
    }

    /// The declared components that a species is made of.
    fn components_of(&self, formula: &Formula) -> Vec<String> {
        let row = self
            .scope
            .find(&formula.name)
            .and_then(|s| self.scope.belonging.made[s].as_ref())
            .map(|made| made.row.clone())
            .unwrap_or_default();
        row.iter()
            .filter(|&&(j, _)| j != super::scope::PROTON)
            .map(|&(j, _)| self.scope.components[j].formula.name.clone())
            .collect()
    }

    /// A species that belongs and is made of the same matter, or nearly so spelt.
    fn nearest_species(&self, formula: &Formula) -> Option<String> {
        let names = || {
            (0..self.scope.species.len())
                .filter(|&s| self.scope.belongs(s))
                .map(|s| &self.scope.species[s])
        };
        names().find(|other| other.same_matter(formula)).map(|other| other.name.clone()).or_else(
            || {
                names()
                    .map(|other| (strsim::osa_distance(&other.name, &formula.name), &other.name))
                    // Short names are all near to one another.
                    .filter(|(distance, name)| *distance <= 2 && distance * 3 < name.len())
                    .min()
                    .map(|(_, name)| name.clone())
            },
        )
    }
}

/// Whether a statement makes a problem of what would else be definitions alone.
fn states_a_problem(statement: &Statement) -> bool {
    matches!(
        statement,
        Statement::Component { .. }
            | Statement::Total { .. }
            | Statement::Add { .. }
            | Statement::Blend { .. }
            | Statement::Hold { .. }
            | Statement::Precipitate { .. }
            | Statement::Saturate { .. }
            | Statement::Expect { .. }
            | Statement::Balance { .. }
    )
}

/// Whether a statement that states conditions, matter or amounts is broken: then a number
/// would be an answer to another question.
fn is_blocked(statements: &[Written], scope: &Scope, problem: &Problem) -> bool {
    let counts = |at: Place| {
        // In the order of the text, the base before the case.
        statements
            .binary_search_by_key(&(at.section, at.statement), |w| (w.part, w.index))
            .is_ok_and(|found| !is_about_answers(&statements[found]))
    };
    statements.iter().any(|w| !w.parsed.is_read_whole() && !is_about_answers(w))
        || scope
            .defects
            .iter()
            .chain(&problem.defects)
            .any(|defect| defect.kind.blocks_solving() && counts(defect.at))
}

fn is_about_answers(written: &Written) -> bool {
    match written.statement() {
        Statement::Problem { .. }
        | Statement::Expect { .. }
        | Statement::Balance { .. }
        | Statement::Case { .. }
        | Statement::Curve { .. } => true,
        Statement::Broken => {
            let word = written.parsed.text.split_whitespace().next().unwrap_or_default();
            matches!(word, "problem" | "expect" | "balance" | "case" | "curve")
        }
        _ => false,
    }
}
