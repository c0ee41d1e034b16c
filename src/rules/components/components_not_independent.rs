//! A component is already made of the others.
//!
//! Components are the building blocks of a problem: none of them may be made of the others
//! by a reaction in scope. Where one is, the same matter would be counted twice, and there is
//! no single answer. `H+` and `H2O` are always components; they, and a name that stands twice,
//! are only surplus.
//!
//! At the plant it means a total that hangs in the air: ammonia nitrogen split over two
//! entries has no meaning once the pH moves ions from one into the other. List one form of
//! each building block, and give it the whole total.
//!
//! Before:
//!
//! ```lyate
//! use aqueous
//! component NH3, NH4+, Cl-
//! total NH3  = 4 mmol/L
//! total NH4+ = 6 mmol/L
//! total Cl-  = 6 mmol/L
//! ```
//!
//! After:
//!
//! ```lyate
//! use aqueous
//! component NH3, Cl-
//! total NH3 = 10 mmol/L
//! total Cl- = 6 mmol/L
//! ```

use super::listing;
use crate::problem::defect::{Defect, DefectKind};
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::{Finding, Severity};
use crate::rules::words::names;
use crate::text::span::Place;

rule!("components-not-independent", Error, "components_not_independent.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for defect in context.defects() {
        let DefectKind::NotIndependent { name, from, reaction } = &defect.kind else { continue };
        let mut finding = if from.is_empty() {
            surplus(context, defect, name)
        } else {
            tied(context, defect, (name, from, *reaction))
        };
        if let Some(edit) = listing::remove(context, defect.at) {
            // Taking a surplus name away changes nothing; which of two tied ones to keep is
            // the writer's choice.
            let title = format!("take `{name}` off the list");
            finding = finding.with_edits(title, from.is_empty(), vec![edit]);
        }
        found.push(finding);
    }
}

fn surplus(context: &Context, defect: &Defect, name: &str) -> Finding<Place> {
    let first = context.problem.scope.components.iter().find(|c| c.formula.name == name);
    match first.and_then(|component| component.at) {
        Some(first) => RULE
            .at(defect.at, format!("`{name}` is listed twice"))
            .with_related(first, "the first time"),
        None => RULE.at(defect.at, format!("`{name}` is always a component and need not be listed")),
    }
    .with_severity(Severity::Warning)
}

fn tied(
    context: &Context,
    defect: &Defect,
    (name, from, reaction): (&str, &[String], Option<Place>),
) -> Finding<Place> {
    let scope = &context.problem.scope;
    let equation = scope.belonging.links.iter().find_map(|(r, link)| {
        let mut tied = link.iter().map(|&(j, _)| scope.components[j].formula.name.as_str());
        let all = |tied: &str| tied == name || from.iter().any(|other| other == tied);
        tied.all(all).then(|| scope.reactions[*r].equation.as_str())
    });
    let by = equation.map_or_else(String::new, |equation| format!(" by `{equation}`"));
    let others = names(from, "and");
    let message = format!("`{name}` can be made of {others}{by}, so it is no component of its own");
    let mut finding = RULE.at(defect.at, message);
    let listed: Vec<String> = from.iter().filter(|n| !matches!(n.as_str(), "H+" | "H2O")).cloned().collect();
    finding = if listed.is_empty() {
        finding.with_help(format!("{others} is always a component: leave `{name}` out"))
    } else {
        let both = names(&[listed, vec![name.to_owned()]].concat(), "and");
        finding.with_help(format!("of {both} one is too many: give what is left the whole total"))
    };
    if let Some(reaction) = reaction {
        finding = finding.with_related(reaction, "by this reaction");
    }
    finding
}
