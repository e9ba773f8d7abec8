//! The orbit: Keplerian motion with the secular drift that the flattening of the body causes.

use std::f64::consts::{PI, TAU};

use nalgebra::{Rotation3, Vector3};

use super::body::{Body, SOLAR_MU_M3_PER_S2, Site};
use super::epoch::Epoch;
use super::planets::Planet;

/// Tropical year, days. Source: Meeus, Astronomical Algorithms, 2nd ed., p. 133 (J2000 value, mean equinox).
const TROPICAL_YEAR_DAYS: f64 = 365.242_19;

/// Mean Keplerian elements by the equator of the body (of the ecliptic for the Sun); see [`Body::inertial_from_equator`].
#[derive(Debug, Clone, Copy, Default, PartialEq)]
pub struct Elements {
    /// Semi-major axis, m.
    pub semi_major_axis_m: f64,
    /// Eccentricity, 0 up to but without 1.
    pub eccentricity: f64,
    /// Inclination to the body's equator, rad.
    pub inclination_rad: f64,
    /// Right ascension of the ascending node, rad.
    pub ascending_node_rad: f64,
    /// Argument of perigee, rad.
    pub argument_of_perigee_rad: f64,
    /// Mean anomaly, rad.
    pub mean_anomaly_rad: f64,
}

/// Where the spacecraft is and how it moves, in I.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct State {
    /// Position from the body's centre, m.
    pub position_m: Vector3<f64>,
    /// Velocity, m/s.
    pub velocity_m_per_s: Vector3<f64>,
}

/// Why elements are not an orbit.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
#[non_exhaustive]
pub enum OrbitError {
    /// An element is infinite or not a number.
    #[error("the {element} must be finite, got {got}")]
    NotFinite {
        /// Which element.
        element: &'static str,
        /// What it was.
        got: f64,
    },
    /// The eccentricity is not that of an ellipse.
    #[error("the eccentricity must be from 0 up to but not including 1, got {got}")]
    Eccentricity {
        /// What it was.
        got: f64,
    },
    /// The perigee does not clear the body.
    #[error("the perigee must be above the surface of {body} ({surface_km} km from its centre), got {perigee_km} km")]
    PerigeeTooLow {
        /// Name of the body.
        body: &'static str,
        /// Radius of the body, km.
        surface_km: f64,
        /// Perigee radius, km.
        perigee_km: f64,
    },
}

/// An orbit that drifts by the secular first-order effect of J2 on node, perigee and mean anomaly.
#[derive(Debug, Clone)]
pub struct Orbit {
    elements: Elements,
    epoch: Epoch,
    body: Body,
    from_equator: Rotation3<f64>,
    mean_motion: f64,
    node_rate: f64,
    perigee_rate: f64,
    anomaly_rate: f64,
}

impl Orbit {
    /// The orbit that has the mean `elements` at `epoch`.
    ///
    /// # Errors
    /// [`OrbitError`] for an element that is not finite, an eccentricity outside [0, 1), or a perigee at or under the surface.
    pub fn new(elements: Elements, epoch: Epoch, body: Body) -> Result<Self, OrbitError> {
        check(&elements, epoch, &body)?;
        let a = elements.semi_major_axis_m;
        let e2 = elements.eccentricity * elements.eccentricity;
        let mean_motion = (body.mu_m3_per_s2 / a.powi(3)).sqrt();
        let drift = j2_drift(a, elements.eccentricity, &body);
        let (s, c) = elements.inclination_rad.sin_cos();
        Ok(Self {
            elements,
            epoch,
            body,
            from_equator: body.inertial_from_equator(),
            mean_motion,
            node_rate: -drift * c,
            perigee_rate: drift * (2.0 - 2.5 * s * s),
            anomaly_rate: mean_motion + drift * (1.0 - e2).sqrt() * (1.0 - 1.5 * s * s),
        })
    }

