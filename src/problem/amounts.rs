//! Totals and reagents: how much of each component there is.

use std::sync::Arc;

use num_rational::Rational64;
use num_traits::{Signed, ToPrimitive};

use super::case::CaseResolver;
use super::curve;
use super::defect::{DefectKind, Expected};
use super::effective::Written;
use super::input::Input;
use super::model::{Amount, AmountSource, HeldWhat, Presence, Problem, Reagent};
use super::resolve::differences;
use super::scope::PROTON;
use super::sparse::{Row, add_scaled};
use super::split::{Split, split};
use super::strength::StockRead;
use super::target;
use super::uncertain::Carries;
use crate::chemistry::formula::Formula;
use crate::text::parse::KEYWORDS;
use crate::text::span::Place;
use crate::text::tree::{Member, Name, Quantity, Statement, Strength};

/// Reads `total` and `add`.
pub fn read(case: &mut CaseResolver, problem: &mut Problem) {
    problem.amounts = vec![Amount::default(); case.scope.components.len()];
    if let Some(blend) = &problem.blend {
        for (j, amount) in problem.amounts.iter_mut().enumerate().skip(1) {
            if let Some(total) = blend.total(j) {
                let (at, source) = (Some(blend.at), AmountSource::Blend);
                *amount = Amount { total: Some(total), at, source };
            }
        }
    }
    for written in case.statements {
        match written.statement() {
            Statement::Total { component, value } => {
                let read = total(case, problem, written, component, value);
                case.all_amounts_read &= read.is_some();
            }
            Statement::Add { reagent, amount, giving, stock } => {
                let what = (reagent, amount, stock.as_ref(), giving.as_deref());
                let read = add(case, problem, written, what);
                case.all_amounts_read &= read.is_some();
            }
            Statement::Broken => case.all_amounts_read &= !may_be_amount(written),
            _ => {}
        }
    }
    case.all_amounts_read &= curve::reagents(case, problem);
    target::read(case, problem);
    for reagent in &problem.reagents {
        for &(j, n) in reagent.row.iter().filter(|&&(j, _)| j != PROTON) {
            let brought = n.to_f64().unwrap_or(0.0) * reagent.amount;
            let amount = &mut problem.amounts[j];
            match amount.source {
                AmountSource::Total | AmountSource::Found(_) => {
                    if let Some(at) = amount.at {
                        let name = case.scope.components[j].formula.name.clone();
                        let kind = DefectKind::TotalAndReagent { name, reagent: reagent.at };
                        case.resolver.report(at, kind);
                    }
                }
                _ => {
                    if amount.source != AmountSource::Blend {
                        amount.source = AmountSource::Reagents;
                    }
                    amount.total = Some(amount.total.unwrap_or(0.0) + brought);
                    amount.at.get_or_insert(reagent.at);
                }
            }
        }
    }
}

/// Whether a broken statement was to say how much of something there is.
fn may_be_amount(written: &Written) -> bool {
    let word = written.parsed.text.split_whitespace().next().unwrap_or_default();
    matches!(word, "total" | "add" | "hold" | "blend") || !KEYWORDS.contains(&word)
}

/// None where it could not be read.
fn total(
    case: &mut CaseResolver,
    problem: &mut Problem,
    written: &Written,
    component: &Name,
    value: &Quantity,
) -> Option<()> {
    let j = case.component(written, component)?;
    let formula = case.scope.components[j].formula.clone();
    let read = case.concentration(written, value, Some(&formula), Expected::Concentration)?;
    let at = written.whole();
    if j == PROTON {
        let kind = DefectKind::NothingFree { subject: "total H+".into(), given: None };
        case.resolver.report(at, kind);
        return None;
    }
    if read.value < 0.0 && !formula.is_electron() {
        let kind = DefectKind::NegativeTotal { name: formula.name.clone(), value: read.value };
        case.resolver.report(written.place(value.span), kind);
        return None;
    }
    let given = &problem.amounts[j];
    if let (AmountSource::Blend, Some(blend), true) =
        (given.source, given.at, given.total != Some(0.0))
    {
        let kind = DefectKind::TotalAndBlend { name: formula.name.clone(), blend };
        case.resolver.report(at, kind);
        return None;
    }
    problem.amounts[j] =
        Amount { total: Some(read.value), at: Some(at), source: AmountSource::Total };
    let carries = if formula.is_electron() { Carries::Signed } else { Carries::Positive };
    let words = format!("total {}", formula.name);
    case.keep_uncertainty(problem, (written, value), (Input::Total(j), carries), &read, words);
    Some(())
}

type Put<'a> = (&'a Name, &'a Quantity, Option<&'a Strength>, Option<&'a [Member]>);

