//! Rules on whether equations and unknowns match.

use super::catalogue::family;

family! {
    "Closure":
}
