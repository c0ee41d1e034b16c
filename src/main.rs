//! The `lyate` program.

fn main() {}
