//! Throughput of the lifetime engine.
fn main() {}
