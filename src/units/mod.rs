//! Quantities with units: text in, SI out.
//!
//! In: the text of one quantity and the dimension the key asks for. Out: `f64` in SI, or what is
//! wrong and where in the text. Knows nothing of YAML, files or spacecraft.

mod dimension;

pub use dimension::{Dimension, Kind, kind};
