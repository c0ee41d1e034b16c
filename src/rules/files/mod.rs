//! Rules on sets and other files that a file uses.

use super::catalogue::family;

family! {
    "Files":
    unknown_set,
    file_missing,
    file_not_text,
    import_cycle,
    import_outside_root,
    imported_file_broken,
}
