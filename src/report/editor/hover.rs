//! What is known of the thing under the cursor: a species, or a reaction.

use num_traits::ToPrimitive;

use crate::chemistry::activity::ActivityKind;
use crate::chemistry::formula::{Phase, canonical};
use crate::equilibrium::quantities::Solved;
use crate::problem::blend::Portion;
use crate::problem::curve::Curve;
use crate::problem::model::{Problem, Reagent, Sought};
use crate::problem::reaction::{Origin, Reaction};
use crate::problem::scope::PROTON;
use crate::report::curve::ends;
use crate::report::dose;
use crate::report::expectation::quantity_words;
use crate::report::figures::{
    celsius, charge, concentration, decimals, equivalents, log10_of_exp, percent, significant,
};
use crate::report::inline::Hover;
use crate::report::solids::fate_words;
use crate::report::uncertainty;
use crate::report::waters::{share_words, source_words};
use crate::rules::check::Checked;
use crate::rules::outcome::Outcome;
use crate::text::span::{Part, Place, Span};
use crate::text::tree::{ConstantKind, Name, Placed, Statement};

/// What is known of the thing at an offset of the file, or just before it.
pub fn hover(checked: &Checked, offset: usize) -> Option<Hover> {
    let (section, index, placed) = statement_at(checked, offset)?;
    let outcome = &checked.outcomes[section];
    let inside = (offset - placed.start) as u32;
    let mut named: Option<&Name> = None;
    placed.parsed.statement.each_formula(&mut |name| {
        // At a border the later name wins: it is the one the cursor stands on.
        if name.span.start <= inside && inside <= name.span.end {
            named = Some(name);
        }
    });
    let range = |span: Span| placed.start + span.start as usize..placed.start + span.end as usize;
    if let Some(name) = named
        && let Some(markdown) = species(outcome, &canonical(&name.value))
    {
        return Some(Hover { range: range(name.span), markdown });
    }
    if let Statement::Activity { model } = &placed.parsed.statement
        && model.span.start <= inside
        && let Some(kind) = ActivityKind::from_name(&model.value)
    {
        return Some(Hover { range: range(model.span), markdown: activity(kind) });
    }
    if let Statement::Blend { parts } = &placed.parsed.statement
        && let Some(blend) = &outcome.problem.blend
        && let Some(index) =
            parts.iter().position(|part| part.span.start <= inside && inside <= part.span.end)
        && let Some(portion) = blend.portions.get(index)
    {
        let markdown = portion_words(portion);
        return Some(Hover { range: range(parts[index].span), markdown });
    }
    if let Statement::Reaction(tree) = &placed.parsed.statement
        && tree.equation.start <= inside
    {
        let part = if section == 0 { Part::Base } else { Part::Case };
        let scope = &outcome.problem.scope;
        let own = scope.reactions.iter().enumerate().find(|(_, reaction)| {
            reaction
                .origin
                .own()
                .is_some_and(|at| at.section == part && at.statement as usize == index)
        });
        if let Some((r, reaction)) = own {
            let markdown = reaction_words(outcome, r, reaction);
            return Some(Hover { range: range(tree.equation), markdown });
        }
    }
    let part = if section == 0 { Part::Base } else { Part::Case };
    let here = |curve: &&Curve| curve.at.section == part && curve.at.statement as usize == index;
    if let Some(curve) = outcome.problem.curves.iter().find(here)
        && outcome.solved().is_some()
    {
        // Solved only now: a check does not follow curves.
        let markdown = ends(&outcome.problem, curve);
        return Some(Hover { range: range(curve.at.span), markdown });
    }
    if let Statement::Expect { .. } = &placed.parsed.statement {
        let here = |at: Place| at.section == part && at.statement as usize == index;
        let expectation = outcome.problem.expectations.iter().find(|e| here(e.at))?;
        let markdown = uncertainty::hover(outcome, expectation)?;
        return Some(Hover { range: range(expectation.at.span), markdown });
    }
    None
}

/// The water of a blend's part, as its own file solves it.
fn portion_words(portion: &Portion) -> String {
    let water = &portion.water;
    let lines = [
        format!("**{}** of {}", share_words(portion.share), source_words(portion)),
        format!("{}, pH {}", celsius(water.kelvin), decimals(water.ph, 3)),
        format!("alkalinity {}", equivalents(water.alkalinity, water.scale)),
    ];
    lines.join("\n\n")
}

fn statement_at(checked: &Checked, offset: usize) -> Option<(usize, usize, &Placed)> {
    let pieces = &checked.document.pieces;
    let at = pieces.partition_point(|piece| piece.end <= offset).min(pieces.len().checked_sub(1)?);
    // Just behind the last character of a statement still means that statement.
    let piece = [at, at.saturating_sub(1)]
        .into_iter()
        .map(|at| &pieces[at])
        .find(|piece| piece.statement.is_some() && piece.start <= offset && offset <= piece.end)?;
    let (section, index) = piece.statement?;
    let (section, index) = (section as usize, index as usize);
    Some((section, index, &checked.document.sections[section].statements[index]))
}

