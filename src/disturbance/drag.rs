//! Torque of atmospheric drag on flat facets.

use nalgebra::Vector3;

use super::{Coefficient, Factor, Feature, Source, Surroundings, force_features, with_arms};
use crate::mission::Scenario;
use crate::vehicle::Surface;

/// Free-molecular drag on the windward side of each facet, along the flow; facets hide nothing from one another.
///
/// ```text
/// F = −½ ρ C_D A cosα |v| v
/// ```
///
/// with `v` the velocity through the air, which turns with the Earth, and α between `v` and the
/// normal. Source: P. C. Hughes, Spacecraft Attitude Dynamics, ch. 8 (from memory), with one
/// coefficient in place of separate normal and tangential ones.
#[derive(Debug, Clone)]
pub struct Drag {
    surfaces: Vec<Surface>,
    /// Drag coefficient of each material.
    coefficients: Vec<Coefficient>,
    density: Coefficient,
    levels: usize,
}

impl Drag {
    /// The facets of a scenario's vehicle.
    #[must_use]
    pub fn new(scenario: &Scenario) -> Self {
        let own = |material: &crate::vehicle::Material| material.drag_coefficient.unwrap_or(scenario.mission.drag_coefficient);
        Self {
            surfaces: scenario.vehicle.surfaces.clone(),
            coefficients: scenario.vehicle.materials.iter().map(|m| Coefficient::from(&own(m))).collect(),
            density: Coefficient::from(&scenario.mission.density_factor),
            levels: scenario.mission.activity.levels().len(),
        }
    }
}

impl Source for Drag {
    fn name(&self) -> &'static str {
        "drag"
    }

    /// For each material and each level of solar activity, four features: about the body origin and
    /// per component of the centre of mass.
    fn features(&self) -> Vec<Feature> {
        let mut features = Vec::new();
        for coefficient in &self.coefficients {
            for level in 0..self.levels {
                let activity = (self.levels > 1).then_some(Factor::Activity(level));
                let factors: Vec<Factor> = [coefficient.factor, self.density.factor, activity].into_iter().flatten().collect();
                features.extend(with_arms(&factors));
            }
        }
        features
    }

    fn torques(&self, surroundings: &Surroundings, out: &mut [Vector3<f64>]) {
        let wind = surroundings.air_velocity_m_per_s;
        for ((material, coefficient), places) in self.coefficients.iter().enumerate().zip(out.chunks_mut(4 * self.levels)) {
            let (mut force, mut torque) = (Vector3::zeros(), Vector3::zeros());
            for surface in self.surfaces.iter().filter(|surface| surface.material == material) {
                let flux = surface.normal_facing(&surroundings.sun).dot(&wind);
                let facing = if surface.both_sides { flux.abs() } else { flux.max(0.0) };
                // cosα |v| v = (n·v) v.
                let push = wind * (-0.5 * surface.area_m2 * facing);
                force += push;
                torque += surface.centre_m.cross(&push);
            }
            for (density, place) in surroundings.density_kg_per_m3.iter().zip(places.chunks_mut(4)) {
                let scale = density * coefficient.scale * self.density.scale;
                force_features(torque * scale, force * scale, place);
            }
        }
    }
}
