//! A value is held and nothing is left free to meet it.
//!
//! Every held value brings one equation, so it needs one unknown: a held concentration or
//! activity makes the total of its component unknown, held pH releases the charge balance, a
//! held gas brings or takes an amount of itself. Here what would be free is given already.
//!
//! Two demands on one quantity cannot both be met. Take the given total or reagent away to
//! find how much it must be, or keep it and `expect` the value to see how far off it is.
//!
//! Before:
//!
//! ```lyate
//! component F-, Na+
//! reaction HF <=> H+ + F-, pKa = 3.17, source "site table, row 2"
//! add NaF 0.1 mmol/L
//! hold [F-] = 1 mg/L
//! ```
//!
//! After:
//!
//! ```lyate
//! component F-, Na+
//! reaction HF <=> H+ + F-, pKa = 3.17, source "site table, row 2"
//! add NaF 0.1 mmol/L
//! expect [F-] between 1 and 2 mg/L
//! ```

use crate::problem::defect::DefectKind;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::text::span::Place;

rule!("nothing-left-free", Error, "nothing_left_free.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for defect in context.defects() {
        let DefectKind::NothingFree { subject, given } = &defect.kind else { continue };
        if subject == "total H+" {
            let message = "the total of H+ follows from the charge balance and cannot be given";
            let help = "an acid is put in as a reagent, such as `add HCl …`; to impose the pH, \
                        write `hold pH = …`";
            found.push(RULE.at(defect.at, message).with_help(help));
            continue;
        }
        let mut finding = RULE.at(
            defect.at,
            match given {
                Some(_) => format!("`{subject}` is held, and the amount it would set is given too"),
                None => format!("`{subject}` is held, and no total is free to meet it"),
            },
        );
        if let Some(given) = given {
            finding = finding.with_related(*given, "given here");
        }
        let help = format!("leave out one of the two, or write `expect {subject} = …`");
        found.push(finding.with_help(help));
    }
}
