//! A curve moves something that the file leaves to the answer.
//!
//! A curve takes one thing that is given through many values: the pH, a reagent, the total
//! of a component, the temperature. A total that reagents or a held value bring is not
//! given but comes out, and a reagent cannot bring more of a component whose `total` says
//! how much there is in all. Which of the two should give way is for the file to say.
//!
//! Before:
//!
//! ```lyate
//! use ammonia
//! component NH3, Cl-
//! add NH4Cl 2 mmol/L
//! curve over total NH3 from 0 to 4 mmol/L
//! ```
//!
//! After:
//!
//! ```lyate
//! use ammonia
//! component NH3, Cl-
//! add NH4Cl 2 mmol/L
//! curve over NH4Cl from 0 to 4 mmol/L
//! ```

use crate::problem::defect::DefectKind;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::text::span::Place;

rule!("curve-over-outcome", Error, "curve_over_outcome.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for defect in context.defects() {
        let DefectKind::CurveNotFree { name, by } = &defect.kind else { continue };
        let total = name.starts_with("total ");
        let (message, help) = if name == "total H+" {
            let help = "write `curve over pH …`, or a curve over an acid or a base such as HCl";
            (format!("the {name} follows from the charge balance and cannot be moved"), help)
        } else if total && by.is_some() {
            let help = "write a curve over a reagent that brings it, or give it by `total` alone";
            (format!("the {name} is not given: it comes out of what stands elsewhere"), help)
        } else if total {
            let help = "give it a value with `total`; the curve then takes it from there";
            (format!("the {name} is not given, so there is nothing to move"), help)
        } else {
            let help = "give it by reagents alone, or write a curve over that total";
            (format!("this reagent brings `{name}`, whose total is given"), help)
        };
        let mut finding = RULE.at(defect.at, message).with_help(help);
        if let Some(by) = by {
            let words = if total { "set here" } else { "given here" };
            finding = finding.with_related(*by, words);
        }
        found.push(finding);
    }
}
