//! Rules on formulas and groups.

use super::catalogue::family;

family! {
    "Formulas":
    unknown_element,
    unbalanced_parenthesis,
    ambiguous_charge,
    unreadable_formula,
    two_names_for_one_composition,
    group_not_usable,
}
