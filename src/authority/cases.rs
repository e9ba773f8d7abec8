//! The same questions with generators lost.

use rayon::prelude::*;

use super::{Authority, Generator, NetForce, PriceMap};

/// Torque and price under one force condition.
#[derive(Debug, Clone)]
pub struct Capability {
    /// Attainable torques.
    pub authority: Authority,
    /// Least propellant.
    pub price: PriceMap,
}

impl Capability {
    /// Both answers for `generators`.
    #[must_use]
    pub fn new(generators: &[Generator], net: NetForce) -> Self {
        Self { authority: Authority::new(generators, net), price: PriceMap::new(generators, net) }
    }
}

/// A layout with some generators lost.
#[derive(Debug, Clone)]
pub struct Case {
    /// Indices of the lost generators.
    pub lost: Vec<usize>,
    /// With no net force. Does not depend on the centre of mass: a couple has no reference point.
    pub pure_torque: Capability,
    /// With whatever force.
    pub any_force: Capability,
}

/// Answers for `generators` without each of the sets `lost`, in that order; indices stay those of `generators`.
///
/// The sets are shared among threads; the answers do not depend on how many there are.
#[must_use]
pub fn cases(generators: &[Generator], lost: &[Vec<usize>]) -> Vec<Case> {
    let case = |lost: &Vec<usize>| {
        let left = without(generators, lost);
        Case { lost: lost.clone(), pure_torque: Capability::new(&left, NetForce::Zero), any_force: Capability::new(&left, NetForce::Any) }
    };
    lost.par_iter().map(case).collect()
}

/// `generators` with those in `lost` bounded to zero, which counts as lost everywhere in this room.
#[must_use]
pub fn without(generators: &[Generator], lost: &[usize]) -> Vec<Generator> {
    let keep = |(index, g): (usize, &Generator)| {
        if lost.contains(&index) { Generator { least: 0.0, most: 0.0, ..*g } } else { *g }
    };
    generators.iter().enumerate().map(keep).collect()
}

/// The sets for [`cases`]: nothing lost, then each of `count` generators alone.
#[must_use]
pub fn single_failures(count: usize) -> Vec<Vec<usize>> {
    std::iter::once(Vec::new()).chain((0..count).map(|lost| vec![lost])).collect()
}
