//! Where the planets are: mean Keplerian elements with secular rates.

use std::f64::consts::TAU;

use nalgebra::{Rotation3, Vector3};

use super::body::{ASTRONOMICAL_UNIT_M, inertial_from_ecliptic};
use super::epoch::Epoch;
use super::orbit::eccentric_anomaly;

/// A planet other than the Earth.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Planet {
    /// Mercury.
    Mercury,
    /// Venus.
    Venus,
    /// Mars.
    Mars,
}

/// Elements at J2000 and their rates a century: semi-major axis (au), eccentricity, inclination, mean longitude,
/// longitude of the perihelion and of the ascending node (deg), by the ecliptic and equinox of J2000.
type Table = [(f64, f64); 6];

const MERCURY: Table = [
    (0.387_099_27, 0.000_000_37),
    (0.205_635_93, 0.000_019_06),
    (7.004_979_02, -0.005_947_49),
    (252.250_323_50, 149_472.674_111_75),
    (77.457_796_28, 0.160_476_89),
    (48.330_765_93, -0.125_340_81),
];
const VENUS: Table = [
    (0.723_335_66, 0.000_003_90),
    (0.006_776_72, -0.000_041_07),
    (3.394_676_05, -0.000_788_90),
    (181.979_099_50, 58_517.815_387_29),
    (131.602_467_18, 0.002_683_29),
    (76.679_842_55, -0.277_694_18),
];
const MARS: Table = [
    (1.523_710_34, 0.000_018_47),
    (0.093_394_10, 0.000_078_82),
    (1.849_691_42, -0.008_131_31),
    (-4.553_432_05, 19_140.302_684_99),
    (-23.943_629_59, 0.444_410_88),
    (49.559_538_91, -0.292_573_43),
];

/// Position of a planet from the Sun, m, in I. Within about an arc minute from 1800 to 2050, some arc minutes to 2100.
///
/// Source: E. M. Standish, Keplerian Elements for Approximate Positions of the Major Planets, table 1 (from memory,
/// checked against ERFA's planets).
#[must_use]
pub fn heliocentric_position_m(planet: Planet, epoch: Epoch) -> Vector3<f64> {
    let t = epoch.julian_centuries_tt();
    let table = match planet {
        Planet::Mercury => &MERCURY,
        Planet::Venus => &VENUS,
        Planet::Mars => &MARS,
    };
    let [a, e, inclination, longitude, perihelion, node] = table.map(|(value, rate)| value + rate * t);
    let mean_anomaly = (longitude - perihelion).to_radians().rem_euclid(TAU);
    let (sin_e, cos_e) = eccentric_anomaly(mean_anomaly, e).sin_cos();
    let in_plane = Vector3::new(a * (cos_e - e), a * (1.0 - e * e).sqrt() * sin_e, 0.0);
    let about = |axis, degrees: f64| Rotation3::from_axis_angle(&axis, degrees.to_radians());
    let turn = about(Vector3::z_axis(), node) * about(Vector3::x_axis(), inclination) * about(Vector3::z_axis(), perihelion - node);
    inertial_from_ecliptic() * turn * in_plane * ASTRONOMICAL_UNIT_M
}
