//! More than one amount meets a target.
//!
//! A hydroxide that dissolves again in more base, or a buffer capacity that rises and falls, is
//! passed twice as the dose grows. The smallest amount is the one shown. What separates the two
//! is seen by giving each with `add`, in a case of its own.
//!
//! Only amounts that lie further apart than the meshes of the search, half a decade, are sure
//! to be told apart; of several targets at once, only one answer is looked for.
//!
//! Before:
//!
//! ```lyate
//! component Al^3+, Cl-, Na+
//! activity ideal
//! reaction Al^3+ + 4 H2O <=> Al(OH)4- + 4 H+, log K = -22.7, source "site table, row 41"
//! reaction Al(OH)3(s) + 3 H+ <=> Al^3+ + 3 H2O, log K = 8.5, source "site table, row 42"
//! add AlCl3 1 mmol/L
//! hold saturation index Al(OH)3(s) = 5 by NaOH
//! ```
//!
//! After:
//!
//! ```lyate
//! component Al^3+, Cl-, Na+
//! activity ideal
//! reaction Al^3+ + 4 H2O <=> Al(OH)4- + 4 H+, log K = -22.7, source "site table, row 41"
//! reaction Al(OH)3(s) + 3 H+ <=> Al^3+ + 3 H2O, log K = 8.5, source "site table, row 42"
//! add AlCl3 1 mmol/L
//! hold pH = 6 by NaOH
//! ```

use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::figures::concentration;
use crate::rules::finding::Finding;
use crate::rules::words::list;
use crate::text::span::Place;

rule!("more-than-one-dose", Note, "more_than_one_dose.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    let Some(dosed) = context.solved().and_then(|solved| solved.dosed.as_ref()) else { return };
    let ([amount], [target]) = (&dosed.amounts[..], &dosed.targets[..]) else { return };
    let words = |amount: f64| concentration(amount, context.problem.scale);
    let others: Vec<String> =
        dosed.others.iter().filter_map(|other| other.first()).map(|&n| words(n)).collect();
    if others.is_empty() {
        return;
    }
    let name = context.problem.unknown_name(target.unknown);
    let brings = if others.len() == 1 { "brings" } else { "bring" };
    let message = format!(
        "{} of `{name}` {brings} {} there too; the smallest amount, {}, is shown",
        list(&others, "and"),
        target.words,
        words(*amount)
    );
    let help = format!("give the other with `add {name} …` to see what that water is like");
    found.push(RULE.at(target.at, message).with_help(help));
}
