//! What the user writes about where the spacecraft goes.

use schemars::JsonSchema;
use serde::Deserialize;

use super::leaf::Quantity;
use crate::units::kind;

/// Where the spacecraft goes. Give one of: the size of an orbit (`altitude`; or `perigee_altitude` and `apogee_altitude`; or `semi_major_axis` with `eccentricity`) with its plane; `stationary`; `lagrange`; `sun_distance`; `ephemeris`.
#[derive(Debug, Clone, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Orbit {
    /// The body that is orbited. Default: `earth`.
    #[serde(default)]
    pub about: About,
    /// Altitude of a circular orbit above the equatorial radius, such as `600 km`.
    pub altitude: Option<Quantity<kind::Length>>,
    /// Altitude of the lowest point above the equatorial radius.
    pub perigee_altitude: Option<Quantity<kind::Length>>,
    /// Altitude of the highest point above the equatorial radius.
    pub apogee_altitude: Option<Quantity<kind::Length>>,
    /// Semi-major axis, such as `26560 km`.
    pub semi_major_axis: Option<Quantity<kind::Length>>,
    /// Eccentricity, 0 to below 1. Only with `semi_major_axis`; default 0.
    pub eccentricity: Option<Quantity<kind::Number>>,
    /// Inclination to the equator of the body (about the Sun: to the ecliptic), such as `63.4 deg`; left out where `local_time` makes the orbit Sun-synchronous.
    pub inclination: Option<Quantity<kind::Angle>>,
    /// Local time of the ascending node, such as `10.5 h`: the orbit is Sun-synchronous and its inclination follows.
    pub local_time: Option<Quantity<kind::Time>>,
    /// Angle of the ascending node at the start of the mission, in the equator of the body: about the Earth from the equinox, about others from where their equator rises through that of the Earth. Default: 0.
    pub ascending_node: Option<Quantity<kind::Angle>>,
    /// Argument of the lowest point at the start of the mission. Default: 0.
    pub argument_of_perigee: Option<Quantity<kind::Angle>>,
    /// Mean anomaly at the start of the mission. Default: 0.
    pub mean_anomaly: Option<Quantity<kind::Angle>>,
    /// A place of the equator over which the spacecraft stays, north–south drift left out.
    pub stationary: Option<Stationary>,
    /// A Lagrange point of Sun and Earth: the place itself, without the orbit about it.
    pub lagrange: Option<LagrangePoint>,
    /// Constant distance from the Sun, in the direction of the Earth, such as `0.99 AU`.
    pub sun_distance: Option<Quantity<kind::Length>>,
    /// File of positions: an Orbit Ephemeris Message (CCSDS 502.0-B) in text form, named from the folder of this file.
    pub ephemeris: Option<String>,
}

/// A place over which the spacecraft stays.
#[derive(Debug, Clone, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Stationary {
    /// Longitude, east positive, such as `19.2 deg`.
    pub longitude: Quantity<kind::Angle>,
}

/// A Lagrange point of Sun and Earth.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Deserialize, JsonSchema)]
#[serde(rename_all = "snake_case")]
pub enum LagrangePoint {
    /// Between Sun and Earth.
    L1,
    /// Behind the Earth.
    L2,
    /// Behind the Sun.
    L3,
    /// Ahead of the Earth by 60°.
    L4,
    /// Behind the Earth by 60°.
    L5,
}

/// The body that is orbited.
#[derive(Debug, Clone, Default, Deserialize, JsonSchema)]
#[serde(rename_all = "snake_case")]
pub enum About {
    /// The Earth.
    #[default]
    Earth,
    /// The Moon.
    Moon,
    /// Mars.
    Mars,
    /// Venus.
    Venus,
    /// Mercury.
    Mercury,
    /// The Sun.
    Sun,
    /// A body given by its constants.
    Body(OwnBody),
}

/// A body given by its constants; it stands on a circle about the Sun, its pole square to the ecliptic.
#[derive(Debug, Clone, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct OwnBody {
    /// Gravitational parameter, such as `62.63 km3/s2`.
    pub gravitational_parameter: Quantity<kind::GravitationalParameter>,
    /// Equatorial radius, such as `470 km`.
    pub radius: Quantity<kind::Length>,
    /// Second zonal harmonic of its gravity. Default: 0.
    pub j2: Option<Quantity<kind::Number>>,
    /// Sidereal rotation period, such as `9.07 h`. Default: it does not turn.
    pub rotation_period: Option<Quantity<kind::Time>>,
    /// Distance from the Sun, such as `2.77 AU`.
    pub sun_distance: Quantity<kind::Length>,
    /// Share of sunlight that it reflects, such as `0.09`. Default: 0.1.
    pub albedo: Option<Quantity<kind::Number>>,
}
