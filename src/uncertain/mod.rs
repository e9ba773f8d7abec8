//! Numbers with a spread.
//!
//! In: a distribution's parameters in SI. Out: its nominal value, its quantiles, the values it can
//! take. Knows nothing of what the number stands for.

mod parameter;
mod spread;

pub use parameter::{Draw, Parameter, ParameterId, Parameters, Uncertain};
pub use spread::Spread;
