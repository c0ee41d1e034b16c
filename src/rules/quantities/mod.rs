//! Rules on numbers and their units.

use super::catalogue::family;

mod kinds;

family! {
    "Quantities":
    unknown_unit,
    unit_missing,
    wrong_dimension,
    unit_not_applicable,
    mixed_scales,
    impossible_value,
}
