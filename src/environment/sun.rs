//! Where the Sun is.

use nalgebra::Vector3;

use super::body::ASTRONOMICAL_UNIT_M;
use super::earth_rotation::mean_of_date_from_inertial;
use super::epoch::Epoch;

/// The Sun as seen from the Earth's centre, by the equator and equinox of date.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct SunOfDate {
    /// Geometric ecliptic longitude from the mean equinox of date, rad in [0, 2π).
    pub true_longitude_rad: f64,
    /// Apparent right ascension (with nutation and aberration), rad in [−π, π].
    pub apparent_right_ascension_rad: f64,
    /// Apparent declination, rad.
    pub apparent_declination_rad: f64,
    /// Distance, m.
    pub distance_m: f64,
    /// Mean obliquity of the ecliptic of date, rad.
    pub mean_obliquity_rad: f64,
}

/// The low-precision Sun: within 0.01° from 1900 to 2050, and within 0.011° to 2100.
///
/// Source: J. Meeus, Astronomical Algorithms, 2nd ed. (1998), chapter 25; obliquity eq. 22.2.
#[must_use]
pub fn sun_of_date(epoch: Epoch) -> SunOfDate {
    let t = epoch.julian_centuries_tt();
    let mean_longitude = 280.466_46 + t * (36_000.769_83 + t * 0.000_303_2);
    let anomaly = (357.529_11 + t * (35_999.050_29 - t * 0.000_153_7)).to_radians();
    let eccentricity = 0.016_708_634 - t * (0.000_042_037 + t * 0.000_000_126_7);
    let centre = (1.914_602 - t * (0.004_817 + t * 0.000_014)) * anomaly.sin()
        + (0.019_993 - t * 0.000_101) * (2.0 * anomaly).sin()
        + 0.000_289 * (3.0 * anomaly).sin();
    let true_longitude = mean_longitude + centre;
    let true_anomaly = anomaly + centre.to_radians();
    let distance_au = 1.000_001_018 * (1.0 - eccentricity * eccentricity) / (1.0 + eccentricity * true_anomaly.cos());

    let lunar_node = (125.04 - 1934.136 * t).to_radians();
    let apparent = (true_longitude - 0.005_69 - 0.004_78 * lunar_node.sin()).to_radians();
    let mean_obliquity = 23.439_291_111 - t * (0.013_004_167 + t * (1.639e-7 - t * 5.036e-7));
    let obliquity = (mean_obliquity + 0.002_56 * lunar_node.cos()).to_radians();
    SunOfDate {
        true_longitude_rad: true_longitude.rem_euclid(360.0).to_radians(),
        apparent_right_ascension_rad: (obliquity.cos() * apparent.sin()).atan2(apparent.cos()),
        apparent_declination_rad: (obliquity.sin() * apparent.sin()).asin(),
        distance_m: distance_au * ASTRONOMICAL_UNIT_M,
        mean_obliquity_rad: mean_obliquity.to_radians(),
    }
}

/// Position of the Sun from the Earth's centre, m, in I (mean equator and equinox of J2000).
///
/// Geometric: without aberration (0.006°). From the longitude of [`sun_of_date`], precessed to J2000.
#[must_use]
pub fn sun_position_m(epoch: Epoch) -> Vector3<f64> {
    let sun = sun_of_date(epoch);
    let (sin_longitude, cos_longitude) = sun.true_longitude_rad.sin_cos();
    let (sin_obliquity, cos_obliquity) = sun.mean_obliquity_rad.sin_cos();
    let of_date = Vector3::new(cos_longitude, sin_longitude * cos_obliquity, sin_longitude * sin_obliquity);
    mean_of_date_from_inertial(epoch).inverse() * of_date * sun.distance_m
}

/// Velocity of the Sun about the Earth's centre, m/s, in I: the difference of [`sun_position_m`] over an hour.
#[must_use]
pub fn sun_velocity_m_per_s(epoch: Epoch) -> Vector3<f64> {
    const HALF_S: f64 = 1800.0;
    (sun_position_m(epoch.plus_seconds(HALF_S)) - sun_position_m(epoch.plus_seconds(-HALF_S))) / (2.0 * HALF_S)
}
