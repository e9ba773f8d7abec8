//! Numbers with a spread.
//!
//! In: a distribution's parameters in SI. Out: its nominal value, its quantiles, the values it can
//! take. Knows nothing of what the number stands for.

mod spread;

pub use spread::Spread;
