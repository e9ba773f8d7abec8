//! What surrounds the spacecraft at an instant.

use nalgebra::{Rotation3, Vector3};

use crate::environment::{
    ASTRONOMICAL_UNIT_M, Activity, Body, Epoch, Igrf, Orbit, SOLAR_IRRADIANCE_W_PER_M2, SPEED_OF_LIGHT_M_PER_S, State,
    air_velocity_m_per_s, density_kg_per_m3, earth_fixed_from_inertial, sun_position_m, sunlit_fraction,
};

/// What surrounds the spacecraft at an instant; all vectors in one frame.
#[derive(Debug, Clone)]
pub struct Surroundings {
    /// Position from the centre of the body, m.
    pub position_m: Vector3<f64>,
    /// Gravitational parameter of the body, m³/s².
    pub mu_m3_per_s2: f64,
    /// Direction to the Sun, unit.
    pub sun: Vector3<f64>,
    /// Radiation pressure on an absorbing plate that faces the Sun, Pa; 0 in the umbra.
    pub radiation_pressure_pa: f64,
    /// Magnetic flux density, T.
    pub field_t: Vector3<f64>,
    /// Velocity through the air, m/s.
    pub air_velocity_m_per_s: Vector3<f64>,
    /// Density of the air at each level of solar activity, kg/m³.
    pub density_kg_per_m3: Vec<f64>,
}

impl Surroundings {
    /// The same seen in another frame.
    #[must_use]
    pub fn turned(&self, rotation: &Rotation3<f64>) -> Self {
        Self {
            position_m: rotation * self.position_m,
            sun: rotation * self.sun,
            field_t: rotation * self.field_t,
            air_velocity_m_per_s: rotation * self.air_velocity_m_per_s,
            density_kg_per_m3: self.density_kg_per_m3.clone(),
            ..*self
        }
    }
}

/// Computes surroundings along an orbit, over a span short against a year.
#[derive(Debug, Clone)]
pub struct Observer<'a> {
    orbit: &'a Orbit,
    levels: &'a [Activity],
    field: Igrf,
}

/// Instants at which a step that meets the shadow is sampled.
const SHADOW_SAMPLES: usize = 24;

impl<'a> Observer<'a> {
    /// An observer about the middle of a span; the field's slow change within the span is left out.
    #[must_use]
    pub fn new(orbit: &'a Orbit, levels: &'a [Activity], middle: Epoch) -> Self {
        Self { orbit, levels, field: Igrf::at(middle) }
    }

    /// Surroundings at the middle of a step, in the inertial frame, and the state there.
    ///
    /// Radiation pressure is its mean over the step, so that entry into and exit from the shadow
    /// are resolved within it.
    #[must_use]
    pub fn step(&self, middle: Epoch, step_s: f64) -> (State, Surroundings) {
        let state = self.orbit.state(middle);
        let body = self.orbit.body();
        let sun_m = sun_position_m(middle);
        let to_sun = sun_m - state.position_m;
        let distance_au = to_sun.norm() / ASTRONOMICAL_UNIT_M;
        let full = SOLAR_IRRADIANCE_W_PER_M2 / SPEED_OF_LIGHT_M_PER_S / (distance_au * distance_au);
        let earth_fixed = earth_fixed_from_inertial(middle);
        let position_fixed = earth_fixed * state.position_m;
        let density = |activity: &Activity| density_kg_per_m3(middle, &position_fixed, activity);
        let surroundings = Surroundings {
            position_m: state.position_m,
            mu_m3_per_s2: body.mu_m3_per_s2,
            sun: to_sun.normalize(),
            radiation_pressure_pa: full * self.sunlit_share(middle, step_s, &sun_m, body),
            field_t: earth_fixed.inverse() * self.field.field_earth_fixed(&position_fixed),
            air_velocity_m_per_s: state.velocity_m_per_s - air_velocity_m_per_s(&state.position_m, body),
            density_kg_per_m3: self.levels.iter().map(density).collect(),
        };
        (state, surroundings)
    }

    /// Mean visible share of the solar disc over a step.
    fn sunlit_share(&self, middle: Epoch, step_s: f64, sun_m: &Vector3<f64>, body: &Body) -> f64 {
        let visible =
            |offset_s: f64| sunlit_fraction(&self.orbit.state(middle.plus_seconds(offset_s)).position_m, sun_m, body.equatorial_radius_m);
        let ends = [visible(-step_s / 2.0), visible(0.0), visible(step_s / 2.0)];
        if ends.iter().all(|share| *share >= 1.0) {
            return 1.0;
        }
        if ends.iter().all(|share| *share <= 0.0) {
            return 0.0;
        }
        let offset = |k: usize| step_s * ((k as f64 + 0.5) / SHADOW_SAMPLES as f64 - 0.5);
        (0..SHADOW_SAMPLES).map(|k| visible(offset(k))).sum::<f64>() / SHADOW_SAMPLES as f64
    }
}
