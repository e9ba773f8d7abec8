//! The same questions with generators lost.

use super::{Authority, Generator, NetForce, PriceMap};

/// Torque and price under one force condition.
#[derive(Debug, Clone)]
pub struct Capability {
    /// Attainable torques.
    pub authority: Authority,
    /// Least propellant.
    pub price: PriceMap,
}

/// A layout with some generators lost.
#[derive(Debug, Clone)]
pub struct Case {
    /// Indices of the lost generators.
    pub lost: Vec<usize>,
    /// With no net force.
    pub pure_torque: Capability,
    /// With whatever force.
    pub any_force: Capability,
}

/// Answers for `generators` without each of the sets `lost`, in that order; indices stay those of `generators`.
#[must_use]
pub fn cases(_generators: &[Generator], _lost: &[Vec<usize>]) -> Vec<Case> {
    let _ = NetForce::Zero;
    unimplemented!()
}

/// The sets for [`cases`]: nothing lost, then each of `count` generators alone.
#[must_use]
pub fn single_failures(count: usize) -> Vec<Vec<usize>> {
    std::iter::once(Vec::new())
        .chain((0..count).map(|lost| vec![lost]))
        .collect()
}
