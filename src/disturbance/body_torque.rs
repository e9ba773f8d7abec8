//! Constant torque of the spacecraft on itself.

use nalgebra::Vector3;

use super::{Coefficient, Feature, Source, Surroundings};
use crate::vehicle::Vehicle;

/// Heat rejection, antenna recoil, outgassing: a torque fixed in the body.
#[derive(Debug, Clone)]
pub struct BodyTorque([Coefficient; 3]);

impl BodyTorque {
    /// The body torque of a vehicle.
    #[must_use]
    pub fn new(vehicle: &Vehicle) -> Self {
        Self(vehicle.body_torque_n_m.each_ref().map(Coefficient::from))
    }
}

impl Source for BodyTorque {
    fn name(&self) -> &'static str {
        "body_torque"
    }

    fn features(&self) -> Vec<Feature> {
        self.0.iter().map(|component| Feature::new(component.factor.into_iter().collect())).collect()
    }

    fn torques(&self, _: &Surroundings, out: &mut [Vector3<f64>]) {
        let axes = [Vector3::x(), Vector3::y(), Vector3::z()];
        for ((place, axis), component) in out.iter_mut().zip(axes).zip(&self.0) {
            *place = axis * component.scale;
        }
    }
}
