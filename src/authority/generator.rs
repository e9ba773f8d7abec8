//! One thruster or wheel as this room sees it.

use nalgebra::Vector3;

/// Below this fraction of the distances it was made from, a moment arm is rounding: a difference of positions and a
/// cross product round to about 1e-15 of them, and no drawing places a thruster to a tenth of a picometre.
const ARM_IS_ROUNDING: f64 = 1e-13;

/// Whether the thrusters may leave a net force on the spacecraft while they make a torque.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash)]
pub enum NetForce {
    /// Pure torque: the forces must cancel. The answer does not depend on the centre of mass.
    Zero,
    /// Whatever force the torque brings along is accepted.
    Any,
}

/// One generator of torque: a thruster (0 ≤ level ≤ most) or a wheel (−most ≤ level ≤ most).
///
/// The level of a thruster is its thrust in N (or its impulse in N·s), that of a wheel its torque in N·m (or its
/// angular momentum in N·m·s). All vectors are in the body frame.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Generator {
    /// Torque per unit level about the centre of mass: (r − c) × d in m for a thruster, the unit axis for a wheel.
    pub torque: Vector3<f64>,
    /// Force per unit level: the unit push direction of a thruster, zero for a wheel.
    pub force: Vector3<f64>,
    /// Lowest level: zero for a thruster, −`most` for a wheel. Never above zero.
    pub least: f64,
    /// Highest level. Never below zero.
    pub most: f64,
    /// Propellant per unit of impulse, kg/(N·s): one over the exhaust speed. Not used for a wheel.
    pub cost: f64,
}

impl Generator {
    /// A thruster at `position_m` that pushes the spacecraft along the unit vector `push` with up to `thrust_n`.
    ///
    /// ```text
    /// torque = (r − c) × d,  force = d,  cost = 1/u
    /// ```
    ///
    /// An arm below 1e-13 of the coordinates it comes from is taken as zero, so that a thruster aimed through the
    /// centre of mass makes exactly no torque.
    #[must_use]
    pub fn thruster(
        position_m: Vector3<f64>,
        push: Vector3<f64>,
        centre_of_mass_m: Vector3<f64>,
        thrust_n: f64,
        exhaust_speed_m_per_s: f64,
    ) -> Self {
        let arm_m = (position_m - centre_of_mass_m).cross(&push);
        let rounding_m = ARM_IS_ROUNDING * (position_m.norm() + centre_of_mass_m.norm());
        let torque = if arm_m.norm() <= rounding_m { Vector3::zeros() } else { arm_m };
        Self { torque, force: push, least: 0.0, most: thrust_n, cost: exhaust_speed_m_per_s.recip() }
    }

    /// A wheel on the unit vector `axis` that holds up to `capacity` (N·m·s, or N·m for its torque) either way.
    #[must_use]
    pub fn wheel(axis: Vector3<f64>, capacity: f64) -> Self {
        Self { torque: axis, force: Vector3::zeros(), least: -capacity, most: capacity, cost: 0.0 }
    }
}
