//! Rules on components and totals.

use super::catalogue::family;

family! {
    "Components":
}
