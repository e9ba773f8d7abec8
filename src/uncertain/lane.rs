//! Lifetimes side by side in wide vectors.

/// How many lifetimes stand side by side: a whole number of vectors on every machine.
pub const LANES: usize = 64;

/// One number for each of them.
pub type Lane = [f64; LANES];
