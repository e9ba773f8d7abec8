//! Nadir-pointing attitude with a constant bias.

use nalgebra::{Matrix3, Rotation3, Vector3};

use crate::environment::State;
use crate::uncertain::Uncertain;

/// z to the centre of the Earth, y against the orbit normal, x completing; turned by a constant bias.
#[derive(Debug, Clone)]
pub struct NadirAttitude {
    /// Rotation vector from the nadir frame to the body, about x, y, z, rad.
    pub bias_rad: [Uncertain; 3],
}

impl NadirAttitude {
    /// Rotation from the body frame (nominal bias) to the inertial frame.
    #[must_use]
    pub fn inertial_from_body(&self, state: &State) -> Rotation3<f64> {
        let bias = Vector3::from(self.bias_rad.each_ref().map(Uncertain::nominal));
        nadir_frame(state) * Rotation3::new(bias)
    }
}

fn nadir_frame(state: &State) -> Rotation3<f64> {
    let z = -state.position_m.normalize();
    let y = -state.position_m.cross(&state.velocity_m_per_s).normalize();
    Rotation3::from_matrix_unchecked(Matrix3::from_columns(&[y.cross(&z), y, z]))
}
