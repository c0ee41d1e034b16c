//! Rules on what is put in.

use super::catalogue::family;

family! {
    "Reagents":
}
