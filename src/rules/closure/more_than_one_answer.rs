//! More than one state meets the equations.
//!
//! With ions of charge three and above, activity coefficients fall and then rise steeply with
//! the ionic strength, so that a dilute and a strong state can both meet the same totals. A
//! held concentration or activity of an ion can also be met twice, on the way up and on the
//! way down. The answer shown is one of them; the equations cannot say which the plant has.
//!
//! State what tells them apart: the measured pH or ionic strength, or the total in place of
//! the held value. Where the ionic strength lies outside the range of the activity model, the
//! other states may be no more than its artefact.
//!
//! Before:
//!
//! ```lyate
//! component Zr^4+, Fe(CN)6^4-
//! reaction Zr^4+ + Fe(CN)6^4- <=> ZrFe(CN)6, log beta = 6.2, source "site table, row 30"
//! total Zr^4+      = 30 mmol/L
//! total Fe(CN)6^4- = 30 mmol/L
//! ```
//!
//! After:
//!
//! ```lyate
//! component Zr^4+, Fe(CN)6^4-
//! reaction Zr^4+ + Fe(CN)6^4- <=> ZrFe(CN)6, log beta = 6.2, source "site table, row 30"
//! ionic strength 0.1 mol/L
//! total Zr^4+      = 30 mmol/L
//! total Fe(CN)6^4- = 30 mmol/L
//! ```

use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::figures::{concentration, decimals};
use crate::rules::finding::Finding;
use crate::rules::words::list;
use crate::text::span::Place;

rule!("more-than-one-answer", Warning, "more_than_one_answer.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    let Some(solved) = context.solved().filter(|solved| !solved.others.is_empty()) else { return };
    let Some(at) = context.held_ion().map(|held| held.at).or_else(|| context.anchor()) else {
        return;
    };
    let scale = context.problem.scale;
    let words = |ph: f64, ionic_strength: f64| {
        format!("pH {} at I {}", decimals(ph, 3), concentration(ionic_strength, scale))
    };
    let others: Vec<String> = solved.others.iter().map(|&(ph, i)| words(ph, i)).collect();
    let message = format!(
        "these equations have more than one answer: {}, shown here, and {}",
        words(solved.ph(), solved.answer.ionic_strength),
        list(&others, "and"),
    );
    let help = "state what tells them apart, such as the measured pH or the ionic strength";
    found.push(RULE.at(at, message).with_help(help));
}
