//! Rules on what the answer must meet.

use super::catalogue::family;

family! {
    "Answers":
}
