//! An answer as text for a terminal.

use super::curve::Traced;
use super::dose;
use super::expectation::{
    Standing, asked, is_met, probability_words, uncertain_words, value_words, verdict,
};
use super::figures::{
    celsius, concentration, decimals, percent, scale_unit, scientific, significant,
};
use super::sheet::{Entry, Ledger, Sheet};
use super::solids;
use super::solution::in_phase;
use super::source::{Source, Stated};
use super::style::{Paint, Style};
use super::summary::counted;
use super::table::{Cell, Side, Table};
use super::uncertainty;
use super::waters::{blend, hardness_words, ion_balance};
use crate::chemistry::activity::ActivityKind;
use crate::chemistry::constant::volts_per_pe;
use crate::chemistry::formula::Phase;
use crate::chemistry::quantity::Scale;
use crate::equilibrium::quantities::Solved;
use crate::problem::model::{HeldWhat, Problem, Sought};
use crate::problem::scope::PROTON;
use crate::rules::check::{Checked, locate_place};
use crate::rules::outcome::Outcome;

/// The conditions, the pH and every table that applies.
pub fn answer(
    source: &Source,
    checked: &Checked,
    stated: Stated,
    solved: &Solved,
    curves: &[Traced],
    style: Style,
) -> String {
    let problem = &stated.outcome.problem;
    let mut text = conditions(problem) + "\n\n";
    text += &main_figures(stated.outcome, solved, style);
    let ledger = Ledger::new(stated.outcome);
    for (title, body) in [
        ("Doses", dose::table(problem, style)),
        ("Dissolved", species(problem, solved, style)),
        ("Components", components(problem, solved, style)),
        ("Blended from", blend(problem, solved, style)),
        ("Put in and held", put_in(problem, solved, style)),
        ("Gases", gases(problem, solved, style)),
        ("Solids", solids::table(problem, solved, style)),
        ("Ion balance", ion_balance(problem, solved, style)),
        ("Charge balance", sheet(&ledger.charge(), problem.scale, style)),
        ("Proton condition", protons(&ledger, problem, style)),
        ("Expectations", expectations(source, checked, stated, style)),
        ("Uncertainty", uncertainty::table(source, checked, stated, style)),
    ] {
        if !body.is_empty() {
            text += &format!("\n{}\n{body}", style.paint(Paint::Heading, title));
        }
    }
    for traced in curves {
        let title = style.paint(Paint::Heading, &traced.title());
        text += &format!("\n{title}\n{}", traced.text(problem, style));
    }
    text
}

/// `18 °C, Davies activities`.
pub fn conditions(problem: &Problem) -> String {
    let activities = match problem.activity {
        ActivityKind::Ideal => "ideal activities",
        ActivityKind::DebyeHuckel => "Debye–Hückel activities (limiting law)",
        ActivityKind::ExtendedDebyeHuckel => "extended Debye–Hückel activities",
        ActivityKind::Guntelberg => "Güntelberg activities",
        ActivityKind::Davies => "Davies activities",
        ActivityKind::Pitzer => "Pitzer activities, to at most 6 mol/kg",
    };
    format!("{}, {activities}", celsius(problem.kelvin))
}

