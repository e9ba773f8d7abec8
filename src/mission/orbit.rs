//! Where the spacecraft goes, as written, turned into a trajectory.

use nalgebra::Vector3;

use super::files::Files;
use crate::config::{self, About, LagrangePoint, Quantity};
use crate::environment::{
    Body, Companion, ECLIPTIC_NORTH, Elements, Epoch, HILL_SHARE, Orbit, Site, SunDistance, Trajectory, Warmth, node_at_local_time,
    right_ascension_of_longitude, sun_synchronous_inclination,
};
use crate::units::kind;
use crate::vehicle::Faults;

/// Validates where the spacecraft goes; `at` is its key, its angles count at `start`.
pub(super) fn read(written: &config::Orbit, at: &str, start: Epoch, files: &Files<'_>, faults: &mut Faults) -> Option<Trajectory> {
    let body = body(&written.about, &format!("{at}.about"), faults)?;
    let ways = [
        ("stationary", written.stationary.is_some()),
        ("lagrange", written.lagrange.is_some()),
        ("sun_distance", written.sun_distance.is_some()),
        ("ephemeris", written.ephemeris.is_some()),
    ];
    let given: Vec<&str> = ways.iter().filter(|(_, given)| *given).map(|(key, _)| *key).collect();
    let sized = written.altitude.is_some() || written.perigee_altitude.is_some() || written.semi_major_axis.is_some();
    if given.len() + usize::from(sized) > 1 {
        let (list, verb) = (
            given.join("` and `"),
            if given.len() > 1 { "do not go together" } else { "goes without another way of saying where it flies" },
        );
        faults.push(at, format!("`{list}` {verb}"), "keep one; an overlay takes the others away with `null`, such as `altitude: null`");
        return None;
    }
    if let Some(way) = given.first() {
        let plane = [
            ("inclination", written.inclination.is_some()),
            ("local_time", written.local_time.is_some()),
            ("ascending_node", written.ascending_node.is_some()),
        ];
        if let Some((key, _)) = plane.iter().find(|(_, given)| *given) {
            let help = format!("leave it out; an overlay takes it away with `{key}: null`");
            faults.push(&format!("{at}.{key}"), format!("says nothing where `{way}` is given"), help);
            return None;
        }
    }
    if let Some(stationary) = &written.stationary {
        return self::stationary(stationary, body, at, start, faults);
    }
    if let Some(point) = written.lagrange {
        return Some(Trajectory::Companion(lagrange(point)));
    }
    if let Some(distance) = written.sun_distance {
        let distance_m = faults.positive(&format!("{at}.sun_distance"), distance.0, "a distance")?;
        return Some(Trajectory::Companion(Companion { ahead_rad: 0.0, distance: SunDistance::Fixed(distance_m) }));
    }
    if let Some(file) = &written.ephemeris {
        return files.ephemeris(file, &body, &format!("{at}.ephemeris"), faults);
    }
    keplerian(written, body, at, start, faults)
}

/// The body that is orbited.
fn body(about: &About, at: &str, faults: &mut Faults) -> Option<Body> {
    let own = match about {
        About::Earth => return Some(Body::EARTH),
        About::Moon => return Some(Body::MOON),
        About::Mars => return Some(Body::MARS),
        About::Venus => return Some(Body::VENUS),
        About::Mercury => return Some(Body::MERCURY),
        About::Sun => return Some(Body::SUN),
        About::Body(own) => own,
    };
    let at = |key: &str| format!("{at}.body.{key}");
    let mu = faults.positive(&at("gravitational_parameter"), own.gravitational_parameter.0, "a gravitational parameter");
    let radius = faults.positive(&at("radius"), own.radius.0, "a radius");
    let distance = faults.positive(&at("sun_distance"), own.sun_distance.0, "a distance");
    let j2 = faults.within(&at("j2"), own.j2.map_or(0.0, |j2| j2.0), -0.5, 0.5, "a zonal harmonic");
    let albedo = faults.within(&at("albedo"), own.albedo.map_or(0.1, |albedo| albedo.0), 0.0, 1.0, "a share of light");
    let rate = match own.rotation_period {
        None => Some(0.0),
        Some(period) => faults.positive(&at("rotation_period"), period.0, "a period").map(|period_s| 2.0 * std::f64::consts::PI / period_s),
    };
    Some(Body {
        name: "the body",
        mu_m3_per_s2: mu?,
        equatorial_radius_m: radius?,
        j2: j2?,
        rotation_rate_rad_per_s: rate?,
        pole: ECLIPTIC_NORTH,
        site: Site::Circle(distance?),
        albedo: albedo?,
        warmth: Warmth::DaySide,
    })
}

fn lagrange(point: LagrangePoint) -> Companion {
    let sixty = std::f64::consts::FRAC_PI_3;
    let (ahead_rad, share) = match point {
        LagrangePoint::L1 => (0.0, 1.0 - HILL_SHARE),
        LagrangePoint::L2 => (0.0, 1.0 + HILL_SHARE),
        LagrangePoint::L3 => (std::f64::consts::PI, 1.0),
        LagrangePoint::L4 => (sixty, 1.0),
        LagrangePoint::L5 => (-sixty, 1.0),
    };
    Companion { ahead_rad, distance: SunDistance::OfEarth(share) }
}

