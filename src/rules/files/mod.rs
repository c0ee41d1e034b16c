//! Rules on the files that a file uses.

use super::catalogue::family;

family! {
    "Files":
}
