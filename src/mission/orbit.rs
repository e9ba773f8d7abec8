//! Orbits as written turned into mean elements.

use crate::config;
use crate::environment::{Body, Elements, Epoch, Orbit, node_of_local_time, sun_synchronous_inclination};
use crate::vehicle::Faults;

/// Validates an orbit; `at` is its key, its angles count at `start`.
pub(super) fn read(written: &config::Orbit, at: &str, start: Epoch, faults: &mut Faults) -> Option<Orbit> {
    let body = Body::EARTH;
    let (semi_major_axis_m, eccentricity) = size(written, at, &body, faults)?;
    let (inclination_rad, ascending_node_rad) = plane(written, at, start, (semi_major_axis_m, eccentricity), faults)?;
    let angle = |angle: &Option<config::Quantity<crate::units::kind::Angle>>| angle.map_or(0.0, |angle| angle.0);
    let elements = Elements {
        semi_major_axis_m,
        eccentricity,
        inclination_rad,
        ascending_node_rad,
        argument_of_perigee_rad: angle(&written.argument_of_perigee),
        mean_anomaly_rad: angle(&written.mean_anomaly),
    };
    Orbit::new(elements, start, body)
        .map_err(|error| {
            faults.push(at, error.to_string(), "raise the perigee above the surface; altitudes count from the equatorial radius");
        })
        .ok()
}

/// Semi-major axis, m, and eccentricity.
fn size(written: &config::Orbit, at: &str, body: &Body, faults: &mut Faults) -> Option<(f64, f64)> {
    let radius = body.equatorial_radius_m;
    match (written.altitude, written.perigee_altitude, written.apogee_altitude, written.semi_major_axis) {
        (Some(altitude), None, None, None) if written.eccentricity.is_none() => Some((radius + altitude.0, 0.0)),
        (None, Some(perigee), Some(apogee), None) if written.eccentricity.is_none() => {
            let (low, high) = (radius + perigee.0, radius + apogee.0);
            if low > high {
                faults.push_also(
                    &format!("{at}.perigee_altitude"),
                    "the perigee lies above the apogee",
                    "swap them",
                    &format!("{at}.apogee_altitude"),
                    "the apogee",
                );
                return None;
            }
            Some((f64::midpoint(low, high), (high - low) / (high + low)))
        }
        (None, None, None, Some(axis)) => {
            let eccentricity = written.eccentricity.map_or(0.0, |e| e.0);
            if !(0.0..1.0).contains(&eccentricity) {
                faults.push(
                    &format!("{at}.eccentricity"),
                    format!("expected an eccentricity from 0 to below 1, got {eccentricity}"),
                    "only closed orbits can be flown",
                );
                return None;
            }
            let axis = faults.positive(&format!("{at}.semi_major_axis"), axis.0, "a semi-major axis")?;
            Some((axis, eccentricity))
        }
        _ => {
            faults.push(
                at,
                "expected the size of the orbit in one way",
                "give `altitude`, or `perigee_altitude` and `apogee_altitude`, or `semi_major_axis` with `eccentricity`",
            );
            None
        }
    }
}

/// Inclination and right ascension of the ascending node, rad.
fn plane(written: &config::Orbit, at: &str, start: Epoch, (axis, eccentricity): (f64, f64), faults: &mut Faults) -> Option<(f64, f64)> {
    match (written.inclination, written.local_time, written.ascending_node) {
        (None, Some(local_time), None) => {
            let Some(inclination) = sun_synchronous_inclination(axis, eccentricity, &Body::EARTH) else {
                faults.push(
                    &format!("{at}.local_time"),
                    "no inclination makes an orbit of this size Sun-synchronous",
                    "lower the orbit, or give `inclination` and `ascending_node`",
                );
                return None;
            };
            Some((inclination, node_of_local_time(start, local_time.0 / 3600.0)))
        }
        (Some(inclination), None, node) => {
            let most = std::f64::consts::PI;
            if !(0.0..=most).contains(&inclination.0) {
                faults.push(&format!("{at}.inclination"), "expected an inclination from 0 to 180 deg", "give an angle in that range");
                return None;
            }
            Some((inclination.0, node.map_or(0.0, |node| node.0)))
        }
        _ => {
            faults.push(
                at,
                "expected the plane of the orbit in one way",
                "give `inclination` (with `ascending_node`), or `local_time` for a Sun-synchronous orbit",
            );
            None
        }
    }
}
