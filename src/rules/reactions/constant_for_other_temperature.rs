//! A constant is for another temperature, and no enthalpy leads to this one.
//!
//! Constants move with temperature: that of ammonium by 0.03 in pKa for each kelvin. A
//! constant is for 25 °C unless `at` says otherwise. With `enthalpy` it is carried to the
//! problem's temperature by van 't Hoff's equation; without, it is taken as it stands,
//! and the answer is that of another temperature.
//!
//! Before:
//!
//! ```lyate
//! component NH3
//! temperature 12 °C
//! reaction NH4+ <=> NH3 + H+, pKa = 9.25, source "site table, row 2"
//! ```
//!
//! After:
//!
//! ```lyate
//! component NH3
//! temperature 12 °C
//! reaction NH4+ <=> NH3 + H+, pKa = 9.25, enthalpy = 52.1 kJ/mol, source "site table, row 2"
//! ```

use crate::problem::defect::DefectKind;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::rules::figures::celsius;
use crate::rules::words::list;
use super::own::where_to;
use crate::text::span::Place;

rule!("constant-for-other-temperature", Warning, "constant_for_other_temperature.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    // Those of used files and sets have no place here: all are told at the temperature, or
    // at the curve that goes there.
    let mut used: Vec<ToldAt> = Vec::new();
    for defect in context.defects() {
        let DefectKind::ConstantAtOtherTemperature { reaction, given, wanted, own } = &defect.kind
        else {
            continue;
        };
        if *own {
            let help = format!(
                "give `enthalpy = … kJ/mol`, or a constant for {} with `at {}`",
                celsius(*wanted),
                celsius(*wanted),
            );
            let goes = where_to(context, defect.at, *wanted);
            found.push(RULE.at(defect.at, message("the constant", *given, &goes)).with_help(help));
        } else {
            let place = used.iter_mut().find(|(at, to, _)| *at == defect.at && to == wanted);
            match place {
                Some((_, _, constants)) => constants.push((reaction, *given)),
                None => used.push((defect.at, *wanted, vec![(reaction, *given)])),
            }
        }
    }
    for (at, wanted, used) in used {
        let message = match used[..] {
            [(reaction, given)] => {
                let constant = format!("the constant of `{reaction}`");
                message(&constant, given, &where_to(context, at, wanted))
            }
            _ => {
                let words = |&(reaction, given): &(&str, f64)| {
                    format!("`{reaction}` for {}", celsius(given))
                };
                let all: Vec<String> = used.iter().map(words).collect();
                let all = list(&all, "and");
                format!("at {} these constants are taken as they stand: {all}", celsius(wanted))
            }
        };
        let help = "write it in this file with `enthalpy = … kJ/mol`, or with `at`";
        found.push(RULE.at(at, message).with_help(help));
    }
}

/// A place, the temperature it goes to, and the reactions that are told of there.
type ToldAt<'a> = (Place, f64, Vec<(&'a str, f64)>);

fn message(constant: &str, given: f64, goes: &str) -> String {
    format!("{constant} is for {} and {goes}; it is taken as it stands", celsius(given))
}
