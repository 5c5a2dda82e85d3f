//! The `ventrise` program.
fn main() {}
