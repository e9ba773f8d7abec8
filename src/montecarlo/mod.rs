//! Statistics of many lifetimes: random streams, distribution-free limits and sensitivity indices.
//!
//! Nothing here knows of spacecraft. Numbers come in as uniforms or samples and leave as estimates
//! with the limits that the sample size supports.

mod accumulate;
mod probability;
mod quantiles;
mod sobol;
mod streams;

pub use accumulate::Moments;
pub use probability::{Proportion, proportion};
pub use quantiles::{QuantileEstimate, lower_limit_rank, quantile, upper_limit_rank, wilks_sample_size};
pub use sobol::{Indices, indices};
pub use streams::uniforms;
