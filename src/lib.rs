//! `couplet`: attitude-control propellant, momentum and thruster-layout budgets.
//!
//! The modules stand in the order of the pipeline; each imports only what is above it.

pub mod units;
pub mod uncertain;
pub mod config;
pub mod vehicle;
pub mod authority;
pub mod layout;
pub mod environment;
pub mod mission;
pub mod disturbance;
pub mod momentum;
pub mod pulses;
pub mod propellant;
pub mod lifetime;
pub mod montecarlo;
pub mod report;
pub mod cli;
