//! Spinning up and down, and turning the axis of a spin.

use nalgebra::Vector3;

use crate::vehicle::MassState;

/// Angular impulse that changes a spin about a unit axis from one rate to another (rad/s), N·m·s in the body frame: the
/// change of I ω.
#[must_use]
pub fn spin_momentum(axis: &Vector3<f64>, from_rad_per_s: f64, to_rad_per_s: f64, mass: &MassState) -> Vector3<f64> {
    mass.inertia_kg_m2 * axis * (to_rad_per_s - from_rad_per_s)
}

/// Angular impulse that turns the axis of a spin by an angle, N·m·s, the pulses' loss included.
///
/// ```text
/// I ω θ / sinc(arc / 2)
/// ```
///
/// Many small pulses, one a revolution, carry the momentum along the arc of θ. A pulse that lasts while the body turns by
/// `arc_rad` gives the share sinc(arc/2) of its impulse in the direction that is wanted: 0.955 at 60°.
///
/// Source: V. L. Pisacane, Fundamentals of Space Systems (from memory); the sinc is the mean of a cosine over the arc.
#[must_use]
pub fn axis_turn_momentum(axis: &Vector3<f64>, rate_rad_per_s: f64, angle_rad: f64, arc_rad: f64, mass: &MassState) -> f64 {
    let momentum = axis.dot(&(mass.inertia_kg_m2 * axis)) * rate_rad_per_s.abs();
    momentum * angle_rad.abs() / arc_efficiency(arc_rad)
}

/// Share of a pulse's impulse that counts, when it lasts while the body turns by `arc_rad`.
#[must_use]
pub fn arc_efficiency(arc_rad: f64) -> f64 {
    let half = arc_rad.abs() / 2.0;
    if half < 1e-6 { 1.0 } else { half.sin() / half }
}