fn main_figures(outcome: &Outcome, solved: &Solved, style: Style) -> String {
    let problem = &outcome.problem;
    let mut table = Table::new(&[("", Side::Left), ("", Side::Left), ("", Side::Left)]);
    let mut row = |what: &str, value: String, remark: &str| {
        table.row([what.into(), value.into(), Cell::painted(Paint::Faint, remark)]);
    };
    let holds = |sought: fn(HeldWhat) -> bool| problem.held.iter().any(|held| sought(held.what));
    let held = |is_held: bool| if is_held { "held" } else { "" };
    let ph_held = holds(|what| matches!(what, HeldWhat::Ph(_)));
    let ph = decimals(solved.ph(), 3);
    match outcome.ph_uncertainty() {
        Some(u) => row("pH", format!("{ph} ± {}", decimals(u, 3)), held(ph_held)),
        None => row("pH", ph, held(ph_held)),
    }
    if let Some(pe) = solved.value(problem, Sought::Pe) {
        row("pe", decimals(pe, 3), held(holds(|what| matches!(what, HeldWhat::Pe(_)))));
    } else if problem.scope.component("e-").is_some() {
        row("pe", "none".into(), "nothing here is both oxidised and reduced");
    }
    if let Some(volts) = solved.value(problem, Sought::Potential) {
        let against = "against the standard hydrogen electrode";
        row("potential", format!("{} V", decimals(volts, 3)), against);
    }
    let given = if problem.ionic_strength.is_some() { "given" } else { "" };
    row("ionic strength", concentration(solved.answer.ionic_strength, problem.scale), given);
    if solved.answer.ln_water != 0.0 {
        row("activity of water", decimals(solved.answer.ln_water.exp(), 4), "");
    }
    let per = match problem.scale {
        Scale::PerLitre => "L",
        Scale::PerKilogram => "kg",
    };
    let milli = |eq: f64| format!("{} meq/{per}", significant(1000.0 * eq, 3));
    // What is left of sums that cancel is nothing.
    let alkalinity = solved.alkalinity(problem);
    row("alkalinity", milli(if alkalinity.abs() < 1e-12 { 0.0 } else { alkalinity }), "");
    let hardness = solved.hardness(problem);
    if hardness > 0.0 {
        let size = concentration(hardness, problem.scale);
        row("hardness", size, &hardness_words(problem, hardness));
    }
    if let Some(capacity) = solved.value(problem, Sought::BufferCapacity) {
        row("buffer capacity", format!("{} per pH", concentration(capacity, problem.scale)), "");
    }
    // A pH that was held in a blended water leaves its charge open here too.
    let open = ph_held || problem.blend.as_ref().is_some_and(|blend| blend.charge() != 0.0);
    if open {
        let (cations, anions) = solved.charges();
        let size = format!("{} %", decimals(solved.imbalance_percent(), 2));
        let remark = format!("cations less anions: {}", milli(cations - anions));
        row("charge imbalance", size, &remark);
    }
    table.render(style)
}

/// Component by component, the form that holds most of it first.
fn species(problem: &Problem, solved: &Solved, style: Style) -> String {
    let unit = scale_unit(problem.scale);
    let mut table = Table::new(&[
        ("species", Side::Left),
        (unit, Side::Right),
        ("activity", Side::Right),
        ("γ", Side::Right),
        ("share of its component", Side::Left),
    ]);
    let scope = &problem.scope;
    let rows = &scope.stoichiometry.species;
    let electron = scope.component("e-");
    let component = |row: usize| {
        let mut held = rows[row].row.iter().map(|&(j, _)| j);
        held.find(|&j| j != PROTON && Some(j) != electron)
    };
    let share = |row: usize, j: usize| {
        let total = solved.dissolved(j);
        let held = solved.shares(j).find(|&(i, _)| i == row).map(|(_, share)| share);
        held.filter(|_| total > 0.0).map(|held| held / total)
    };
    let mut order: Vec<usize> = (0..rows.len()).collect();
    order.retain(|&row| solved.answer.concentrations[row] > 0.0);
    order.sort_by(|&a, &b| {
        let size = |row: usize| component(row).and_then(|j| share(row, j)).unwrap_or(0.0);
        component(a).cmp(&component(b)).then(size(b).total_cmp(&size(a)))
    });
    for row in order {
        let ln_gamma = solved.answer.ln_gammas[row];
        let amount = solved.answer.concentrations[row];
        let (activity, gamma) = if problem.activity == ActivityKind::Ideal {
            (String::new(), String::new())
        } else {
            (scientific(amount * ln_gamma.exp(), 4), decimals(ln_gamma.exp(), 3))
        };
        let share = component(row).and_then(|j| {
            let name = &scope.components[j].formula.name;
            Some(format!("{} of {name}", percent(share(row, j)?)))
        });
        table.row([
            rows[row].name.as_str().into(),
            scientific(amount, 4).into(),
            activity.into(),
            gamma.into(),
            share.unwrap_or_default().into(),
        ]);
    }
    table.render(style)
}

