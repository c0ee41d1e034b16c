//! The problem's temperature lies outside the range that a constant is valid in.
//!
//! `valid 0 to 50 °C` says over which temperatures a fit was made. Outside it the
//! expression still gives a number, which may run away from the truth within a few
//! degrees. Look for a constant that covers the temperature before a dose rests on it.
//!
//! Before:
//!
//! ```lyate
//! component NH3
//! temperature 65 °C
//! reaction NH4+ <=> NH3 + H+, log K(T) = -0.09018 - 2729.92/T, valid 0 to 50 °C,
//!     source "site fit of March"
//! ```
//!
//! After:
//!
//! ```lyate
//! component NH3
//! temperature 45 °C
//! reaction NH4+ <=> NH3 + H+, log K(T) = -0.09018 - 2729.92/T, valid 0 to 50 °C,
//!     source "site fit of March"
//! ```

use crate::problem::defect::DefectKind;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::rules::figures::celsius;
use crate::rules::words::list;
use super::own::where_to;
use crate::text::span::Place;

rule!("outside-valid-range", Warning, "outside_valid_range.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    // Those of used files and sets have no place here: all are told at the temperature, or
    // at the curve that goes there.
    let mut used: Vec<ToldAt> = Vec::new();
    for defect in context.defects() {
        let DefectKind::OutsideValidRange { reaction, low, high, wanted, own } = &defect.kind
        else {
            continue;
        };
        let range = format!("{} to {}", celsius(*low).trim_end_matches(" °C"), celsius(*high));
        if *own {
            let goes = where_to(context, defect.at, *wanted);
            found.push(RULE.at(defect.at, message("the constant", &range, &goes)));
        } else {
            let place = used.iter_mut().find(|(at, to, _)| *at == defect.at && to == wanted);
            match place {
                Some((_, _, constants)) => constants.push((reaction, range)),
                None => used.push((defect.at, *wanted, vec![(reaction, range)])),
            }
        }
    }
    for (at, wanted, used) in used {
        let message = match &used[..] {
            [(reaction, range)] => {
                let constant = format!("the constant of `{reaction}`");
                message(&constant, range, &where_to(context, at, wanted))
            }
            _ => {
                let words = |(reaction, range): &(&str, String)| format!("`{reaction}` ({range})");
                let all: Vec<String> = used.iter().map(words).collect();
                let all = list(&all, "and");
                format!("{} is outside the range of these constants: {all}", celsius(wanted))
            }
        };
        found.push(RULE.at(at, message));
    }
}

/// A place, the temperature it goes to, and the reactions that are told of there.
type ToldAt<'a> = (Place, f64, Vec<(&'a str, String)>);

fn message(constant: &str, range: &str, goes: &str) -> String {
    format!("{constant} is valid from {range} and {goes}")
}
