//! Rules on balances written by hand.

use super::catalogue::family;

mod terms;

family! {
    "Balances":
    balance_term_missing,
    balance_term_foreign,
    balance_coefficient_wrong,
    balance_amount_wrong,
    balance_at_other_level,
}
