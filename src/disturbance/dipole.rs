//! Torque of the residual dipole in the geomagnetic field.

use nalgebra::Vector3;

use super::{Coefficient, Feature, Source, Surroundings};
use crate::vehicle::Vehicle;

/// T = m × B.
#[derive(Debug, Clone)]
pub struct ResidualDipole([Coefficient; 3]);

impl ResidualDipole {
    /// The dipole of a vehicle.
    #[must_use]
    pub fn new(vehicle: &Vehicle) -> Self {
        Self(vehicle.residual_dipole_a_m2.each_ref().map(Coefficient::from))
    }
}

impl Source for ResidualDipole {
    fn name(&self) -> &'static str {
        "residual_dipole"
    }

    fn features(&self) -> Vec<Feature> {
        self.0.iter().map(|component| Feature::new(component.factor.into_iter().collect())).collect()
    }

    fn torques(&self, surroundings: &Surroundings, out: &mut [Vector3<f64>]) {
        let axes = [Vector3::x(), Vector3::y(), Vector3::z()];
        for ((place, axis), component) in out.iter_mut().zip(axes).zip(&self.0) {
            *place = axis.cross(&surroundings.field_t) * component.scale;
        }
    }
}
