//! What misalignment and unequal thrust add to a commanded torque.

use nalgebra::Vector3;

use super::AXES;
use crate::authority::{Generator, NetForce, PriceMap};
use crate::vehicle::Vehicle;

/// Parasitic torque and force of 1 N·m about one signed axis, by component x, y, z.
#[derive(Debug, Clone, PartialEq)]
pub struct Dispersion {
    /// The axis.
    pub axis: &'static str,
    /// Torque, root sum square, N·m per N·m.
    pub torque_rss: Vector3<f64>,
    /// Torque at worst, each component for itself, N·m per N·m.
    pub torque_worst: Vector3<f64>,
    /// Force, root sum square, N per N·m.
    pub force_rss: Vector3<f64>,
    /// Force at worst, each component for itself, N per N·m.
    pub force_worst: Vector3<f64>,
}

/// Dispersion of the cheapest pure torque about each signed axis that has one, about `centre_m`.
///
/// The push of a thruster lies in a cone of half-angle α about its nominal direction, its thrust within ± s of
/// nominal; to first order its force f d changes by f (δ + ε d), |δ| ≤ α across d, |ε| ≤ s. A component g·(change), with
/// g = e for the force along e and g = e × (r − c) for the torque about e, is at worst
///
/// ```text
/// Σ f (α |g across d| + s |g·d|)
/// ```
///
/// and, with δ even over its disc and ε even over its range, of root mean square
///
/// ```text
/// √ Σ f² (α²/4 |g across d|² + s²/3 (g·d)²)
/// ```
///
/// Empty if the configuration states neither α nor s.
#[must_use]
pub fn dispersions(vehicle: &Vehicle, centre_m: &Vector3<f64>) -> Vec<Dispersion> {
    let propulsion = &vehicle.propulsion;
    let (alpha, share) = (propulsion.alignment_rad, propulsion.thrust_tolerance);
    if alpha <= 0.0 && share <= 0.0 {
        return Vec::new();
    }
    let generators: Vec<Generator> = propulsion.thrusters.iter().map(|thruster| super::generator(thruster, centre_m)).collect();
    let prices = PriceMap::new(&generators, NetForce::Zero);
    let commanded = AXES.iter().filter_map(|(axis, direction)| Some((*axis, prices.allocate(&Vector3::from(*direction))?)));
    commanded
        .map(|(axis, levels)| {
            let component = |g: &dyn Fn(usize) -> Vector3<f64>| {
                let mut worst = 0.0;
                let mut square = 0.0;
                for (k, level) in levels.iter().enumerate() {
                    let (g, d) = (g(k), generators[k].force);
                    let (along, across) = (g.dot(&d), (g - d * g.dot(&d)).norm());
                    worst += level * (alpha * across + share * along.abs());
                    square += level * level * (alpha * alpha / 4.0 * across * across + share * share / 3.0 * along * along);
                }
                (worst, f64::sqrt(square))
            };
            let units = [Vector3::x(), Vector3::y(), Vector3::z()];
            let force = units.map(|e| component(&|_| e));
            let torque = units.map(|e| component(&|k| e.cross(&(propulsion.thrusters[k].position_m - centre_m))));
            Dispersion {
                axis,
                torque_rss: Vector3::from(torque.map(|(_, rss)| rss)),
                torque_worst: Vector3::from(torque.map(|(worst, _)| worst)),
                force_rss: Vector3::from(force.map(|(_, rss)| rss)),
                force_worst: Vector3::from(force.map(|(worst, _)| worst)),
            }
        })
        .collect()
}
