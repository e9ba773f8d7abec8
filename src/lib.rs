//! `couplet`: attitude-control propellant, momentum and thruster-layout budgets.
//!
//! The modules stand in the order of the pipeline; each imports only what is above it.

// The order is the pipeline's; alphabetical order would hide it.
#[rustfmt::skip]
mod pipeline {}

pub mod units;
pub mod uncertain;
pub mod config;
pub mod vehicle;
pub mod environment;
pub mod mission;
pub mod disturbance;