fn components(problem: &Problem, solved: &Solved, style: Style) -> String {
    let mut table = Table::new(&[
        ("component", Side::Left),
        ("total", Side::Right),
        ("dissolved", Side::Right),
        ("in solids", Side::Right),
        ("free", Side::Right),
        ("", Side::Left),
    ]);
    for (j, component) in problem.scope.components.iter().enumerate().skip(PROTON + 1) {
        let free = problem.scope.row_of(component.species);
        let free = free.map(|row| scientific(solved.answer.concentrations[row], 4));
        // Told apart only where something formed that holds it.
        let (dissolved, in_solids) = match solved.solid_total(j) {
            0.0 => Default::default(),
            amount => (scientific(solved.dissolved(j), 4), scientific(amount, 4)),
        };
        table.row([
            component.formula.name.as_str().into(),
            scientific(solved.total(j), 4).into(),
            dissolved.into(),
            in_solids.into(),
            free.unwrap_or_default().into(),
            component.title.clone().unwrap_or_default().into(),
        ]);
    }
    table.render(style)
}

fn put_in(problem: &Problem, solved: &Solved, style: Style) -> String {
    let mut table = Table::new(&[("", Side::Left), ("", Side::Left), ("", Side::Left)]);
    for reagent in &problem.reagents {
        let amount = concentration(reagent.amount, problem.scale);
        let amount = match dose::stock_words(problem, reagent) {
            Some(stock) => format!("{amount}, {stock}"),
            None => amount,
        };
        table.row([reagent.formula.name.as_str().into(), amount.into(), Cell::default()]);
    }
    for (held, &brought) in problem.held.iter().zip(&solved.answer.amounts) {
        let value = match held.what {
            HeldWhat::Pe(pe) if held.words == "potential" => {
                format!("{} V", decimals(pe * volts_per_pe(problem.kelvin), 3))
            }
            HeldWhat::Ph(value) | HeldWhat::Pe(value) => decimals(value, 3),
            HeldWhat::Pressure { atm, .. } => format!("{} atm", significant(atm, 3)),
            HeldWhat::Activity { value, .. } => significant(value, 4),
            HeldWhat::Concentration { value, .. } => concentration(value, problem.scale),
        };
        let exchanged = match held.what {
            HeldWhat::Pressure { .. } => {
                let way = if brought < 0.0 { "given off" } else { "taken up" };
                format!("{} {way}", concentration(brought.abs(), problem.scale))
            }
            _ => String::new(),
        };
        let exchanged = Cell::painted(Paint::Faint, exchanged);
        table.row([held.words.as_str().into(), format!("{value}, held").into(), exchanged]);
    }
    table.render(style)
}

fn gases(problem: &Problem, solved: &Solved, style: Style) -> String {
    let mut table = Table::new(&[("gas", Side::Left), ("atm", Side::Right)]);
    for s in in_phase(problem, |phase| *phase == Phase::Gas) {
        if let Some(atm) = solved.value(problem, Sought::Pressure(s)).filter(|&atm| atm > 0.0) {
            let name = problem.scope.species[s].name.as_str();
            table.row([name.into(), scientific(atm, 4).into()]);
        }
    }
    if table.is_empty() { String::new() } else { table.render(style) }
}

/// The two sides of a balance side by side, the largest terms on top; a dot before those
/// that it rests on.
fn sheet(sheet: &Sheet, scale: Scale, style: Style) -> String {
    let unit = scale_unit(scale);
    let side = [("", Side::Left), ("", Side::Left), (unit, Side::Right)];
    let mut table =
        Table::new(&[side[0], side[1], side[2], ("", Side::Left), side[0], side[1], side[2]]);
    let sorted = |side: &[Entry]| {
        let mut side = side.to_vec();
        side.retain(|entry| entry.value != Some(0.0));
        side.sort_by(|a, b| b.value.unwrap_or(0.0).total_cmp(&a.value.unwrap_or(0.0)));
        side
    };
    let cells = |entry: Option<&Entry>| match entry {
        Some(entry) => {
            let value = entry.value.map_or(String::new(), |value| scientific(value, 4));
            let (mark, paint) =
                if entry.dominant { ("•", Paint::Heading) } else { ("", Paint::Plain) };
            let words = entry.with_coefficient();
            [mark.into(), Cell::painted(paint, words), Cell::painted(paint, value)]
        }
        None => [Cell::default(), Cell::default(), Cell::default()],
    };
    let (left, right) = (sorted(&sheet.left), sorted(&sheet.right));
    for index in 0..left.len().max(right.len()) {
        let [mark, name, value] = cells(left.get(index));
        let [other_mark, other, other_value] = cells(right.get(index));
        let sign = if index == 0 { "=" } else { "" };
        table.row([mark, name, value, sign.into(), other_mark, other, other_value]);
    }
    table.render(style)
}

