//! Rules on quantities and units.

use super::catalogue::family;

family! {
    "Quantities and units":
}
