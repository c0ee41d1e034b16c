//! A component has a total and is brought by reagents too.
//!
//! A component takes its amount from `total` or from reagents, never from both: it would be
//! unclear whether the reagent is part of the total or comes on top of it.
//!
//! The difference is a dose counted twice or not at all. For a water of which an analysis is
//! known and into which something is then dosed, give the analysis as reagents, or the sum as
//! the total.
//!
//! Before:
//!
//! ```lyate
//! use aqueous
//! component NH3, Na+, Cl-
//! total NH3 = 5 mmol/L
//! total Na+ = 0 mmol/L
//! add NH4Cl 2 mmol/L
//! ```
//!
//! After:
//!
//! ```lyate
//! use aqueous
//! component NH3, Na+, Cl-
//! total Na+ = 0 mmol/L
//! add NH3   3 mmol/L
//! add NH4Cl 2 mmol/L
//! ```

use crate::problem::defect::DefectKind;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::rules::words::names;
use crate::text::span::Place;

rule!("total-and-reagents", Error, "total_and_reagents.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    // One finding for each total, however many reagents bring the component.
    let mut totals: Vec<(Place, &str, Vec<Place>)> = Vec::new();
    for defect in context.defects() {
        let DefectKind::TotalAndReagent { name, reagent } = &defect.kind else { continue };
        match totals.iter_mut().find(|(at, ..)| *at == defect.at) {
            Some((_, _, reagents)) => reagents.push(*reagent),
            None => totals.push((defect.at, name, vec![*reagent])),
        }
    }
    for (at, name, reagents) in totals {
        let added: Vec<String> = reagents.iter().map(|at| context.text(*at).to_owned()).collect();
        let bring = if added.len() == 1 { "brings" } else { "bring" };
        let message = format!("`{name}` has a total here, and {} {bring} it too", names(&added, "and"));
        let mut finding = RULE.at(at, message);
        for reagent in reagents {
            finding = finding.with_related(reagent, format!("brings `{name}`"));
        }
        let help = format!(
            "give `{name}` by reagents alone, or by a total that counts all of it; a water that \
             was analysed and is dosed here can have a file of its own: `blend 100 % of` it"
        );
        found.push(finding.with_help(help));
    }
}
