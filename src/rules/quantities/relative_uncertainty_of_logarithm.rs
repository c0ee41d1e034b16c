//! The uncertainty of a logarithm or of a temperature in °C is given in percent.
//!
//! A pH, a pKa or a log K has no true zero: five percent of pH 7 and five percent of pH 2
//! are different distances for no reason that has to do with the measurement. So it is with
//! °C, whose zero is where water freezes. Such a `±` is not taken; the value itself is.
//!
//! Write it in the unit of the value: `pH = 7.2 ± 0.05`, `20 ± 0.5 °C`. Where five percent
//! of K was meant, that is 0.02 in log K.
//!
//! Before:
//!
//! ```lyate
//! component Cl-, Na+
//! add NaCl 1 mmol/L
//! hold pH = 7.2 ± 1 %
//! ```
//!
//! After:
//!
//! ```lyate
//! component Cl-, Na+
//! add NaCl 1 mmol/L
//! hold pH = 7.2 ± 0.05
//! ```

use crate::problem::defect::DefectKind;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::figures::significant;
use crate::rules::finding::Finding;
use crate::text::span::Place;

rule!(
    "relative-uncertainty-of-logarithm",
    Error,
    "relative_uncertainty_of_logarithm.rs",
    find
);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for defect in context.defects() {
        let DefectKind::UncertaintyOfLogarithm { temperature, size } = defect.kind else {
            continue;
        };
        let what = if temperature { "a temperature in °C" } else { "a logarithm" };
        let message = format!("a percentage of {what} says nothing: its zero is a convention");
        let size = significant(size, 2);
        let unit = if temperature { "degrees" } else { "its own unit" };
        let help = format!("write it in {unit}; as written it would be ± {size}");
        found.push(RULE.at(defect.at, message).with_help(help));
    }
}
