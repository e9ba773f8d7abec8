//! What it takes one thruster to give an impulse in pulses.

use crate::vehicle::PulseLimits;

/// Pulses of one thruster.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Firing {
    /// How many; a fraction where the impulse is less than whole shortest pulses give.
    pub pulses: f64,
    /// On-time of each, s.
    pub on_time_s: f64,
    /// Propellant, kg.
    pub propellant_kg: f64,
}

/// Splits an impulse (N·s) into equal pulses no longer than the longest.
///
/// ```text
/// n = ⌈J / (F t_longest)⌉,  t = J / (n F),  m = J / (u · share(t))
/// ```
///
/// An impulse under one shortest pulse counts as a fraction of such a pulse: over many unloads the
/// remainder is carried on and a whole pulse fires when it is due, so that the mean is right.
#[must_use]
pub fn fire(impulse_n_s: f64, thrust_n: f64, exhaust_speed_m_per_s: f64, limits: &PulseLimits) -> Firing {
    if impulse_n_s <= 0.0 {
        return Firing { pulses: 0.0, on_time_s: 0.0, propellant_kg: 0.0 };
    }
    let on_s = impulse_n_s / thrust_n;
    let whole = (on_s / limits.longest_s).ceil().max(1.0);
    let on_time_s = (on_s / whole).max(limits.shortest_s);
    Firing { pulses: on_s / on_time_s, on_time_s, propellant_kg: impulse_n_s / (exhaust_speed_m_per_s * limits.share(on_time_s)) }
}
