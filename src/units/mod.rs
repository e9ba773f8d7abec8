//! Quantities with units: text in, SI out.
//!
//! In: the text of one quantity and the dimension the key asks for. Out: `f64` in SI, or what is
//! wrong and where in the text. Knows nothing of YAML, files or spacecraft.

mod dimension;
mod expression;
mod parse;
mod table;

pub use dimension::{Dimension, Kind, kind};
pub use expression::unit_factor;
pub use parse::{QuantityError, number_prefix, parse, parse_kind};
pub(crate) use parse::{expect_unit, finite, for_kind};
