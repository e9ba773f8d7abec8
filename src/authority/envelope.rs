//! The set of torques that a layout can make, as half-spaces.

use nalgebra::Vector3;

use super::{Generator, NetForce};

/// One face of the attainable set: every attainable torque has `normal · torque ≤ offset`.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct HalfSpace {
    /// Unit vector, within the span of the attainable torques.
    pub normal: Vector3<f64>,
    /// Distance of the face from the origin, in the unit of torque. Never negative: no torque is always attainable.
    pub offset: f64,
}

/// The torques that a layout can make.
#[derive(Debug, Clone)]
pub struct Authority {
    /// Dimension of the set of attainable torques (under the force condition asked for), 0 to 3.
    pub rank: usize,
    /// Rank of the torques of all generators, whatever force they leave, 0 to 3.
    pub torque_rank: usize,
    /// Rank of the wrenches (torque and force) of all generators, 0 to 6.
    pub wrench_rank: usize,
    /// The faces of the set.
    pub half_spaces: Vec<HalfSpace>,
    /// Orthonormal directions in which no torque is attainable either way: 3 − `rank` of them.
    pub missing: Vec<Vector3<f64>>,
}

impl Authority {
    /// The attainable torques of `generators`. Cannot fail; no generators give the set {0}.
    #[must_use]
    pub fn new(_generators: &[Generator], _net: NetForce) -> Self {
        unimplemented!()
    }

    /// The most torque along `direction` (any length but zero), in the unit of level × arm; 0 if there is none.
    #[must_use]
    pub fn most(&self, _direction: &Vector3<f64>) -> f64 {
        unimplemented!()
    }

    /// The torque available in whatever direction: radius of the largest ball about zero inside the set.
    #[must_use]
    pub fn guaranteed(&self) -> f64 {
        unimplemented!()
    }

    /// The unit direction in which only [`Self::guaranteed`] is available.
    #[must_use]
    pub fn weakest_direction(&self) -> Vector3<f64> {
        unimplemented!()
    }

    /// Whether some torque is available in every direction.
    #[must_use]
    pub fn every_direction(&self) -> bool {
        unimplemented!()
    }

    /// How far `h` fills the set: 0 for none, 1 on the boundary, infinite where nothing is attainable.
    #[must_use]
    pub fn fill(&self, _h: &Vector3<f64>) -> f64 {
        unimplemented!()
    }

    /// Level of each generator at the point of most torque along `direction`: a basic solution, few of them part way.
    ///
    /// `generators` must be those that the authority was made from.
    #[must_use]
    pub fn serving(&self, _direction: &Vector3<f64>, _generators: &[Generator]) -> Vec<f64> {
        unimplemented!()
    }
}
