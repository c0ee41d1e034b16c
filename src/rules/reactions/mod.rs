//! Rules on reactions and their constants.

use super::catalogue::family;

family! {
    "Reactions":
    charge_not_conserved,
}
