//! Force of a rarefied gas on a plate, by how its molecules leave it.

use std::f64::consts::PI;

use statrs::function::erf::erf;

use crate::environment::Gas;

/// Boltzmann constant, J/K. Source: SI (exact).
const BOLTZMANN_J_PER_K: f64 = 1.380_649e-23;

/// Pressure and shear on one side of a plate over the dynamic pressure ½ ρ v²: each constant, and its share per unit of an
/// accommodation coefficient.
#[derive(Debug, Clone, Copy, Default, PartialEq)]
pub struct PlateCoefficients {
    /// Pressure without accommodation (mirror-like).
    pub mirror: f64,
    /// Pressure per unit of normal accommodation.
    pub normal: f64,
    /// Shear per unit of tangential accommodation and of the sine of the angle of attack.
    pub tangential: f64,
}

/// Coefficients for a plate whose outward normal makes an angle of cosine `cos` with the velocity through the gas.
///
/// ```text
/// p = { [(2 − σn) s/√π + σn/2 √(Tw/T)] e^(−s²) + [(2 − σn)(s² + ½) + σn/2 √(π Tw/T) s] (1 + erf s) } / S²
/// τ = σt sinθ { e^(−s²) + √π s (1 + erf s) } / (S √π)
/// ```
///
/// with S = v / √(2 k T / m) and s = S cosθ. Finite for any speed but zero; the lee side counts with its own small values.
///
/// Source: S. A. Schaaf and P. L. Chambre, Flow of Rarefied Gases (1961), in the form of P. C. Hughes, Spacecraft Attitude
/// Dynamics, ch. 8 (from memory).
#[must_use]
pub fn plate_coefficients(speed_m_per_s: f64, cos: f64, gas: &Gas, wall_k: f64) -> PlateCoefficients {
    let thermal = (2.0 * BOLTZMANN_J_PER_K * gas.temperature_k / gas.molecular_mass_kg).sqrt();
    let ratio = speed_m_per_s / thermal;
    if !ratio.is_finite() || ratio <= 0.0 {
        return PlateCoefficients::default();
    }
    let s = ratio * cos;
    let (bell, edge) = ((-s * s).exp(), 1.0 + erf(s));
    let warm = (wall_k / gas.temperature_k).sqrt();
    let arriving = s / PI.sqrt() * bell + (s * s + 0.5) * edge;
    let leaving = 0.5 * warm * (bell + PI.sqrt() * s * edge);
    PlateCoefficients {
        mirror: 2.0 * arriving / (ratio * ratio),
        normal: (leaving - arriving) / (ratio * ratio),
        tangential: (bell + PI.sqrt() * s * edge) / (ratio * PI.sqrt()),
    }
}