/// None where it could not be read.
fn add(
    case: &mut CaseResolver,
    problem: &mut Problem,
    written: &Written,
    (name, amount, strength, giving): Put,
) -> Option<()> {
    let formula = neutral(case, written, name, giving.is_some())?;
    let read = match strength {
        Some(strength) => Some(case.stock(written, strength, &formula)?),
        None => None,
    };
    let (stock, stated) = read.unzip();
    let read = case.dose(written, amount, &formula, stock.as_deref())?;
    if !case.not_negative(written, amount) {
        return None;
    }
    let brings = case.carried(stock.as_deref(), read.value);
    let (row, giving) = row(case, written, name, &formula, giving)?;
    let known = problem.reagents.iter().position(|r| r.formula.name == formula.name);
    let index = known.unwrap_or(problem.reagents.len());
    let words = format!("add {}", formula.name);
    let carries = (Input::Reagent(index), Carries::Positive);
    case.keep_uncertainty(problem, (written, amount), carries, &read, words);
    if let (Some(strength), Some(stated), Some(stock)) = (strength, stated, &stock) {
        let stock = StockRead { written: strength, strength: stated, stock };
        let put = (written, amount, formula.as_ref());
        case.keep_stock_uncertainty(problem, put, &stock, (index, read.value));
    }
    if let Some(known) = known.and_then(|known| problem.reagents.get_mut(known)) {
        known.amount += read.value;
        known.brings += brings;
        known.stock = known.stock.take().filter(|one| Some(one) == stock.as_ref());
        return Some(());
    }
    let at = written.place(name.span);
    let amount = read.value;
    problem.reagents.push(Reagent {
        formula,
        at,
        amount,
        brings,
        stock,
        target: None,
        row,
        giving,
    });
    Some(())
}

/// A reagent over the components of the scope, none of it put in; a defect where it cannot
/// be taken apart.
pub(super) fn reagent(
    case: &mut CaseResolver,
    written: &Written,
    name: &Name,
    giving: Option<&[Member]>,
) -> Option<Reagent> {
    let formula = neutral(case, written, name, giving.is_some())?;
    let (row, giving) = row(case, written, name, &formula, giving)?;
    let at = written.place(name.span);
    Some(Reagent { formula, at, amount: 0.0, brings: 0.0, stock: None, target: None, row, giving })
}

/// The formula of a reagent, which must be neutral. `afresh` does not look whether it was put
/// in before.
pub(super) fn neutral(
    case: &mut CaseResolver,
    written: &Written,
    name: &Name,
    afresh: bool,
) -> Option<Arc<Formula>> {
    let known = case.scope.reagents.get(&name.value).filter(|_| !afresh);
    let formula = match known {
        Some((formula, _)) => formula,
        None => case.resolver.formula(written, name)?,
    };
    if formula.charge != 0 {
        let charge = i64::from(formula.charge);
        let kind = DefectKind::ReagentNotNeutral { name: formula.name.clone(), charge };
        case.resolver.report(written.place(name.span), kind);
        return None;
    }
    Some(formula)
}

type Forms = Option<Vec<(usize, Rational64)>>;

/// What one mole of a reagent is over the components, and the forms that `giving` names.
pub(super) fn row(
    case: &mut CaseResolver,
    written: &Written,
    name: &Name,
    formula: &Arc<Formula>,
    giving: Option<&[Member]>,
) -> Option<(Row, Forms)> {
    if let Some(members) = giving {
        let pieces = given(case, written, formula, members)?;
        return Some((row_over_components(case, &pieces)?, Some(forms(case, &pieces))));
    }
    if let Some((_, row)) = case.scope.reagents.get(&name.value) {
        return Some((row, None));
    }
    let pieces = taken_apart(case, written.place(name.span), formula)?;
    let row = row_over_components(case, &pieces)?;
    case.scope.reagents.keep(&name.value, formula, &row);
    Some((row, None))
}

/// A reagent as species; a defect where it is not to be had from those in scope.
fn taken_apart(
    case: &mut CaseResolver,
    at: Place,
    formula: &Formula,
) -> Option<Vec<(usize, Rational64)>> {
    let name = formula.name.clone();
    let kind = match split(formula, case.scope) {
        Split::Into(pieces) => return Some(pieces),
        Split::NotUnique => DefectKind::ReagentNotUnique { name },
        Split::Foreign(element) => DefectKind::ReagentHoldsForeign { name, element },
        Split::Impossible => DefectKind::ReagentNotMade { name },
    };
    case.resolver.report(at, kind);
    None
}

