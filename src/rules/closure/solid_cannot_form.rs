//! A solid is let form that has nothing to form from.
//!
//! Something that the solid is made of is absent: its total is zero, or nothing brings it in.
//! The statement changes nothing then.
//!
//! Often an amount was forgotten, and with it the solid that the statement was written for:
//! a softening or a phosphate removal that looks as if nothing came down.
//!
//! Before:
//!
//! ```lyate
//! component Ca^2+, F-, Na+, Cl-
//! reaction CaF2(s) <=> Ca^2+ + 2 F-, pKsp = 10.5, source "site table, row 7"
//! add NaF   4 mmol/L
//! total Ca^2+ = 0 mmol/L
//! total Cl-   = 0 mmol/L
//! precipitate CaF2(s)
//! ```
//!
//! After:
//!
//! ```lyate
//! component Ca^2+, F-, Na+, Cl-
//! reaction CaF2(s) <=> Ca^2+ + 2 F-, pKsp = 10.5, source "site table, row 7"
//! add NaF   4 mmol/L
//! add CaCl2 5 mmol/L
//! precipitate CaF2(s)
//! ```

use crate::problem::model::{Presence, Sought};
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::rules::words::names;
use crate::text::span::Place;

rule!("solid-cannot-form", Warning, "solid_cannot_form.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    let Some(solved) = context.solved() else { return };
    let problem = context.problem;
    for solid in problem.solids_that_are(Presence::Forms) {
        let index = solved.value(problem, Sought::SaturationIndex(solid.species));
        if index.is_some_and(f64::is_finite) {
            continue;
        }
        let Some(made) = &problem.scope.belonging.made[solid.species] else { continue };
        let absent: Vec<String> = made
            .row
            .iter()
            .filter(|&&(j, _)| !solved.answer.ln_components[j].is_finite())
            .map(|&(j, _)| problem.scope.components[j].formula.name.clone())
            .collect();
        let name = problem.solid_name(solid);
        let verb = if absent.len() == 1 { "is" } else { "are" };
        let absent = names(&absent, "and");
        found.push(RULE.at(solid.at, format!("`{name}` cannot form: {absent} {verb} absent")));
    }
}
