//! Rules on formulas.

use super::catalogue::family;

family! {
    "Formulas":
}
