//! The command-line shell: the only file that prints.
fn main() {}
