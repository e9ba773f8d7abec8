//! Disturbance torques integrated: what the wheels collect between unloads.
//!
//! In: a scenario. Out: for representative spans of the mission, the angular momentum of each feature
//! of the torque, seen in the body when the wheels are unloaded, and its excursion within an orbit.
//! Knows nothing of thrusters or propellant.

mod converge;
mod fold;
mod nominal;
mod panel;
mod simulate;
mod strata;

pub use converge::{Convergence, simulate};
pub use fold::{FeatureValues, FoldedBasis, MassHistory, PlanFactor};
pub use nominal::{PhaseMomentum, phase_momentum};
pub use panel::{Panels, least_propellant};
pub use simulate::{RawBasis, SourceFeature, SpanBasis};
pub use strata::{Grid, Resolution, Span, Stratum, strata};

use crate::authority::{Authority, Generator, NetForce};
use crate::vehicle::Wheels;

/// Momentum that the wheels can hold, every direction, with all wheels at work.
#[must_use]
pub fn wheel_envelope(wheels: &Wheels) -> Authority {
    envelope(wheels, wheels.capacity_n_m_s)
}

/// Torque that the wheels can make, every direction.
#[must_use]
pub fn wheel_torque(wheels: &Wheels) -> Authority {
    envelope(wheels, wheels.torque_n_m)
}

fn envelope(wheels: &Wheels, each: f64) -> Authority {
    let generators: Vec<_> = wheels.wheels.iter().map(|wheel| Generator::wheel(wheel.axis.into_inner(), each)).collect();
    Authority::new(&generators, NetForce::Any)
}
