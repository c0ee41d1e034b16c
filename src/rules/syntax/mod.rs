//! Rules on how a statement is written.

use super::catalogue::family;

family! {
    "Writing":
}
