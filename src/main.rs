//! The `equable` program.

fn main() {}
