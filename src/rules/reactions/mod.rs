//! Rules on reactions and their constants.

use super::catalogue::family;

mod closing;
mod own;

family! {
    "Reactions":
    element_not_conserved,
    charge_not_conserved,
    constant_missing,
    two_constants,
    constant_kind_mismatch,
    constant_for_other_temperature,
    outside_valid_range,
    constant_without_value,
    source_missing,
    differs_from_set,
    reaction_repeated,
    reaction_follows_from_others,
    weak_acid_as_base,
}
