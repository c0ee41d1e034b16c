//! A solid would form without end.
//!
//! A gas that is held and a solid in excess never run out: what is taken from them they give
//! again. Where what they fix keeps another solid supersaturated, that one forms for as long
//! as they last, and there is no state in which it has come to rest.
//!
//! In a tank it comes to rest when one of them is used up. Say of that solid that it may
//! `precipitate`, with what there is of it in the totals; or leave the gas free.
//!
//! Before:
//!
//! ```lyate
//! use aqueous
//! component Ca^2+, CO3^2-
//! reaction Ca(OH)2(s) + 2 H+ <=> Ca^2+ + 2 H2O, log K = 22.8, source "site table, row 8"
//! reaction CaCO3(s) <=> Ca^2+ + CO3^2-, pKsp = 8.48, source "site table, row 9"
//! hold CO2(g) = 420 µatm
//! saturate with Ca(OH)2(s)
//! precipitate CaCO3(s)
//! ```
//!
//! After:
//!
//! ```lyate
//! use aqueous
//! component Ca^2+, CO3^2-
//! reaction Ca(OH)2(s) + 2 H+ <=> Ca^2+ + 2 H2O, log K = 22.8, source "site table, row 8"
//! reaction CaCO3(s) <=> Ca^2+ + CO3^2-, pKsp = 8.48, source "site table, row 9"
//! add Ca(OH)2 40 mmol/L
//! hold CO2(g) = 420 µatm
//! precipitate Ca(OH)2(s)
//! precipitate CaCO3(s)
//! ```

use super::too_many_phases::words;
use crate::equilibrium::system::Failure;
use crate::problem::model::Presence;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::rules::outcome::State;
use crate::rules::words::names;
use crate::text::span::Place;

rule!("forms-without-end", Error, "forms_without_end.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    let State::Failed(Failure::Endless { candidate, fixed }) = context.state else { return };
    let problem = context.problem;
    let Some(solid) = problem.solids_that_are(Presence::Forms).nth(*candidate) else { return };
    let name = problem.solid_name(solid);
    let held: Vec<(Place, String)> = fixed.iter().filter_map(|&k| words(problem, k)).collect();
    let all: Vec<String> = held.iter().map(|(_, words)| words.clone()).collect();
    let finding = if all.is_empty() {
        RULE.at(solid.at, format!("`{name}` would form without end from the water itself"))
    } else {
        let verb = if all.len() == 1 { "keeps" } else { "keep" };
        let all = names(&all, "and");
        let message = format!("`{name}` would form without end: {all} {verb} it supersaturated");
        RULE.at(solid.at, message)
            .with_help("write `precipitate` for a solid that may be used up, or leave the gas free")
    };
    let note = |finding: Finding<Place>, (at, _): &(Place, String)| {
        finding.with_related(*at, "this never runs out")
    };
    found.push(held.iter().fold(finding, note));
}
