//! The value meets its limit, but not with the confidence that was asked for.
//!
//! With `confidence`, a limit has to hold for the true value with that probability: the
//! value is taken as normal about the computed one, with the standard uncertainty that the
//! inputs' `±` propagate to it (ISO *Guide to the Expression of Uncertainty in
//! Measurement*; JCGM 106 on conformity). A value just below its limit is below it with
//! little more than one half.
//!
//! At the plant that is the margin between a limit met on paper and one met in the pipe. Aim
//! for a value further off, or measure better what brings most of the uncertainty. Only what
//! carries a `±` counts, so the true margin is never wider than this.
//!
//! Before:
//!
//! ```lyate
//! use aqueous
//! component NH3, Na+, Cl-
//! add NH4Cl 10 mmol/L
//! add NaOH  4 ± 0.5 mmol/L
//! expect [NH3] < 4.5 mmol/L, confidence 95 %
//! ```
//!
//! After:
//!
//! ```lyate
//! use aqueous
//! component NH3, Na+, Cl-
//! add NH4Cl 10 mmol/L
//! add NaOH  3.5 ± 0.5 mmol/L
//! expect [NH3] < 4.5 mmol/L, confidence 95 %
//! ```

use crate::equilibrium::confidence::{needed, probability};
use crate::problem::model::{Expectation, Limit};
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::expectation::{
    probability_words, size_words, uncertain_words, value_words, written,
};
use crate::rules::figures::stated_percent;
use crate::rules::finding::Finding;
use crate::text::span::Place;

rule!("limit-not-sure", Error, "limit_not_sure.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    let problem = context.problem;
    for expectation in &problem.expectations {
        let limit = expectation.limit;
        let Some(asked) = expectation.confidence else { continue };
        let Some(budget) = context.budget(expectation.sought) else { continue };
        let (value, size) = (budget.value, budget.standard_uncertainty);
        let reached = probability(limit, value, size);
        if !limit.is_met_by(value) || size <= 0.0 || reached >= asked {
            continue;
        }
        let Some((at, limit_words)) = written(context, expectation) else { continue };
        let relation = match limit {
            Limit::Within { .. } => "within",
            Limit::Below { .. } => "below",
            Limit::Above { .. } => "above",
            Limit::Between { .. } => "between",
        };
        let message = format!(
            "{} is {}, and {relation} {limit_words} with a probability of {} only, not the {} asked \
             for",
            expectation.words,
            uncertain_words(problem, expectation, value, size),
            probability_words(reached),
            stated_percent(asked),
        );
        let mut finding = RULE.at(at, message).with_help(cure(context, expectation, asked));
        if let Some(most) = budget.shares.first() {
            let source = &problem.uncertain[most.source];
            if let Some(place) = source.at {
                let words = format!("{} of the variance comes from here", whole(most.percent));
                finding = finding.with_related(place, words);
            }
        }
        found.push(finding);
    }
}

/// What value would do, and what uncertainty, and where most of it comes from.
fn cure(context: &Context, expectation: &Expectation, asked: f64) -> String {
    let problem = context.problem;
    let Some(budget) = context.budget(expectation.sought) else { return String::new() };
    let (value, size) = (budget.value, budget.standard_uncertainty);
    let needed = needed(expectation.limit, value, size, asked);
    let size_needed = needed.standard_uncertainty;
    let size_needed = size_needed.map(|size| size_words(problem, expectation, size));
    let value_needed = needed.value.map(|needed| {
        let bound = if needed < value { "at most" } else { "at least" };
        format!("{bound} {}", value_words(problem, expectation, needed))
    });
    let needed = match (value_needed, size_needed) {
        (Some(value), Some(size)) => format!(
            "the value would have to be {value}, or its standard uncertainty at most {size}"
        ),
        (Some(value), None) => format!("the value would have to be {value}"),
        (None, Some(size)) => format!(
            "no value would do in so narrow a range: the standard uncertainty would have to be at \
             most {size}"
        ),
        (None, None) => "no value would do in so narrow a range".into(),
    };
    let from = budget.shares.first().map_or(String::new(), |most| {
        let words = &problem.uncertain[most.source].words;
        format!("; {} of the variance comes from {words}", whole(most.percent))
    });
    format!("{needed}{from}")
}

/// A share in whole percent.
fn whole(percent: f64) -> String {
    format!("{percent:.0} %")
}