    /// Position and velocity at `epoch`, in I. The velocity is that of the osculating ellipse (drift left out, 1e-3 of it).
    #[must_use]
    pub fn state(&self, epoch: Epoch) -> State {
        let Elements { semi_major_axis_m: a, eccentricity: e, .. } = self.elements;
        let elapsed = self.elapsed_s(epoch);
        let eccentric = eccentric_anomaly(self.elements.mean_anomaly_rad + self.anomaly_rate * elapsed, e);
        let (sin_e, cos_e) = eccentric.sin_cos();
        let minor = (1.0 - e * e).sqrt();
        let speed = self.mean_motion * a / (1.0 - e * cos_e);
        let turn = self.plane(elapsed)
            * Rotation3::from_axis_angle(&Vector3::z_axis(), self.elements.argument_of_perigee_rad + self.perigee_rate * elapsed);
        State {
            position_m: turn * Vector3::new(a * (cos_e - e), a * minor * sin_e, 0.0),
            velocity_m_per_s: turn * Vector3::new(-speed * sin_e, speed * minor * cos_e, 0.0),
        }
    }

    /// The central body.
    #[must_use]
    pub fn body(&self) -> &Body {
        &self.body
    }

    /// The mean elements at the orbit's own epoch.
    #[must_use]
    pub fn elements(&self) -> &Elements {
        &self.elements
    }

    /// Keplerian period 2π √(a³/μ), s.
    #[must_use]
    pub fn period_s(&self) -> f64 {
        TAU / self.mean_motion
    }

    /// Time from one ascending node to the next (draconic period), s, averaged over a turn of the perigee.
    #[must_use]
    pub fn nodal_period_s(&self) -> f64 {
        TAU / (self.anomaly_rate + self.perigee_rate)
    }

    /// Secular rate of the ascending node, rad/s. Source: Vallado, Fundamentals of Astrodynamics, eq. 9-38.
    #[must_use]
    pub fn node_rate_rad_per_s(&self) -> f64 {
        self.node_rate
    }

    /// Secular rate of the argument of perigee, rad/s. Source: Vallado, Fundamentals of Astrodynamics, eq. 9-40.
    #[must_use]
    pub fn perigee_rate_rad_per_s(&self) -> f64 {
        self.perigee_rate
    }

    /// Unit normal of the orbit plane at `epoch`, in I, along the angular momentum.
    #[must_use]
    pub fn normal(&self, epoch: Epoch) -> Vector3<f64> {
        self.plane(self.elapsed_s(epoch)) * Vector3::z()
    }

    fn elapsed_s(&self, epoch: Epoch) -> f64 {
        epoch.tt_seconds() - self.epoch.tt_seconds()
    }

    /// From the frame of the node and the plane to I.
    fn plane(&self, elapsed_s: f64) -> Rotation3<f64> {
        let node = self.elements.ascending_node_rad + self.node_rate * elapsed_s;
        let tilt = Rotation3::from_axis_angle(&Vector3::x_axis(), self.elements.inclination_rad);
        self.from_equator * Rotation3::from_axis_angle(&Vector3::z_axis(), node) * tilt
    }
}

fn check(elements: &Elements, epoch: Epoch, body: &Body) -> Result<(), OrbitError> {
    let finite = [
        ("semi-major axis", elements.semi_major_axis_m),
        ("eccentricity", elements.eccentricity),
        ("inclination", elements.inclination_rad),
        ("ascending node", elements.ascending_node_rad),
        ("argument of perigee", elements.argument_of_perigee_rad),
        ("mean anomaly", elements.mean_anomaly_rad),
        ("epoch", epoch.tt_seconds()),
    ];
    if let Some(&(element, got)) = finite.iter().find(|(_, value)| !value.is_finite()) {
        return Err(OrbitError::NotFinite { element, got });
    }
    if !(0.0..1.0).contains(&elements.eccentricity) {
        return Err(OrbitError::Eccentricity { got: elements.eccentricity });
    }
    let perigee_m = elements.semi_major_axis_m * (1.0 - elements.eccentricity);
    if perigee_m <= body.equatorial_radius_m {
        let (surface_km, perigee_km) = (body.equatorial_radius_m / 1e3, perigee_m / 1e3);
        return Err(OrbitError::PerigeeTooLow { body: body.name, surface_km, perigee_km });
    }
    Ok(())
}

/// The factor 3/2 n J2 (R/p)² common to the three secular rates, rad/s.
fn j2_drift(semi_major_axis_m: f64, eccentricity: f64, body: &Body) -> f64 {
    let mean_motion = (body.mu_m3_per_s2 / semi_major_axis_m.powi(3)).sqrt();
    let parameter = semi_major_axis_m * (1.0 - eccentricity * eccentricity);
    1.5 * mean_motion * body.j2 * (body.equatorial_radius_m / parameter).powi(2)
}

