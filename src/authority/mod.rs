//! What torque a set of thrusters or wheels can make, exactly and in every direction, and what it costs.
//!
//! In go [`Generator`]s: torque and force per unit level, bounds, cost. Out come an [`Authority`] (the attainable
//! torques as half-spaces) and a [`PriceMap`] (the least propellant for any angular impulse), each with or without
//! net force, and both for a list of failures with [`cases()`]. The room knows no orbits, configuration or names.

mod balance;
mod cases;
mod edges;
mod envelope;
mod facets;
mod factors;
mod generator;
mod linear;
mod opening;
mod planes;
mod price;
mod reduced;
mod simplex;
mod tariff;

pub use cases::{Capability, Case, cases, single_failures, without};
pub use envelope::{Authority, HalfSpace};
pub use generator::{Generator, NetForce};
pub use price::{Basis, PlainBasis, Price, PriceMap, Vertex};
