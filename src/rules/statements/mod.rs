//! Rules on statements as a whole.

use super::catalogue::family;

family! {
    "Statements":
    statement_repeated,
    nothing_to_remove,
    case_repeated,
    unknown_activity_model,
}
