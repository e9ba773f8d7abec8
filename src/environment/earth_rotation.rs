//! From the inertial frame to the frame fixed in the Earth, and from there to geodetic coordinates.

use std::f64::consts::TAU;

use nalgebra::{Rotation3, Vector3};

use super::epoch::Epoch;

/// Semi-major axis of the WGS 84 ellipsoid, m. Source: NIMA TR8350.2.
const ELLIPSOID_AXIS_M: f64 = 6_378_137.0;
/// Flattening of the WGS 84 ellipsoid. Source: NIMA TR8350.2.
const FLATTENING: f64 = 1.0 / 298.257_223_563;

/// Rotation that takes components in I (mean equator and equinox of J2000) to components fixed in the Earth
/// (x to Greenwich on the equator, z to the north pole).
///
/// ```text
/// R = R3(mean sidereal time) · R3(−z) R2(θ) R3(−ζ)
/// ```
///
/// Left out: nutation (up to 0.005°), polar motion (0.0002°), and UT1 − UTC (below 0.9 s, 0.004°).
/// Sources: precession angles of Lieske et al. (1977) with the IAU 2006 values of Capitaine et al. (2003), eq. 40;
/// Earth rotation angle of Capitaine et al. (2000) with the sidereal polynomial of Capitaine et al. (2003), eq. 42.
#[must_use]
pub fn earth_fixed_from_inertial(epoch: Epoch) -> Rotation3<f64> {
    rotate_frame_z(mean_sidereal_time_rad(epoch)) * mean_of_date_from_inertial(epoch)
}

/// Rotation from I to the mean equator and equinox of date, by precession alone.
pub(super) fn mean_of_date_from_inertial(epoch: Epoch) -> Rotation3<f64> {
    let t = epoch.julian_centuries_tt();
    let zeta = arcseconds(2.650_545 + t * (2_306.083_227 + t * (0.298_849_9 + t * 0.018_018_28)));
    let z = arcseconds(-2.650_545 + t * (2_306.077_181 + t * (1.092_734_8 + t * 0.018_268_37)));
    let theta = arcseconds(t * (2_004.191_903 + t * (-0.429_493_4 - t * 0.041_822_64)));
    let tilt = Rotation3::from_axis_angle(&Vector3::y_axis(), -theta);
    rotate_frame_z(-z) * tilt * rotate_frame_z(-zeta)
}

/// Greenwich mean sidereal time, rad in [0, 2π), with UTC for UT1.
pub(super) fn mean_sidereal_time_rad(epoch: Epoch) -> f64 {
    let days = epoch.ut_days_since_j2000();
    let t = epoch.julian_centuries_tt();
    let rotation_angle = TAU * (0.779_057_273_264_0 + 0.002_737_811_911_354_48 * days + days.rem_euclid(1.0));
    let precession = arcseconds(0.014_506 + t * (4_612.156_534 + t * (1.391_581_7 - t * 4.4e-7)));
    (rotation_angle + precession).rem_euclid(TAU)
}

/// Components in a frame turned about z by `angle_rad` with respect to the first.
fn rotate_frame_z(angle_rad: f64) -> Rotation3<f64> {
    Rotation3::from_axis_angle(&Vector3::z_axis(), -angle_rad)
}

fn arcseconds(value: f64) -> f64 {
    (value / 3600.0).to_radians()
}

/// Place over the WGS 84 ellipsoid.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Geodetic {
    /// Geodetic latitude, rad, north positive.
    pub latitude_rad: f64,
    /// Longitude, rad in [−π, π], east positive.
    pub longitude_rad: f64,
    /// Height over the ellipsoid, m.
    pub height_m: f64,
}

impl Geodetic {
    /// From an Earth-fixed position in metres. Accurate to a micrometre above about 100 km from the
    /// centre, poles included.
    ///
    /// Source: Bowring (1976), Survey Review 23, 323, the reduced latitude iterated.
    #[must_use]
    pub fn from_earth_fixed(position_m: &Vector3<f64>) -> Self {
        let axis_ratio = 1.0 - FLATTENING;
        let e2 = FLATTENING * (2.0 - FLATTENING);
        let second_e2 = e2 / (axis_ratio * axis_ratio);
        let (z, rho) = (position_m.z, position_m.x.hypot(position_m.y));
        let mut reduced = z.atan2(axis_ratio * rho);
        let mut latitude = reduced;
        for _ in 0..4 {
            let (s, c) = reduced.sin_cos();
            latitude = (z + second_e2 * axis_ratio * ELLIPSOID_AXIS_M * s.powi(3)).atan2(rho - e2 * ELLIPSOID_AXIS_M * c.powi(3));
            reduced = (axis_ratio * latitude.sin()).atan2(latitude.cos());
        }
        let (s, c) = latitude.sin_cos();
        // Projection on the vertical holds at the poles, where dividing by cos(latitude) does not.
        let height_m = rho * c + z * s - ELLIPSOID_AXIS_M * (1.0 - e2 * s * s).sqrt();
        Self { latitude_rad: latitude, longitude_rad: position_m.y.atan2(position_m.x), height_m }
    }
}
