//! Rules on components and the species made of them.

use super::catalogue::family;

pub mod listing;

family! {
    "Components":
    components_not_independent,
    component_unused,
    species_not_in_problem,
    not_a_component,
    wrong_phase,
    share_of_nothing,
    total_missing,
    total_given_twice,
    total_and_reagents,
    total_negative,
}
