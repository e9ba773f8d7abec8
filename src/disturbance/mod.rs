//! Disturbance torques: for each source, the torque of each feature at one place of the orbit.
//!
//! In: vehicle, mission and the surroundings at an instant. Out: torque vectors about the centre of
//! mass in the body frame, one per [`Feature`]; the total torque is linear in the features. Knows
//! nothing of thrusters or wheels. One source of torque is one file.

mod body_light;
mod body_torque;
mod dipole;
mod drag;
mod feature;
mod gravity_gradient;
mod molecules;
mod optics;
mod radiation;
mod surroundings;

pub use body_light::BodyLight;
pub use body_torque::BodyTorque;
pub use dipole::ResidualDipole;
pub use drag::Drag;
pub use feature::{Coefficient, Factor, Feature};
pub use gravity_gradient::GravityGradient;
pub use molecules::{PlateCoefficients, plate_coefficients};
pub use radiation::Radiation;
pub use surroundings::{Observer, Surroundings};

use nalgebra::Vector3;

use crate::mission::{Phase, Scenario};

/// One source of disturbance torque.
pub trait Source: Send + Sync {
    /// Name in results: a word of letters and underscores.
    fn name(&self) -> &'static str;

    /// The features whose torques [`Source::torques`] fills, in that order.
    fn features(&self) -> Vec<Feature>;

    /// How many of the leading features the effect of an uncertain pointing bias is taken for.
    fn first_order(&self) -> usize {
        self.features().len()
    }

    /// Torque of each feature, N·m per unit of the feature, body frame.
    ///
    /// `out` has the length of [`Source::features`] and is overwritten.
    fn torques(&self, surroundings: &Surroundings, out: &mut [Vector3<f64>]);
}

/// All sources in a phase of a scenario, in the order in which results list them; the same names in every phase.
#[must_use]
pub fn sources(scenario: &Scenario, phase: &Phase) -> Vec<Box<dyn Source>> {
    vec![
        Box::new(GravityGradient),
        Box::new(Radiation::new(&scenario.vehicle)),
        Box::new(BodyLight::new(scenario, phase)),
        Box::new(Drag::new(scenario, phase)),
        Box::new(ResidualDipole::new(&scenario.vehicle)),
        Box::new(BodyTorque::new(&scenario.vehicle)),
    ]
}

/// Writes the torque of a force about the body origin and what a centre of mass at c takes from it:
/// r × F − c × F, as four features: one, and the three components of c.
fn force_features(torque_about_origin: Vector3<f64>, force: Vector3<f64>, out: &mut [Vector3<f64>]) {
    let moments = [torque_about_origin, -Vector3::x().cross(&force), -Vector3::y().cross(&force), -Vector3::z().cross(&force)];
    for (place, moment) in out.iter_mut().zip(moments) {
        *place = moment;
    }
}

/// The four features of [`force_features`], each multiplied by `factors`.
fn with_arms(factors: &[Factor]) -> Vec<Feature> {
    let own = Feature::new(factors.to_vec());
    let arms = (0..3).map(|axis| own.times(Factor::CentreOfMass(axis)));
    std::iter::once(own.clone()).chain(arms).collect()
}
