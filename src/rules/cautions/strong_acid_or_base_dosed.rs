//! A strong acid or base is dosed, or put in at a strength that burns.
//!
//! Told where a dose of it is sought (`by`), where a stock of it is added (`of`), and where so
//! much is put in that the water itself can burn skin: from 0.5 mol/L, which is the 2 % by
//! mass from which sodium hydroxide solutions count as corrosive (recalled from Regulation
//! (EC) 1272/2008, Annex VI).
//!
//! Common practice: acid is added to water and never water to acid; base likewise, slowly and
//! while stirring; both give heat. A calculated dose is verified by a bench test with the real
//! water before it is set at a pump. Hydrofluoric acid is a poison besides, at any strength.
//! Safety data sheets, local codes and licensed practice go first.
//!
//! Before:
//!
//! ```lyate
//! component Na+, Cl-
//! add NaCl 1 mmol/L
//! add NaOH 0.8 mol/L
//! ```
//!
//! After:
//!
//! ```lyate
//! component Na+, Cl-
//! add NaCl 1 mmol/L
//! add NaOH 8 mmol/L
//! ```

use super::DEFER;
use crate::chemistry::formula::canonical;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::text::span::{Part, Place};
use crate::text::tree::{By, Over, Statement};

rule!("strong-acid-or-base-dosed", Caution, "strong_acid_or_base_dosed.rs", find);

const ACIDS: [(&str, &str); 8] = [
    ("HCl", "hydrochloric acid"),
    ("H2SO4", "sulfuric acid"),
    ("HNO3", "nitric acid"),
    ("HClO4", "perchloric acid"),
    ("HBr", "hydrobromic acid"),
    ("H3PO4", "phosphoric acid"),
    ("HF", "hydrofluoric acid"),
    ("HCOOH", "formic acid"),
];
const BASES: [(&str, &str); 5] = [
    ("NaOH", "sodium hydroxide"),
    ("KOH", "potassium hydroxide"),
    ("LiOH", "lithium hydroxide"),
    ("Ca(OH)2", "calcium hydroxide"),
    ("CaO", "quicklime"),
];
/// mol per litre or kilogram.
const MUCH: f64 = 0.5;

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    let is_case = context.statements.iter().any(|written| written.part == Part::Case);
    for written in context.statements {
        // A case only tells of what it brings itself.
        if is_case && written.part == Part::Base {
            continue;
        }
        let (reagent, dosed) = match written.statement() {
            Statement::Add { reagent, stock, .. } => (reagent, stock.is_some()),
            Statement::Hold { by: Some(by), .. } => match &by.value {
                By::Reagent(reagent, _) => (reagent, true),
                By::Total(_) => continue,
            },
            Statement::Curve { over, .. } => match &over.value {
                Over::Reagent(reagent) => (reagent, false),
                _ => continue,
            },
            _ => continue,
        };
        let name = canonical(&reagent.value);
        let put_in = || {
            let is_it = |reagent: &&crate::problem::model::Reagent| reagent.formula.name == name;
            let stated = context.problem.reagents.iter().find(is_it);
            let curve = context.problem.curves.iter().find(|curve| curve.words == name);
            // Of a curve, the most that it comes to.
            match (written.statement(), curve) {
                (Statement::Curve { .. }, Some(curve)) => curve.from.max(curve.to),
                _ => stated.map_or(0.0, |reagent| reagent.amount),
            }
        };
        let known = |list: &'static [(&str, &str)]| {
            list.iter().find(|(formula, _)| *formula == name).map(|(_, words)| *words)
        };
        let message = if let Some(acid) = known(&ACIDS) {
            if !dosed && put_in() < MUCH && name != "HF" {
                continue;
            }
            format!(
                "{acid} is dosed here: add acid to water and never water to acid, expect heat, and \
                 verify the dose by a bench test"
            )
        } else if let Some(base) = known(&BASES) {
            if !dosed && put_in() < MUCH {
                continue;
            }
            format!(
                "{base} is dosed here: add it to water slowly while stirring, expect heat, and \
                 verify the dose by a bench test"
            )
        } else {
            continue;
        };
        let at = written.place(reagent.span);
        found.push(RULE.at(at, message).with_help(format!("protect skin and eyes; {DEFER}")));
    }
}