/// Solves E − e sin E = M. Newton steps kept inside a shrinking bracket, so it ends for every e in [0, 1).
pub(super) fn eccentric_anomaly(mean_anomaly: f64, eccentricity: f64) -> f64 {
    let turns = ((mean_anomaly + PI) / TAU).floor() * TAU;
    let mean = mean_anomaly - turns;
    // The root lies within e of M.
    let (mut low, mut high) = (mean - eccentricity, mean + eccentricity);
    let mut guess = mean + eccentricity * mean.sin();
    for _ in 0..60 {
        let error = guess - eccentricity * guess.sin() - mean;
        if error > 0.0 {
            high = guess;
        } else {
            low = guess;
        }
        let newton = guess - error / (1.0 - eccentricity * guess.cos());
        let next = if newton > low && newton < high { newton } else { f64::midpoint(low, high) };
        if (next - guess).abs() < 1e-14 {
            return next;
        }
        guess = next;
    }
    guess
}

/// Inclination, rad, at which J2 turns the node once in the body's year; `None` where no inclination does (too high, no
/// J2, or no orbit at all). The year is the tropical one for the Earth and the sidereal one for other bodies.
///
/// Source: Curtis, Orbital Mechanics for Engineering Students, 2nd ed., example 4.7.
#[must_use]
pub fn sun_synchronous_inclination(semi_major_axis_m: f64, eccentricity: f64, body: &Body) -> Option<f64> {
    let rate = TAU / year_s(body)?;
    let cosine = -rate / j2_drift(semi_major_axis_m, eccentricity, body);
    (semi_major_axis_m > 0.0 && (0.0..1.0).contains(&eccentricity) && cosine.abs() <= 1.0).then(|| cosine.acos())
}

/// Length of the body's year, s; `None` for the Sun.
fn year_s(body: &Body) -> Option<f64> {
    let of_radius = |a: f64| TAU / (SOLAR_MU_M3_PER_S2 / a.powi(3)).sqrt();
    match body.site {
        Site::Sun => None,
        Site::Earth | Site::Moon => Some(TROPICAL_YEAR_DAYS * 86_400.0),
        Site::Planet(Planet::Mercury) => Some(87.969_26 * 86_400.0),
        Site::Planet(Planet::Venus) => Some(224.700_8 * 86_400.0),
        Site::Planet(Planet::Mars) => Some(686.979_9 * 86_400.0),
        Site::Circle(radius_m) => Some(of_radius(radius_m)),
    }
}

/// Angle of the ascending node by the body's equator, rad in [0, 2π), of an orbit that crosses it northwards at local
/// time `hours` at `epoch`: mean local time about the Earth, by the true Sun about other bodies.
#[must_use]
pub fn node_at_local_time(body: &Body, epoch: Epoch, hours: f64) -> f64 {
    if body.is_earth() {
        return node_of_local_time(epoch, hours);
    }
    let sun = body.inertial_from_equator().inverse() * -body.heliocentric_position_m(epoch);
    (sun.y.atan2(sun.x) + (hours - 12.0) * TAU / 24.0).rem_euclid(TAU)
}

/// Right ascension of the ascending node, rad in [0, 2π) in I, of an orbit that crosses the equator northwards at mean
/// local time `hours` at `epoch`.
///
/// The mean Sun has the right ascension L0 (Meeus, Astronomical Algorithms, 2nd ed., eq. 25.2) less the general
/// precession in right ascension since J2000 (m = 4612.16″ a century, Capitaine et al. 2003, eq. 42).
#[must_use]
pub fn node_of_local_time(epoch: Epoch, hours: f64) -> f64 {
    let t = epoch.julian_centuries_tt();
    let mean_sun_of_date = 280.466_46 + t * (36_000.769_83 + t * 0.000_303_2);
    let precession = t * 4_612.156_5 / 3600.0;
    (mean_sun_of_date - precession + (hours - 12.0) * 15.0).rem_euclid(360.0).to_radians()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn keplers_equation_is_solved_for_every_ellipse() {
        for e in [0.0, 1e-9, 0.3, 0.9, 0.999, 0.999_999_9] {
            for k in -4000..4000 {
                let mean = f64::from(k) * 0.003_7;
                let root = eccentric_anomaly(mean, e);
                // The equation holds up to whole turns.
                let off = (root - e * root.sin() - mean + PI).rem_euclid(TAU) - PI;
                assert!(off.abs() < 1e-13 * 20.0, "e {e}, M {mean}: {off}");
            }
        }
    }
}