/// What an activity model is, and how far it reaches.
fn activity(kind: ActivityKind) -> String {
    let what = match kind {
        ActivityKind::Ideal => "all activity coefficients are one",
        ActivityKind::DebyeHuckel => "the limiting law of Debye and Hückel",
        ActivityKind::ExtendedDebyeHuckel => "Debye and Hückel, with the sizes of Kielland's table",
        ActivityKind::Guntelberg => "Güntelberg's form, one for all ions",
        ActivityKind::Davies => "Davies' form, one for all ions",
        ActivityKind::Pitzer => {
            "Pitzer's ion interactions at 25 °C, from the amount of each ion; the activity of \
             water comes with them"
        }
    };
    let reach = match (kind, kind.range_limit()) {
        (_, None) => "no ionic strength of its own; for very dilute water, or with constants that \
                      were measured in the medium"
            .to_owned(),
        (ActivityKind::Pitzer, Some(limit)) => format!(
            "up to an ionic strength of {limit} mol/kg at most, less for some salts, between 15 \
             and 35 °C"
        ),
        (_, Some(limit)) => format!("up to an ionic strength of {limit} mol/kg"),
    };
    format!("**{}** · {what}\n\n{reach}", kind.name())
}

/// So many reactions of one species are told.
const SHOWN_REACTIONS: usize = 4;

/// Name, charge, molar mass; amount, share and constants where it is solved.
fn species(outcome: &Outcome, name: &str) -> Option<String> {
    let problem = &outcome.problem;
    let scope = &problem.scope;
    let reagent = problem.reagents.iter().find(|reagent| reagent.formula.name == name);
    let formula = match scope.find(name) {
        Some(s) => scope.species[s].clone(),
        None => reagent?.formula.clone(),
    };
    let mut lines = Vec::new();
    let mut head = format!("**{name}**");
    let component = scope.component(name);
    if let Some(title) = component.and_then(|j| scope.components[j].title.as_ref()) {
        head += &format!(" · {title}");
    }
    if formula.charge != 0 {
        head += &format!(" · charge {}", charge(formula.charge));
    }
    if let Some(mass) = formula.molar_mass() {
        head += &format!(" · {} g/mol", decimals(mass, 3));
    }
    lines.push(head);
    if let Some(reagent) = reagent {
        lines.extend(put_in(problem, reagent));
    }
    if let Some(solved) = outcome.solved().filter(|_| formula.is_electron()) {
        lines.extend(electrons(problem, solved));
    }
    match (scope.find(name), outcome.solved()) {
        (Some(s), Some(solved)) if scope.belongs(s) => {
            lines.extend(state(problem, solved, s));
            if let Some(j) = component.filter(|&j| j != PROTON) {
                let total = concentration(solved.dissolved(j), problem.scale);
                lines.push(format!("total over all its forms: {total}"));
                let in_solids = solved.solid_total(j);
                if in_solids != 0.0 {
                    let amount = concentration(in_solids, problem.scale);
                    lines.push(format!("in solids that formed: {amount}"));
                }
            }
        }
        (Some(s), _) if !scope.belongs(s) => {
            lines.push("not part of this problem: no listed component leads to it".into());
        }
        _ => {}
    }
    if let Some(s) = scope.find(name)
        && let Some(made) = &scope.belonging.made[s]
    {
        // A component is made by no reaction: those that it takes part in say what it does.
        let of_itself = scope.reactions_in_use().filter(|(_, reaction)| {
            made.combination.is_empty()
                && reaction.participants.iter().any(|p| p.formula.name == name)
        });
        let making = made.combination.iter().map(|&(r, _)| r);
        for r in making.chain(of_itself.map(|(r, _)| r)).take(SHOWN_REACTIONS) {
            let reaction = &scope.reactions[r];
            lines.push(format!("`{}`: {}", reaction.equation, constant(problem, r, reaction)));
            lines.push(whence(reaction));
        }
    }
    Some(lines.join("\n\n"))
}

/// How much of a reagent is put in, as it is weighed and pumped, and for what.
fn put_in(problem: &Problem, reagent: &Reagent) -> Vec<String> {
    let sought = reagent.target.and_then(|index| problem.targets.get(index));
    if sought.is_some() && problem.found.is_none() {
        return Vec::new();
    }
    let mut amount = format!("put in: {}", concentration(reagent.amount, problem.scale));
    if let Some(stock) = dose::stock_words(problem, reagent) {
        amount += &format!(", {stock}");
    }
    let found = sought.map(|target| {
        let unit = target.unit.as_ref();
        let wanted = quantity_words(problem, unit, target.sought, target.wanted);
        format!("found for {} {wanted}; try it on a sample before it is dosed", target.words)
    });
    std::iter::once(amount).chain(found).collect()
}

