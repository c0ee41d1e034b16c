//! Rules on balances written by hand.

use super::catalogue::family;

family! {
    "Written balances":
}
