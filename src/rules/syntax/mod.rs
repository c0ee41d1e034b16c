//! Rules on how a statement is written.

use super::catalogue::family;

mod forms;

family! {
    "Writing":
    unknown_statement,
    unexpected_syntax,
    broken_number,
    unclosed_string,
    unknown_character,
    no_space_round_plus,
    repeated_clause,
    stray_indent,
    nesting_too_deep,
    expression_too_long,
}
