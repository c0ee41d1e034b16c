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
use crate::text::span::Place;

rule!("constant-for-other-temperature", Warning, "constant_for_other_temperature.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    // Those of used files and sets have no place here: all are told at the temperature.
    let mut used: Vec<(&str, f64)> = Vec::new();
    let mut told_at: Option<(Place, f64)> = None;
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
            found.push(RULE.at(defect.at, message("the constant", *given, *wanted)).with_help(help));
        } else {
            told_at.get_or_insert((defect.at, *wanted));
            used.push((reaction, *given));
        }
    }
    let Some((at, wanted)) = told_at else { return };
    let message = match used[..] {
        [(reaction, given)] => message(&format!("the constant of `{reaction}`"), given, wanted),
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

fn message(constant: &str, given: f64, wanted: f64) -> String {
    let (given, wanted) = (celsius(given), celsius(wanted));
    format!("{constant} is for {given} and the problem is at {wanted}; it is taken as it stands")
}
