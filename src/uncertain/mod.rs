//! Numbers with a spread.
//!
//! In: text with units, or a distribution's parameters in SI. Out: its nominal value, its quantiles,
//! the values it can take; the registry of named parameters. Knows nothing of what a number stands for.

mod joint;
mod lane;
mod parameter;
mod spread;
mod table;
mod text;

pub use joint::{Anew, Correlated};
pub use lane::{LANES, Lane};
pub use parameter::{Draw, Parameter, ParameterId, Parameters, Uncertain};
pub use spread::{Spread, SpreadError};
pub use table::Table;
pub use text::{parse_spread, parse_spread_triple, parse_triple};
