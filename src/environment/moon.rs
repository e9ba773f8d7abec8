//! Where the Moon is.

use nalgebra::Vector3;

use super::earth_rotation::mean_of_date_from_inertial;
use super::epoch::Epoch;
use super::sun::sun_of_date;

/// Equatorial radius of the Earth by which the parallax counts, m.
const PARALLAX_RADIUS_M: f64 = 6_378_140.0;

/// Position of the Moon from the Earth's centre, m, in I. Within 0.3° and 0.2 %: enough for the light it casts no shadow
/// in and for lunar eclipses to half an hour, not for navigation.
///
/// Source: The Astronomical Almanac, low-precision formulae for the Moon (page D46 of many years; from memory), checked
/// against ERFA's Moon.
#[must_use]
pub fn moon_position_m(epoch: Epoch) -> Vector3<f64> {
    let t = epoch.julian_centuries_tt();
    let term = |phase: f64, rate: f64| (phase + rate * t).to_radians();
    let longitude = 218.32 + 481_267.881 * t + 6.29 * term(135.0, 477_198.87).sin() - 1.27 * term(259.3, -413_335.36).sin()
        + 0.66 * term(235.7, 890_534.22).sin()
        + 0.21 * term(269.9, 954_397.74).sin()
        - 0.19 * term(357.5, 35_999.05).sin()
        - 0.11 * term(186.5, 966_404.03).sin();
    let latitude = 5.13 * term(93.3, 483_202.02).sin() + 0.28 * term(228.2, 960_400.89).sin()
        - 0.28 * term(318.3, 6_003.15).sin()
        - 0.17 * term(217.6, -407_332.21).sin();
    let parallax = 0.9508
        + 0.0518 * term(135.0, 477_198.87).cos()
        + 0.0095 * term(259.3, -413_335.36).cos()
        + 0.0078 * term(235.7, 890_534.22).cos()
        + 0.0028 * term(269.9, 954_397.74).cos();
    let distance_m = PARALLAX_RADIUS_M / parallax.to_radians().sin();
    let (sin_l, cos_l) = longitude.to_radians().sin_cos();
    let (sin_b, cos_b) = latitude.to_radians().sin_cos();
    let (sin_o, cos_o) = sun_of_date(epoch).mean_obliquity_rad.sin_cos();
    let ecliptic = Vector3::new(cos_b * cos_l, cos_b * sin_l, sin_b);
    let of_date = Vector3::new(ecliptic.x, cos_o * ecliptic.y - sin_o * ecliptic.z, sin_o * ecliptic.y + cos_o * ecliptic.z);
    mean_of_date_from_inertial(epoch).inverse() * of_date * distance_m
}
