//! Rules on what is put in.

use super::catalogue::family;

family! {
    "Reagents":
    reagent_not_neutral,
    reagent_split_not_unique,
    reagent_element_not_held,
    giving_not_conserved,
    reagent_not_added,
}
