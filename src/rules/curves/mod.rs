//! Rules on curves.

use super::catalogue::family;

family! {
    "Curves":
    curve_over_outcome,
    curve_without_length,
    curve_points,
}
