//! Rules on targets, and on the stocks that doses come from.

use super::catalogue::family;

family! {
    "Targets and stocks":
    target_out_of_reach,
    target_not_moved,
    more_than_one_dose,
    amount_found_twice,
    density_missing,
}
