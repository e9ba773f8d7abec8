//! `couplet`: attitude-control propellant, momentum and thruster-layout budgets.
//!
//! The modules stand in the order of the pipeline; each imports only what is above it.

pub mod units;
pub mod uncertain;
pub mod config;
pub mod vehicle;
