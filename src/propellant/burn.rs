//! Orbit burns, and what it takes to hold the attitude during one.

use nalgebra::Vector3;

/// Propellant of a burn, kg, from the mass before it: m (1 − exp(−Δv/u)).
///
/// No propellant gives no Δv, and Δv grows without bound as what is left goes to nothing. Source: K. Tsiolkovsky (1903).
#[must_use]
pub fn propellant_of_burn(delta_v_m_per_s: f64, exhaust_speed_m_per_s: f64, mass_before_kg: f64) -> f64 {
    -mass_before_kg * (-delta_v_m_per_s / exhaust_speed_m_per_s).exp_m1()
}

/// Δv that an amount of propellant gives, m/s, from the mass before the burn; infinite where it is all of the mass.
#[must_use]
pub fn delta_v_of(propellant_kg: f64, exhaust_speed_m_per_s: f64, mass_before_kg: f64) -> f64 {
    -exhaust_speed_m_per_s * (-propellant_kg / mass_before_kg).ln_1p()
}

/// A burn: how the engine or the thrusters push, and for how long.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Burn {
    /// Torque of the push about the body origin, N·m, body frame: r × F, summed.
    pub torque_n_m: Vector3<f64>,
    /// Push on the spacecraft, body frame, N.
    pub force_n: Vector3<f64>,
    /// Propellant per second, kg/s.
    pub flow_kg_per_s: f64,
    /// Propellant of the burn, kg.
    pub propellant_kg: f64,
}

impl Burn {
    /// Length, s.
    #[must_use]
    pub fn duration_s(&self) -> f64 {
        self.propellant_kg / self.flow_kg_per_s
    }

    /// Angular impulse that the engine puts on the spacecraft, N·m·s, body frame: the integral of (r − c) × F while the centre of
    /// mass `centre_m` (a function of the propellant used, kg) moves.
    ///
    /// Simpson's rule: the centre of mass is a ratio of linear functions of the propellant used, so that its fourth
    /// derivative is of the order of (used/mass)⁴.
    #[must_use]
    pub fn momentum_n_m_s(&self, centre_m: impl Fn(f64) -> Vector3<f64>) -> Vector3<f64> {
        let torque = |used_kg: f64| self.torque_n_m - centre_m(used_kg).cross(&self.force_n);
        let [start, middle, end] = [0.0, self.propellant_kg / 2.0, self.propellant_kg].map(torque);
        (start + middle * 4.0 + end) * (self.duration_s() / 6.0)
    }
}
