//! A given ionic strength beside a model that does not ask for it.
//!
//! Pitzer's method takes the amount of each ion, as the solution has it, and not the ionic
//! strength alone. A given one has no say.
//!
//! Put in the salt that makes up the medium instead, or take a model that goes by the ionic
//! strength.
//!
//! Before:
//!
//! ```lyate
//! activity pitzer
//! ionic strength 1 mol/kg
//! component Na+, Cl-
//! add HCl 10 mmol/kg
//! ```
//!
//! After:
//!
//! ```lyate
//! activity pitzer
//! component Na+, Cl-
//! add HCl 10 mmol/kg
//! add NaCl 0.99 mol/kg
//! ```

use crate::chemistry::activity::ActivityKind;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::text::span::Place;
use crate::text::tree::Statement;

rule!("ionic-strength-not-used", Warning, "ionic_strength_not_used.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    if context.problem.activity != ActivityKind::Pitzer {
        return;
    }
    for written in context.statements {
        if let Statement::IonicStrength { value } = written.statement() {
            let message = "`pitzer` goes by the amount of each ion and leaves this ionic strength \
                           out of account";
            let help = "put in the salt that makes up the medium instead";
            found.push(RULE.at(written.place(value.span), message).with_help(help));
        }
    }
}
