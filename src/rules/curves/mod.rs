//! Rules on curves.

use super::catalogue::family;

family! {
    "Curves":
    curve_over_outcome,
    curve_over_no_part,
    curve_without_length,
    curve_points,
}
