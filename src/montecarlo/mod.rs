//! Statistics of many lifetimes: random streams, distribution-free limits and sensitivity indices.
//!
//! In: a plan, a seed and a number of lifetimes. Out: a [`Budget`]. The statistics (streams, quantiles,
//! accumulation, proportions, indices) know nothing of spacecraft: numbers come in as uniforms or
//! samples and leave as estimates with the limits that the sample size supports.

mod accumulate;
mod budget;
mod drivers;
mod probability;
mod quantiles;
mod run;
mod sobol;
mod store;
mod streams;
mod warnings;
mod wheels;

pub use accumulate::Moments;
pub use budget::{Budget, Checked, Distribution, Progress, QUANTILES, check_layout};
pub use drivers::{BASE, Driver, drivers};
pub use probability::{Proportion, proportion};
pub use quantiles::{QuantileEstimate, lower_limit_rank, quantile, upper_limit_rank, wilks_sample_size};
pub use run::{Figure, draws, run};
pub use sobol::{Indices, indices};
pub use store::{Store, Wanted};
pub use streams::uniforms;
