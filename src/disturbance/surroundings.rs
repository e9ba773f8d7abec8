//! What surrounds the spacecraft at an instant.

use nalgebra::{Rotation3, Vector3};

use crate::environment::{
    ASTRONOMICAL_UNIT_M, Activity, Air, Body, Epoch, Gas, Igrf, Patch, SOLAR_IRRADIANCE_W_PER_M2, SPEED_OF_LIGHT_M_PER_S, Site,
    air_velocity_m_per_s, earth_fixed_from_inertial, earth_gas, patches, sunlit_fraction,
};
use crate::mission::{Mission, Phase, Sky};

/// What surrounds the spacecraft at an instant; all vectors in one frame.
#[derive(Debug, Clone)]
pub struct Surroundings {
    /// Position from the centre of the body, m.
    pub position_m: Vector3<f64>,
    /// Gravitational parameter of the body, m³/s².
    pub mu_m3_per_s2: f64,
    /// Pole of the body, unit.
    pub pole: Vector3<f64>,
    /// Direction to the Sun, unit.
    pub sun: Vector3<f64>,
    /// Radiation pressure on an absorbing plate that faces the Sun, Pa; 0 in the umbra.
    pub radiation_pressure_pa: f64,
    /// Light and heat from the body, where they count.
    pub patches: Vec<Patch>,
    /// Magnetic flux density, T.
    pub field_t: Vector3<f64>,
    /// Velocity through the air, m/s.
    pub air_velocity_m_per_s: Vector3<f64>,
    /// The air at each level of solar activity.
    pub gas: Vec<Gas>,
}

impl Surroundings {
    /// The same seen in another frame.
    #[must_use]
    pub fn turned(&self, rotation: &Rotation3<f64>) -> Self {
        let patch = |patch: &Patch| Patch { direction: rotation * patch.direction, ..*patch };
        Self {
            position_m: rotation * self.position_m,
            pole: rotation * self.pole,
            sun: rotation * self.sun,
            field_t: rotation * self.field_t,
            air_velocity_m_per_s: rotation * self.air_velocity_m_per_s,
            patches: self.patches.iter().map(patch).collect(),
            gas: self.gas.clone(),
            ..*self
        }
    }

    /// Unit vectors to the east and to the north; zero over the poles.
    #[must_use]
    pub fn east_and_north(&self) -> [Vector3<f64>; 2] {
        let east = self.pole.cross(&self.position_m).try_normalize(0.0).unwrap_or_else(Vector3::zeros);
        [east, self.position_m.normalize().cross(&east)]
    }
}

/// Computes surroundings along a phase, over a span short against a year.
#[derive(Debug, Clone)]
pub struct Observer<'a> {
    phase: &'a Phase,
    levels: Vec<Activity>,
    air: Air,
    wind_m_per_s: [f64; 2],
    field: Option<Igrf>,
}

/// Instants at which a step that meets the shadow is sampled.
const SHADOW_SAMPLES: usize = 24;
/// Largest half-angle of the Sun's disc that any mission meets, with room, as seen from Mercury's perihelion: rad. Within
/// it of the edge of a cylindrical shadow the penumbra may lie.
const PENUMBRA: f64 = 0.02;

impl<'a> Observer<'a> {
    /// An observer of a phase about the middle of a span; the slow change of the field and of solar activity within the
    /// span is left out. The Earth's field is computed only if asked for.
    #[must_use]
    pub fn new(mission: &Mission, phase: &'a Phase, middle: Epoch, with_field: bool) -> Self {
        let body = phase.trajectory.body();
        let levels = if body.is_earth() { mission.activity.levels_at(middle) } else { Vec::new() };
        Self {
            phase,
            levels,
            air: mission.air_about(body),
            wind_m_per_s: mission.wind_m_per_s.map(|wind| wind.nominal()),
            field: (with_field && body.is_earth()).then(|| Igrf::at(middle)),
        }
    }

