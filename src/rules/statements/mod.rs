//! Rules on statements as a whole.

use super::catalogue::family;

family! {
    "Statements":
}
