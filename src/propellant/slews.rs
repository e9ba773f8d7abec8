//! Rest-to-rest slews on thrusters.

use nalgebra::Vector3;

use crate::authority::Authority;
use crate::vehicle::MassState;

/// The two angular impulses of a slew and its length.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct SlewMomentum {
    /// Angular impulse that starts it, N·m·s, body frame; the opposite stops it.
    pub start_n_m_s: Vector3<f64>,
    /// Highest rate reached, rad/s.
    pub rate_rad_per_s: f64,
    /// Length, s.
    pub duration_s: f64,
}

/// Slew about a unit axis by `angle_rad`, at most at `rate_rad_per_s`.
///
/// ```text
/// ω = min(rate, sqrt(θ T / I)),  h = I e ω,  t = θ / ω + ω I / T
/// ```
///
/// with T the lesser of the torques along ±I e. A slew too short to reach the rate is bang-bang:
/// t = 2 sqrt(θ I / T). `None` if the thrusters make no such torque.
#[must_use]
pub fn slew_momentum(
    axis: &Vector3<f64>,
    angle_rad: f64,
    rate_rad_per_s: f64,
    mass: &MassState,
    authority: &Authority,
) -> Option<SlewMomentum> {
    let momentum_per_rate = mass.inertia_kg_m2 * axis;
    let along = momentum_per_rate.normalize();
    let torque = authority.most(&along).min(authority.most(&-along));
    if torque <= 0.0 {
        return None;
    }
    let inertia = momentum_per_rate.norm();
    let rate = rate_rad_per_s.min((angle_rad * torque / inertia).sqrt());
    Some(SlewMomentum {
        start_n_m_s: momentum_per_rate * rate,
        rate_rad_per_s: rate,
        duration_s: angle_rad / rate + rate * inertia / torque,
    })
}
