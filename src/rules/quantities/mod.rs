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
    uncertainty_of_zero,
    uncertainty_too_large,
    relative_uncertainty_of_logarithm,
    uncertainty_not_used,
    confidence_out_of_range,
}