fn protons(ledger: &Ledger, problem: &Problem, style: Style) -> String {
    // Where the pH is held, here or in a water blended, protons come or go by themselves.
    let open = problem.blend.as_ref().is_some_and(|blend| blend.charge() != 0.0);
    if open || problem.held.iter().any(|held| matches!(held.what, HeldWhat::Ph(_))) {
        return String::new();
    }
    ledger.protons().map_or(String::new(), |(protons, _)| sheet(&protons, problem.scale, style))
}

fn expectations(source: &Source, checked: &Checked, stated: Stated, style: Style) -> String {
    let problem = &stated.outcome.problem;
    let mut table = Table::new(&[
        ("line", Side::Right),
        ("expected", Side::Left),
        ("found", Side::Left),
        ("", Side::Left),
    ]);
    for expectation in &problem.expectations {
        let verdict = verdict(stated.outcome, expectation);
        let at = locate_place(&checked.document, stated.section, expectation.at);
        let found = verdict.value.map(|value| match verdict.standard_uncertainty {
            Some(size) => uncertain_words(problem, expectation, value, size),
            None => value_words(problem, expectation, value),
        });
        // How surely is told where the file asks how surely.
        let surely = expectation.confidence.and(verdict.probability);
        let with = |word: &str| match surely {
            Some(probability) => format!("{word}, {}", probability_words(probability)),
            None => word.into(),
        };
        table.row([
            source.region(&at).line.to_string().into(),
            asked(checked, stated.section, expectation).into(),
            found.unwrap_or_else(|| "not known".into()).into(),
            match verdict.standing {
                Standing::Met => Cell::painted(Paint::Good, with("met")),
                Standing::NotSure => Cell::painted(Paint::Bad, with("not sure")),
                Standing::NotMet => Cell::painted(Paint::Bad, "not met"),
            },
        ]);
    }
    if table.is_empty() { String::new() } else { table.render(style) }
}

/// One line for each problem of the file: its pH, and how many expectations it meets.
pub fn overview(problems: &[Stated], style: Style) -> String {
    let mut table = Table::new(&[
        ("", Side::Left),
        ("pH", Side::Right),
        ("ionic strength", Side::Right),
        ("expectations", Side::Left),
    ]);
    for stated in problems {
        let problem = &stated.outcome.problem;
        let name = stated.case.map_or("base".into(), |case| format!("case \"{case}\""));
        let all = problem.expectations.len();
        match stated.outcome.solved() {
            None => table.row([
                name.into(),
                Cell::default(),
                Cell::default(),
                Cell::painted(Paint::Bad, "not solved"),
            ]),
            Some(solved) => {
                let outcome = stated.outcome;
                let met = problem.expectations.iter().filter(|e| is_met(outcome, e)).count();
                let words = match all {
                    0 => Cell::default(),
                    all if met == all => Cell::painted(Paint::Good, format!("{met} of {all} met")),
                    all => Cell::painted(Paint::Bad, format!("{met} of {all} met")),
                };
                table.row([
                    name.into(),
                    decimals(solved.ph(), 3).into(),
                    concentration(solved.answer.ionic_strength, problem.scale).into(),
                    words,
                ]);
            }
        }
    }
    let head = counted(problems.len(), "problem");
    format!("{}\n{}", style.paint(Paint::Heading, &head), table.render(style))
}
