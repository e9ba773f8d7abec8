//! Where the spacecraft goes, however it was described.

use std::f64::consts::TAU;

use nalgebra::Vector3;

use super::body::{Body, ECLIPTIC_NORTH};
use super::earth_rotation::earth_fixed_from_inertial;
use super::ephemeris::Ephemeris;
use super::epoch::Epoch;
use super::orbit::{Orbit, State};
use super::sun::{sun_position_m, sun_velocity_m_per_s};

const MONTH_S: f64 = 30.0 * 86_400.0;

/// A path through space, from the centre of a body, in I.
#[derive(Debug, Clone)]
pub enum Trajectory {
    /// An orbit with secular drift.
    Orbit(Box<Orbit>),
    /// About the Sun, keeping step with the Earth.
    Companion(Companion),
    /// Read from a file, about a body.
    Table(Box<(Ephemeris, Body)>),
}

/// A place that keeps step with the Earth about the Sun: at a constant angle from it and at a distance of its own.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Companion {
    /// Angle ahead of the Earth in the ecliptic, rad.
    pub ahead_rad: f64,
    /// Distance from the Sun.
    pub distance: SunDistance,
}

/// Distance from the Sun of a [`Companion`].
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum SunDistance {
    /// Constant, m.
    Fixed(f64),
    /// A multiple of the Earth's own.
    OfEarth(f64),
}

/// Distance of the first and second Lagrange point from the Earth as a share of the Earth's from the Sun: the cube root of
/// a third of the mass of Earth and Moon over the Sun's (3.0404e-6), 0.010 05, to 1 % of itself.
///
/// Source: any text on the restricted problem of three bodies (Hill's radius).
pub const HILL_SHARE: f64 = 0.010_05;

impl Companion {
    fn state(&self, epoch: Epoch) -> State {
        let (earth_m, earth_m_per_s) = (-sun_position_m(epoch), -sun_velocity_m_per_s(epoch));
        let scale = match self.distance {
            SunDistance::OfEarth(share) => share,
            SunDistance::Fixed(distance_m) => distance_m / earth_m.norm(),
        };
        let (s, c) = self.ahead_rad.sin_cos();
        let turn = |v: Vector3<f64>| v * c + ECLIPTIC_NORTH.cross(&v) * s + ECLIPTIC_NORTH * ECLIPTIC_NORTH.dot(&v) * (1.0 - c);
        State { position_m: turn(earth_m) * scale, velocity_m_per_s: turn(earth_m_per_s) * scale }
    }
}

impl Trajectory {
    /// Position and velocity from the centre of [`Trajectory::body`], in I.
    #[must_use]
    pub fn state(&self, epoch: Epoch) -> State {
        match self {
            Self::Orbit(orbit) => orbit.state(epoch),
            Self::Companion(companion) => companion.state(epoch),
            Self::Table(table) => table.0.state(epoch),
        }
    }

    /// The body from which it counts.
    #[must_use]
    pub fn body(&self) -> &Body {
        match self {
            Self::Orbit(orbit) => orbit.body(),
            Self::Companion(_) => &Body::SUN,
            Self::Table(table) => &table.1,
        }
    }

    /// Time after which the spacecraft is in the same place of its orbit, s; `None` where nothing comes back within a
    /// month or the Sun is orbited.
    #[must_use]
    pub fn revolution_s(&self) -> Option<f64> {
        match self {
            Self::Orbit(orbit) if !orbit.body().is_sun() => Some(orbit.nodal_period_s()),
            Self::Table(table) if !table.1.is_sun() => osculating_period_s(&table.0.state(table.0.start()), &table.1),
            Self::Orbit(_) | Self::Companion(_) | Self::Table(_) => None,
        }
    }
}

/// Period of the ellipse on which a state lies, s; `None` if it is none or takes more than a month.
fn osculating_period_s(state: &State, body: &Body) -> Option<f64> {
    let mu = body.mu_m3_per_s2;
    let inverse_axis = 2.0 / state.position_m.norm() - state.velocity_m_per_s.norm_squared() / mu;
    let period_s = TAU / (mu * inverse_axis.powi(3)).sqrt();
    (inverse_axis > 0.0 && period_s < MONTH_S).then_some(period_s)
}

/// Right ascension, rad in I, of the meridian of a longitude at an instant: the mean anomaly of a circle in the equator
/// (node and perigee at zero) that stands over it.
#[must_use]
pub fn right_ascension_of_longitude(epoch: Epoch, longitude_rad: f64) -> f64 {
    let (s, c) = longitude_rad.sin_cos();
    let meridian = earth_fixed_from_inertial(epoch).inverse() * Vector3::new(c, s, 0.0);
    meridian.y.atan2(meridian.x).rem_euclid(TAU)
}