/// What `giving` names, once it adds up to the reagent.
fn given(
    case: &mut CaseResolver,
    written: &Written,
    formula: &Arc<Formula>,
    members: &[Member],
) -> Option<Vec<(usize, Rational64)>> {
    let mut both = case.resolver.side(written, members, 1)?;
    let mut pieces = Vec::with_capacity(both.len());
    for (member, participant) in members.iter().zip(&both) {
        pieces.push((case.species(written, &member.name)?, participant.coefficient));
    }
    both.push(super::reaction::Participant {
        formula: formula.clone(),
        coefficient: Rational64::from_integer(-1),
        span: Default::default(),
    });
    let span = members.first()?.span.to(members.last()?.span);
    let differences = differences(&both)?;
    for (what, left, right) in &differences {
        let kind =
            DefectKind::GivingNotConserved { what: what.clone(), left: *left, right: *right };
        case.resolver.report(written.place(span), kind);
    }
    differences.is_empty().then_some(pieces)
}

fn row_over_components(case: &CaseResolver, pieces: &[(usize, Rational64)]) -> Option<Row> {
    let mut row = Row::new();
    for &(s, n) in pieces {
        row = add_scaled(&row, n, &case.scope.belonging.made[s].as_ref()?.row)?;
    }
    Some(row)
}

/// The dissolved species among what `giving` names; protons, hydroxide and water are no
/// forms.
fn forms(case: &CaseResolver, pieces: &[(usize, Rational64)]) -> Vec<(usize, Rational64)> {
    pieces
        .iter()
        .filter(|&&(s, _)| {
            let formula = &case.scope.species[s];
            !formula.is_proton() && !formula.is_hydroxide()
        })
        .filter_map(|&(s, n)| Some((case.scope.row_of(s)?, n)))
        .collect()
}

/// What each component's total now is; reports those that nothing gives.
pub fn close(case: &mut CaseResolver, problem: &mut Problem) {
    if !problem.states_problem {
        return;
    }
    let unread = !case.all_amounts_read;
    for j in 1..problem.amounts.len() {
        let component = &case.scope.components[j];
        if problem.amounts[j].source != AmountSource::Nothing || component.formula.is_electron() {
            continue;
        }
        let Some(at) = component.at else { continue };
        // A held gas, or another phase of unknown amount, may bring it; so may a statement
        // that could not be read, and has its own finding.
        if supplied_by_phase(case, problem, j) || unread {
            continue;
        }
        let name = component.formula.name.clone();
        let kind = if is_spoken_of(case, &name) {
            DefectKind::TotalMissing { name }
        } else {
            DefectKind::ComponentUnused { name }
        };
        case.resolver.report(at, kind);
    }
    for (j, amount) in problem.amounts.iter().enumerate().skip(1) {
        if let (Some(total), Some(at), AmountSource::Reagents) =
            (amount.total, amount.at, amount.source)
            && total < 0.0
            && !case.scope.components[j].formula.is_electron()
            && !may_be_negative(case, j)
        {
            let name = case.scope.components[j].formula.name.clone();
            case.resolver.report(at, DefectKind::NegativeTotal { name, value: total });
        }
    }
}

/// A component that stands with a minus in some species may have a total below zero.
fn may_be_negative(case: &CaseResolver, component: usize) -> bool {
    case.scope
        .stoichiometry
        .species
        .iter()
        .any(|species| species.row.iter().any(|&(j, n)| j == component && n.is_negative()))
}

/// Whether a held gas or a solid in excess holds the component.
fn supplied_by_phase(case: &CaseResolver, problem: &Problem, component: usize) -> bool {
    let gases = problem.held.iter().filter_map(|held| match held.what {
        HeldWhat::Pressure { species, .. } => Some(species),
        _ => None,
    });
    let solids = problem.solids_that_are(Presence::Excess).map(|solid| solid.species);
    gases.chain(solids).any(|species| {
        let made = case.scope.belonging.made[species].as_ref();
        made.is_some_and(|made| made.row.iter().any(|&(j, _)| j == component))
    })
}

/// Whether another statement than `component` and `reaction` names a species that holds it.
fn is_spoken_of(case: &CaseResolver, component: &str) -> bool {
    let Some(j) = case.scope.component(component) else { return false };
    let mut spoken = false;
    for written in case.statements {
        let mut look = |name: &Name| {
            let canonical = crate::chemistry::formula::canonical(&name.value);
            if let Some(s) = case.scope.find(&canonical)
                && let Some(made) = &case.scope.belonging.made[s]
            {
                spoken |= made.row.iter().any(|&(k, _)| k == j);
            }
        };
        if matches!(
            written.statement(),
            Statement::Hold { .. }
                | Statement::Expect { .. }
                | Statement::Balance { .. }
                | Statement::Precipitate { .. }
                | Statement::Saturate { .. }
        ) {
            written.statement().each_formula(&mut look);
        }
    }
    spoken
}
