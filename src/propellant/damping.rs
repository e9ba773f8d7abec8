//! Damping of body rates.

use nalgebra::Vector3;

use crate::vehicle::MassState;

/// Angular impulse that stops a tumbling spacecraft: −I ω, N·m·s in the body frame.
///
/// Rates are taken as slow against the time of firing, so that the momentum keeps its direction in the body.
#[must_use]
pub fn damping_momentum(rates_rad_per_s: &Vector3<f64>, mass: &MassState) -> Vector3<f64> {
    -(mass.inertia_kg_m2 * rates_rad_per_s)
}
