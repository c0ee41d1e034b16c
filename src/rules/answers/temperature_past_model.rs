//! The temperature lies outside the range of water's own properties.
//!
//! The ion product of water, its density and its permittivity, from which the activity
//! coefficients come, are taken from published equations between 0 and 100 °C. Outside, the
//! values at the nearer end are used, and the answer is only as good as that.
//!
//! It matters for hot condensate and boiler water, where pKw goes on falling, and for
//! brines below zero. Use a source made for such conditions there.
//!
//! Before:
//!
//! ```lyate
//! use aqueous
//! temperature 130 °C
//! component NH3
//! total NH3 = 0.1 mmol/L
//! ```
//!
//! After:
//!
//! ```lyate
//! use aqueous
//! temperature 95 °C
//! component NH3
//! total NH3 = 0.1 mmol/L
//! ```

use crate::chemistry::water;
use crate::problem::curve::Sweep;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::figures::celsius;
use crate::rules::finding::Finding;
use crate::text::span::Place;

rule!("temperature-past-model", Warning, "temperature_past_model.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    let problem = context.problem;
    if let Some(at) = problem.temperature_at {
        found.extend(past(problem.kelvin).map(|message| RULE.at(at, message)));
    }
    let curves = problem.curves.iter().filter(|curve| curve.over == Sweep::Temperature);
    for curve in curves {
        let message = past(curve.from).or_else(|| past(curve.to));
        found.extend(message.map(|message| RULE.at(curve.at, message)));
    }
}

fn past(kelvin: f64) -> Option<String> {
    if water::in_range(kelvin) {
        return None;
    }
    let nearer = if kelvin < *water::RANGE.start() {
        *water::RANGE.start()
    } else {
        *water::RANGE.end()
    };
    Some(format!(
        "{} lies outside the 0 to 100 °C for which water's own properties are published here; \
         those at {} are used",
        celsius(kelvin),
        celsius(nearer),
    ))
}
