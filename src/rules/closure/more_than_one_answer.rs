//! More than one state meets the equations.
//!
//! With ions of charge three and above, activity coefficients fall and then rise steeply with
//! the ionic strength, so that a dilute and a strong state can both meet the same totals. A
//! held concentration or activity of an ion can also be met twice, on the way up and on the
//! way down. The answer shown is one of them; the equations cannot say which the plant has.
//!
//! State what tells them apart: the measured pH or ionic strength, or the total in place of
//! the held value. Where the ionic strength lies outside the range of the activity model, the
//! other states may be no more than its artefact.
//!
//! Before:
//!
//! ```lyate
//! component Al^3+, SO4^2-
//! reaction HSO4- <=> SO4^2- + H+, pKa = 1.99, source "site table, row 3"
//! total Al^3+  = 2 mol/L
//! hold {SO4^2-} = 0.02
//! ```
//!
//! After:
//!
//! ```lyate
//! component Al^3+, SO4^2-
//! reaction HSO4- <=> SO4^2- + H+, pKa = 1.99, source "site table, row 3"
//! total Al^3+  = 2 mmol/L
//! total SO4^2- = 3 mmol/L
//! ```

use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::figures::decimals;
use crate::rules::finding::Finding;
use crate::rules::words::list;
use crate::text::span::Place;

rule!("more-than-one-answer", Warning, "more_than_one_answer.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    let Some(solved) = context.solved().filter(|solved| !solved.others.is_empty()) else { return };
    let Some(at) = context.anchor() else { return };
    let others: Vec<String> = solved.others.iter().map(|ph| decimals(*ph, 3)).collect();
    let message = format!(
        "these equations have more than one answer: pH {}, shown here, and pH {}",
        decimals(solved.ph(), 3),
        list(&others, "and"),
    );
    let help = "state what tells them apart, such as the measured pH or the ionic strength";
    found.push(RULE.at(at, message).with_help(help));
}
