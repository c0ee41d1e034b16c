//! A proton balance is right, taken from another reference level.
//!
//! A proton balance counts protons from a reference level, the forms in which things were put
//! in. Taken from other forms it is as right: it is another combination of the charge balance
//! and the mass balances. The combination is given in the finding.
//!
//! Nothing has to be changed. From the forms put in, the balance needs the fewest constants,
//! and differences of large amounts do not hide in it.
//!
//! Before:
//!
//! ```lyate
//! use aqueous
//! component NH3, Cl-
//! add NH4Cl 12 mmol/L
//! balance protons
//!     [H+] + [NH4+] = [OH-] + total NH3
//! ```
//!
//! After:
//!
//! ```lyate
//! use aqueous
//! component NH3, Cl-
//! add NH4Cl 12 mmol/L
//! balance protons
//!     [H+] = [OH-] + [NH3]
//! ```

use super::terms::{combination, is_blocked};
use crate::balance::written::Verdict;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::text::span::Place;

rule!("balance-at-other-level", Note, "balance_at_other_level.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    if is_blocked(context) {
        return;
    }
    for compared in context.compared {
        let Verdict::OtherLevel(made) = &compared.verdict else { continue };
        let balance = &context.problem.balances[compared.balance];
        let message = format!(
            "right, at another reference level: the combination `{}` of the charge and mass balances",
            combination(context.problem, made)
        );
        found.push(RULE.at(balance.at, message));
    }
}
