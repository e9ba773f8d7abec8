//! The arithmetic of each row of the ledger.
//!
//! In: angular impulses, performance, rates. Out: propellant. Knows nothing of chance: a row is a
//! function of the values of one draw. One function of attitude control is one file.

mod burn;
mod damping;
mod deadband;
mod row;
mod slews;
mod spin;

pub use burn::{Burn, delta_v_of, propellant_of_burn};
pub use damping::damping_momentum;
pub use deadband::{DeadbandAxis, PulseRates, mean_rate};
pub use row::{ROWS, Row};
pub use slews::{SlewMomentum, slew_momentum};
pub use spin::{arc_efficiency, axis_turn_momentum, spin_momentum};

/// Propellant of a burn by the rocket equation, kg.
///
/// ```text
/// m = m_end (exp(Δv / u) − 1)
/// ```
///
/// with the mass at its end, kg, and exhaust speed u, m/s. Source: K. Tsiolkovsky (1903).
#[must_use]
pub fn burn_propellant(delta_v_m_per_s: f64, exhaust_speed_m_per_s: f64, final_mass_kg: f64) -> f64 {
    final_mass_kg * (delta_v_m_per_s / exhaust_speed_m_per_s).exp_m1()
}