    /// Surroundings at the middle of a step, in I; `sky` is that of the instant.
    ///
    /// Radiation pressure is its mean over the step, so that entry into and exit from the shadow
    /// are resolved within it.
    #[must_use]
    pub fn step(&self, middle: Epoch, step_s: f64, sky: &Sky) -> Surroundings {
        let body = self.phase.trajectory.body();
        let position_m = sky.state.position_m;
        let to_sun = sky.sun_m - position_m;
        let distance_au = to_sun.norm() / ASTRONOMICAL_UNIT_M;
        let irradiance = SOLAR_IRRADIANCE_W_PER_M2 / (distance_au * distance_au);
        let sun = to_sun.normalize();
        let mut surroundings = Surroundings {
            position_m,
            mu_m3_per_s2: body.mu_m3_per_s2,
            pole: body.pole,
            sun,
            radiation_pressure_pa: irradiance / SPEED_OF_LIGHT_M_PER_S * self.sunlit_share(middle, step_s, sky),
            patches: if self.phase.body_light {
                patches(&position_m, &sun, body.equatorial_radius_m, irradiance, body.warmth)
            } else {
                Vec::new()
            },
            field_t: Vector3::zeros(),
            air_velocity_m_per_s: sky.state.velocity_m_per_s - air_velocity_m_per_s(&position_m, body),
            gas: vec![Gas::default(); self.levels.len().max(1)],
        };
        self.add_air_and_field(middle, body, &mut surroundings);
        surroundings
    }

    fn add_air_and_field(&self, middle: Epoch, body: &Body, surroundings: &mut Surroundings) {
        if body.is_earth() {
            let earth_fixed = earth_fixed_from_inertial(middle);
            let position_fixed = earth_fixed * surroundings.position_m;
            if let Some(field) = &self.field {
                surroundings.field_t = earth_fixed.inverse() * field.field_earth_fixed(&position_fixed);
            }
            surroundings.gas = self.levels.iter().map(|activity| earth_gas(middle, &position_fixed, activity)).collect();
        } else if let Air::Exponential(air) = &self.air {
            surroundings.gas = vec![air.at(surroundings.position_m.norm() - body.equatorial_radius_m)];
        }
        for (direction, speed) in surroundings.east_and_north().into_iter().zip(self.wind_m_per_s) {
            surroundings.air_velocity_m_per_s -= direction * speed;
        }
    }

    /// Mean visible share of the solar disc over a step.
    fn sunlit_share(&self, middle: Epoch, step_s: f64, sky: &Sky) -> f64 {
        let body = self.phase.trajectory.body();
        let by_earth = if body.site == Site::Moon { beside_the_earth(sky) } else { 1.0 };
        if body.is_sun() {
            return by_earth;
        }
        let (position_m, sun) = (&sky.state.position_m, sky.sun_m.normalize());
        // How far the spacecraft moves in half a step, with room for the speeding up of a fall.
        let moves_m = sky.state.velocity_m_per_s.norm() * step_s * 0.75;
        let along = position_m.dot(&sun);
        let across = (position_m - sun * along).norm();
        let penumbra_m = PENUMBRA * position_m.norm() + moves_m;
        if along > moves_m || across > body.equatorial_radius_m + penumbra_m {
            return by_earth;
        }
        if along < -moves_m && across < body.equatorial_radius_m - penumbra_m {
            return 0.0;
        }
        let visible = |offset_s: f64| {
            let state = self.phase.trajectory.state(middle.plus_seconds(offset_s));
            sunlit_fraction(&state.position_m, &sky.sun_m, body.equatorial_radius_m)
        };
        let ends = [visible(-step_s / 2.0), visible(0.0), visible(step_s / 2.0)];
        if ends.iter().all(|share| *share >= 1.0) {
            return by_earth;
        }
        if ends.iter().all(|share| *share <= 0.0) {
            return 0.0;
        }
        let offset = |k: usize| step_s * ((k as f64 + 0.5) / SHADOW_SAMPLES as f64 - 0.5);
        by_earth * (0..SHADOW_SAMPLES).map(|k| visible(offset(k))).sum::<f64>() / SHADOW_SAMPLES as f64
    }
}

/// Visible share of the solar disc beside the Earth, for a spacecraft near the Moon.
fn beside_the_earth(sky: &Sky) -> f64 {
    let earth_m = sky.earth_m();
    sunlit_fraction(&(sky.state.position_m - earth_m), &(sky.sun_m - earth_m), Body::EARTH.equatorial_radius_m)
}
