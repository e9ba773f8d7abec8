//! Torque of the sunlight that the body reflects and of its infrared.

use nalgebra::Vector3;

use super::optics::{Beam, Optics};
use super::{Coefficient, Feature, Source, Surroundings};
use crate::environment::{ASTRONOMICAL_UNIT_M, SOLAR_IRRADIANCE_W_PER_M2, Warmth};
use crate::mission::{Phase, Scenario};
use crate::uncertain::Uncertain;

/// Radiation pressure of the body on the facets that see it: the patches of [`crate::environment::patches`], each a beam
/// as in [`super::Radiation`], with the same optical shares for infrared as for light.
///
/// Facets hide nothing from one another. The effect of an uncertain pointing bias on this small torque is left out.
#[derive(Debug, Clone)]
pub struct BodyLight {
    optics: Option<Optics>,
    albedo: Coefficient,
    infrared: Coefficient,
}

impl BodyLight {
    /// The facets of a scenario's vehicle in a phase; without features where the phase leaves it out.
    #[must_use]
    pub fn new(scenario: &Scenario, phase: &Phase) -> Self {
        let mission = &scenario.mission;
        let body = phase.trajectory.body();
        let albedo = mission.body_light.albedo.unwrap_or(Uncertain::fixed(body.albedo));
        let absorbed = match body.warmth {
            Warmth::Even => (1.0 - albedo.nominal()) / 4.0,
            Warmth::DaySide => 1.0 - albedo.nominal(),
        };
        let distance_au = body.heliocentric_position_m(mission.start).norm() / ASTRONOMICAL_UNIT_M;
        let infrared = match &mission.body_light.infrared_w_per_m2 {
            None => Coefficient::from(&Uncertain::fixed(absorbed)),
            Some(flux) => Coefficient::from(flux).times(distance_au * distance_au / SOLAR_IRRADIANCE_W_PER_M2),
        };
        Self { optics: phase.body_light.then(|| Optics::new(&scenario.vehicle)), albedo: Coefficient::from(&albedo), infrared }
    }
}

impl Source for BodyLight {
    fn name(&self) -> &'static str {
        "body_light"
    }

    /// The features of sunlight times the albedo, then times the infrared.
    fn features(&self) -> Vec<Feature> {
        let each = |optics: &Optics| [self.albedo, self.infrared].map(|share| optics.features(share.factor)).concat();
        self.optics.as_ref().map_or_else(Vec::new, each)
    }

    fn first_order(&self) -> usize {
        0
    }

    fn torques(&self, surroundings: &Surroundings, out: &mut [Vector3<f64>]) {
        let Some(optics) = &self.optics else { return };
        let normals = optics.normals(&surroundings.sun);
        let (mut reflected, mut infrared) = (optics.loads(), optics.loads());
        for patch in &surroundings.patches {
            for (pressure_pa, loads) in [(patch.reflected_pa, &mut reflected), (patch.infrared_pa, &mut infrared)] {
                if pressure_pa > 0.0 {
                    optics.shine(&Beam { towards: patch.direction, pressure_pa }, &normals, None, loads);
                }
            }
        }
        let (first, second) = out.split_at_mut(out.len() / 2);
        optics.write(&reflected, self.albedo.scale, first);
        optics.write(&infrared, self.infrared.scale, second);
    }
}
