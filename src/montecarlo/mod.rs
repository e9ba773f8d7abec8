//! Statistics of many lifetimes: random streams, distribution-free limits and sensitivity indices.
//!
//! In: a plan, a seed and a number of lifetimes. Out: a [`Budget`]. The statistics (streams, quantiles,
//! accumulation, proportions, indices) know nothing of spacecraft: numbers come in as uniforms or
//! samples and leave as estimates with the limits that the sample size supports.

mod accumulate;
mod attribution;
mod budget;
mod compare;
mod distribution;
mod drivers;
mod export;
mod figures;
mod part;
mod probability;
mod quantiles;
mod requirement;
mod run;
mod sobol;
mod store;
mod streams;
mod swing;
mod warnings;
mod wheels;

pub use accumulate::Moments;
pub use attribution::{EXACT, attribute};
pub use budget::{Budget, FAN_LINES, FanPoint};
pub use compare::{Change, FigureChange, compare};
pub use distribution::{Distribution, Histogram, QUANTILES};
pub use drivers::{BASE, Driver, drivers};
pub use export::{export_csv, export_parquet};
pub use figures::{FAN, Figure, fan_time_s, figure_names};
pub use part::{JoinError, PartHeader, join, write_part};
pub use probability::{Proportion, proportion};
pub use quantiles::{QuantileEstimate, lower_limit_rank, quantile, upper_limit_rank, wilks_sample_size};
pub use requirement::{Checked, check_layout};
pub use run::{Design, Ended, Sample, Watch, draws, sample, sample_part};
pub use sobol::{Indices, indices};
pub use store::Store;
pub use streams::{stratified, uniforms};
pub use swing::{Swing, swings};
