//! An amount counts a stock whose density is not known.
//!
//! A strength by mass tells how much is in a kilogram of stock, and a pump counts litres; a
//! strength by volume tells how much is in a litre, and a balance counts grams. What leads from
//! one to the other is the density. It is looked up for common solutions, HCl, H2SO4, HNO3,
//! H3PO4, CH3COOH, NaOH, KOH, NH3 and milk of lime, as far as the tables go. Of any other
//! stock the supplier's sheet gives it.
//!
//! Before:
//!
//! ```lyate
//! component Na+, Cl-
//! add 2 mL/L of 20 % NaCl
//! ```
//!
//! After:
//!
//! ```lyate
//! component Na+, Cl-
//! add 2 mL/L of 20 % NaCl, density = 1.148 kg/L
//! ```

use crate::problem::defect::DefectKind;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::text::span::Place;

rule!("density-missing", Error, "density_missing.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for defect in context.defects() {
        let DefectKind::DensityMissing { stock, known } = &defect.kind else { continue };
        let message = match known {
            Some((low, high)) => format!(
                "the density of {stock} is not known: the tables go from {low} to {high} %, with gaps"
            ),
            None => format!("the density of {stock} is not known"),
        };
        let help = "write it after the stock: `, density = … kg/L`";
        found.push(RULE.at(defect.at, message).with_help(help));
    }
}