/// pe, and the potential that an electrode would have.
fn electrons(problem: &Problem, solved: &Solved) -> Option<String> {
    let pe = solved.value(problem, Sought::Pe)?;
    let volts = solved.value(problem, Sought::Potential)?;
    Some(format!(
        "pe {}: {} V against the standard hydrogen electrode",
        decimals(pe, 3),
        decimals(volts, 3)
    ))
}

/// Concentration, activity and share of a dissolved species; pressure of a gas; saturation
/// of a solid.
fn state(problem: &Problem, solved: &Solved, s: usize) -> Vec<String> {
    let scope = &problem.scope;
    let Some(ln_activity) = solved.ln_activity(problem, s) else { return Vec::new() };
    match &scope.species[s].phase {
        Phase::Gas => {
            vec![format!("pressure in equilibrium: {} atm", significant(ln_activity.exp(), 3))]
        }
        Phase::Solid(_) => {
            let index = decimals(log10_of_exp(ln_activity), 2);
            let mut lines = vec![format!("saturation index: {index}")];
            let stated = problem.solids.iter().find(|solid| solid.species == s);
            lines.extend(stated.map(|solid| fate_words(problem, solved, solid)));
            lines
        }
        _ => {
            let Some(row) = scope.row_of(s) else { return Vec::new() };
            let mut words = concentration(solved.answer.concentrations[row], problem.scale);
            words += &format!(
                ", activity {} (γ {})",
                significant(ln_activity.exp(), 3),
                decimals(solved.answer.ln_gammas[row].exp(), 3),
            );
            let mut lines = vec![words];
            let shares = scope.stoichiometry.species[row].row.iter().map(|&(j, _)| j);
            let electron = scope.component("e-");
            for j in shares.filter(|&j| j != PROTON && Some(j) != electron) {
                let total = solved.dissolved(j);
                if let Some((_, share)) = solved.shares(j).find(|&(i, _)| i == row)
                    && total > 0.0
                {
                    let component = &scope.components[j].formula.name;
                    lines.push(format!("{} of {component}", percent(share / total)));
                }
            }
            lines
        }
    }
}

/// The constant in the word it was given with, at the problem's temperature.
fn constant(problem: &Problem, r: usize, reaction: &Reaction) -> String {
    let log_k = problem.log_k[r];
    let word = match reaction.constant.as_ref().map(|constant| constant.kind) {
        Some(ConstantKind::PKa) => format!("pKa {}", decimals(-log_k, 3)),
        Some(ConstantKind::PKsp) => format!("pKsp {}", decimals(-log_k, 3)),
        Some(ConstantKind::PK) => format!("pK {}", decimals(-log_k, 3)),
        Some(ConstantKind::LogBeta) => format!("log β {}", decimals(log_k, 3)),
        _ => format!("log K {}", decimals(log_k, 3)),
    };
    format!("{word} at {}", celsius(problem.kelvin))
}

/// Where a reaction's constant comes from.
fn whence(reaction: &Reaction) -> String {
    let source = reaction.source.as_deref().unwrap_or("no source is given");
    match &reaction.origin {
        Origin::Own(_) => format!("source: {source}"),
        other => format!("source: {source}, by {}", other.words()),
    }
}

fn reaction_words(outcome: &Outcome, r: usize, reaction: &Reaction) -> String {
    let problem = &outcome.problem;
    let mut lines = vec![format!("`{}`", reaction.equation)];
    if reaction.constant.is_some() {
        if problem.scope.belonging.used[r] {
            let mut words = constant(problem, r, reaction);
            if let Some(u) = reaction.constant.as_ref().and_then(|constant| constant.uncertainty) {
                words += &format!(", ± {}", significant(u, 2));
            }
            lines.push(words);
        } else {
            lines.push("not part of this problem: no listed component leads to it".into());
        }
    }
    if let Some(solved) = outcome.solved().filter(|_| problem.scope.belonging.used[r]) {
        let shift: f64 = reaction
            .participants
            .iter()
            .filter_map(|participant| {
                let s = problem.scope.find(&participant.formula.name)?;
                let row = problem.scope.row_of(s)?;
                Some(participant.coefficient.to_f64()? * solved.answer.ln_gammas[row])
            })
            .sum();
        let ionic = concentration(solved.answer.ionic_strength, problem.scale);
        let log_k = problem.log_k[r] - log10_of_exp(shift);
        lines.push(format!("in concentrations at I {ionic}: log K {}", decimals(log_k, 3)));
    }
    if let Some(enthalpy) = reaction.enthalpy {
        lines.push(format!("enthalpy {} kJ/mol", significant(enthalpy / 1000.0, 4)));
    }
    if let Some((low, high)) = reaction.valid {
        lines.push(format!("valid {} to {}", celsius(low), celsius(high)));
    }
    lines.push(whence(reaction));
    lines.join("\n\n")
}