fn stationary(written: &config::Stationary, body: Body, at: &str, start: Epoch, faults: &mut Faults) -> Option<Trajectory> {
    let Some(semi_major_axis_m) = body.synchronous_radius_m().filter(|_| body.is_earth()) else {
        faults.push(
            &format!("{at}.stationary"),
            format!("longitudes are known for the Earth only, not for {}", body.name),
            "give `semi_major_axis` and `inclination`",
        );
        return None;
    };
    let mean_anomaly_rad = right_ascension_of_longitude(start, written.longitude.0);
    let elements = Elements { semi_major_axis_m, mean_anomaly_rad, ..Elements::default() };
    Orbit::new(elements, start, body).ok().map(|orbit| Trajectory::Orbit(Box::new(orbit)))
}

fn keplerian(written: &config::Orbit, body: Body, at: &str, start: Epoch, faults: &mut Faults) -> Option<Trajectory> {
    let (semi_major_axis_m, eccentricity) = size(written, at, &body, faults)?;
    let (inclination_rad, ascending_node_rad) = plane(written, at, start, (semi_major_axis_m, eccentricity), &body, faults)?;
    let angle = |angle: &Option<Quantity<kind::Angle>>| angle.map_or(0.0, |angle| angle.0);
    let elements = Elements {
        semi_major_axis_m,
        eccentricity,
        inclination_rad,
        ascending_node_rad,
        argument_of_perigee_rad: angle(&written.argument_of_perigee),
        mean_anomaly_rad: angle(&written.mean_anomaly),
    };
    Orbit::new(elements, start, body)
        .map(|orbit| Trajectory::Orbit(Box::new(orbit)))
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
                "give `altitude`, or `perigee_altitude` and `apogee_altitude`, or `semi_major_axis` with `eccentricity`, or one of \
                 `stationary`, `lagrange`, `sun_distance`, `ephemeris`",
            );
            None
        }
    }
}

/// Inclination and angle of the ascending node by the body's equator, rad.
fn plane(
    written: &config::Orbit,
    at: &str,
    start: Epoch,
    (axis, eccentricity): (f64, f64),
    body: &Body,
    faults: &mut Faults,
) -> Option<(f64, f64)> {
    match (written.inclination, written.local_time, written.ascending_node) {
        (None, Some(local_time), None) => {
            let hour = faults.within(&format!("{at}.local_time"), local_time.0 / 3600.0, 0.0, 24.0, "a local time in hours")?;
            let Some(inclination) = sun_synchronous_inclination(axis, eccentricity, body) else {
                faults.push(
                    &format!("{at}.local_time"),
                    "no inclination makes an orbit of this size Sun-synchronous",
                    "lower the orbit, or give `inclination` and `ascending_node`",
                );
                return None;
            };
            Some((inclination, node_at_local_time(body, start, hour)))
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

/// Lowest altitude over the equatorial radius, m: of the ellipse, or of samples of any other path.
pub(super) fn lowest_altitude_m(trajectory: &Trajectory, start: Epoch, duration_s: f64) -> f64 {
    if let Trajectory::Orbit(orbit) = trajectory {
        let elements = orbit.elements();
        return elements.semi_major_axis_m * (1.0 - elements.eccentricity) - orbit.body().equatorial_radius_m;
    }
    let radius_m = trajectory.body().equatorial_radius_m;
    let altitude = |k: u32| {
        let position: Vector3<f64> = trajectory.state(start.plus_seconds(duration_s * f64::from(k) / 2000.0)).position_m;
        position.norm() - radius_m
    };
    (0..=2000).map(altitude).fold(f64::INFINITY, f64::min)
}

/// Whether a path can be flown for this long: clear of the body, and known all the time.
pub(super) fn covers(trajectory: &Trajectory, from: Epoch, duration_s: f64, lowest_m: f64, at: &str, faults: &mut Faults) -> bool {
    let body = trajectory.body();
    if lowest_m <= 0.0 {
        let message = format!("the path goes through {}: its lowest point is {:.1} km below the surface", body.name, -lowest_m / 1e3);
        faults.push(at, message, "check the positions and the body named by `about`");
        return false;
    }
    let Trajectory::Table(table) = trajectory else { return true };
    let (ephemeris, to) = (&table.0, from.plus_seconds(duration_s));
    // A second: what the digits of a mission's length leave open.
    if from.tt_seconds() < ephemeris.start().tt_seconds() - 1.0 || to.tt_seconds() > ephemeris.stop().tt_seconds() + 1.0 {
        let (start, stop) = (ephemeris.start(), ephemeris.stop());
        let message = format!("the file covers {start} to {stop}, but the phase lasts from {from} to {to}");
        faults.push(at, message, "give a longer file, or fit `mission.start` and the phase to it");
        return false;
    }
    true
}
