//! Gravity-gradient torque.

use nalgebra::Vector3;

use super::{Factor, Feature, Source, Surroundings};

/// Torque of the central body's gravity on an extended body.
///
/// ```text
/// T = 3 μ / r³ · r̂ × (I r̂)
/// ```
///
/// Source: R. E. Roberson and R. Schwertassek, Dynamics of Multibody Systems (1988), ch. 5; the form
/// is standard (from memory).
#[derive(Debug, Clone, Copy)]
pub struct GravityGradient;

impl Source for GravityGradient {
    fn name(&self) -> &'static str {
        "gravity_gradient"
    }

    fn features(&self) -> Vec<Feature> {
        (0..6).map(|element| Feature::new(vec![Factor::Inertia(element)])).collect()
    }

    fn torques(&self, surroundings: &Surroundings, out: &mut [Vector3<f64>]) {
        let r = surroundings.position_m;
        let distance = r.norm();
        let up = r / distance;
        let scale = 3.0 * surroundings.mu_m3_per_s2 / distance.powi(3);
        let (x, y, z) = (up.x, up.y, up.z);
        // r̂ × (E r̂) for the six symmetric unit matrices E.
        let unit = [
            Vector3::new(0.0, z * x, -y * x),
            Vector3::new(-z * y, 0.0, x * y),
            Vector3::new(y * z, -x * z, 0.0),
            Vector3::new(-z * x, z * y, x * x - y * y),
            Vector3::new(y * x, z * z - x * x, -y * z),
            Vector3::new(y * y - z * z, -x * y, x * z),
        ];
        for (place, torque) in out.iter_mut().zip(unit) {
            *place = torque * scale;
        }
    }
}
