//! A reagent holds an element that no component holds.
//!
//! Everything that is put in must go somewhere. The reagent holds an element, or a group of
//! atoms, that none of the listed components holds, so its amount would be lost, and with it
//! the charge of its ion.
//!
//! An ion that reacts with nothing counts all the same: sodium or chloride in a dose is what
//! closes the charge balance, and so sets the pH.
//!
//! Before:
//!
//! ```lyate
//! use aqueous
//! component NH3
//! add NH4Cl 5 mmol/L
//! ```
//!
//! After:
//!
//! ```lyate
//! use aqueous
//! component NH3, Cl-
//! add NH4Cl 5 mmol/L
//! ```

use num_rational::Rational64;
use num_traits::{Signed, Zero};

use crate::chemistry::element::Element;
use crate::chemistry::formula::{Atom, Formula, Groups, Phase};
use crate::problem::defect::DefectKind;
use crate::rules::catalogue::rule;
use crate::rules::components::listing;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::text::span::Place;

rule!("reagent-element-not-held", Error, "reagent_element_not_held.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for defect in context.defects() {
        let (name, element) = match &defect.kind {
            DefectKind::ReagentHoldsForeign { name, element } => (name, element),
            DefectKind::ReagentNotMade { name } => {
                let message = format!("no sum of the components makes up `{name}`");
                let help = "list the form of each element that it brings, and e- where one is \
                            oxidised or reduced";
                found.push(RULE.at(defect.at, message).with_help(help));
                continue;
            }
            _ => continue,
        };
        let message = format!("`{name}` holds {element}, and no component does");
        let mut finding = RULE.at(defect.at, message);
        let holder = holder(context, name, element);
        if let Some(holder) = &holder
            && let Some(edit) = listing::add(context, holder)
        {
            let title = format!("list `{holder}` as a component");
            finding = finding.with_edits(title, false, vec![edit]);
        }
        let such = holder.map_or_else(String::new, |holder| format!(", such as `{holder}`"));
        let help = format!("list a component that holds {element}{such}");
        found.push(finding.with_help(help));
    }
}

/// A component to list: the species in scope that is likest to the reagent, or the ion that
/// the element forms by itself.
fn holder(context: &Context, reagent: &str, element: &str) -> Option<String> {
    let scope = &context.problem.scope;
    let reagent = Formula::parse(reagent, &scope.groups).ok()?;
    let count = |formula: &Formula, atom: &Atom| -> Rational64 {
        formula.atoms.get(atom).copied().unwrap_or_default()
    };
    let hydrogen = Atom::Element(Element::HYDROGEN);
    let holds = |formula: &Formula| formula.atoms.keys().any(|atom| atom.to_string() == element);
    let likeness = |formula: &Formula| {
        let apart: Rational64 = formula
            .atoms
            .keys()
            .filter(|atom| **atom != hydrogen)
            .map(|atom| (count(formula, atom) - count(&reagent, atom)).abs())
            .fold(Rational64::zero(), |sum, apart| sum + apart);
        (apart, count(formula, &hydrogen))
    };
    let near = scope
        .species
        .iter()
        .filter(|formula| formula.phase == Phase::Aqueous && holds(formula))
        .min_by_key(|formula| likeness(formula));
    if let Some(near) = near {
        return Some(near.name.clone());
    }
    ["+", "^2+", "^3+", "-"]
        .into_iter()
        .filter_map(|charge| Formula::parse(&format!("{element}{charge}"), &Groups::default()).ok())
        .find(is_usual)
        .map(|formula| formula.name)
}

/// Whether an element has this ion, and hardly another, in water. From memory.
fn is_usual(ion: &Formula) -> bool {
    let usual = [
        "Li+", "Na+", "K+", "Rb+", "Cs+", "Ag+", "Mg^2+", "Ca^2+", "Sr^2+", "Ba^2+", "Zn^2+",
        "Cd^2+", "Ni^2+", "Al^3+", "F-", "Cl-", "Br-",
    ];
    usual.contains(&ion.name.as_str())
}
