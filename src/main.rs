//! The `couplet` command.
fn main() {}
