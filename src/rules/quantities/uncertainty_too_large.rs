//! An uncertainty is so large that propagating it to first order does not hold.
//!
//! Uncertainties are carried to the answers by the slope at the stated value. That holds
//! while the value stays near itself; an amount, a pressure or a constant K that is uncertain
//! by more than half of itself reaches zero within two standard uncertainties, where nothing
//! is a straight line any more. The answer stands; its `±` is no more than a hint.
//!
//! For a constant, state it as a logarithm, `log K = -4.7 ± 0.3`, where the same ignorance is
//! a plain number. An amount known that badly wants a case for each end. Of an amount of zero
//! nothing can be less, so its `±` is not carried on at all.
//!
//! Before:
//!
//! ```lyate
//! component Cl-
//! total Cl- = 40 ± 300 % mg/L
//! ```
//!
//! After:
//!
//! ```lyate
//! component Cl-
//! total Cl- = 40 ± 3 % mg/L
//! ```

use crate::problem::defect::DefectKind;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::figures::stated_percent;
use crate::rules::finding::Finding;
use crate::text::span::Place;

rule!("uncertainty-too-large", Warning, "uncertainty_too_large.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for defect in context.defects() {
        let DefectKind::UncertaintyTooLarge { share } = defect.kind else { continue };
        found.push(match share {
            Some(share) => {
                let message = format!(
                    "{} of the value is too much for propagation to first order",
                    stated_percent(share)
                );
                let help = "state the ± of a constant on its logarithm; of an amount, write a case \
                            for each end";
                RULE.at(defect.at, message).with_help(help)
            }
            None => {
                let message = "the ± of an amount of zero is not propagated";
                let help = "write a case with the largest amount that there may be";
                RULE.at(defect.at, message).with_help(help)
            }
        });
    }
}
