//! How much of the Sun a spacecraft sees past its central body.

use std::f64::consts::PI;

use nalgebra::Vector3;

use super::body::SOLAR_RADIUS_M;

/// Visible share of the solar disc, 0 in the umbra, 1 in sunlight, continuous in between.
///
/// Both arguments from the body's centre, in any one frame, in metres. Body and Sun are spheres, seen as two discs of
/// angular radii `b` and `s` whose centres are `d` apart; what one hides of the other is the lens of two circles. Where
/// the body does not cover the Sun though in front of it (antumbra), the share is 1 − (b/s)². At or below the surface
/// the body fills half the sky. Without atmosphere: refraction and oblateness shift an entry by some seconds.
///
/// Source: O. Montenbruck and E. Gill, Satellite Orbits (2000), section 3.4.2.
#[must_use]
pub fn sunlit_fraction(position_m: &Vector3<f64>, sun_position_m: &Vector3<f64>, body_radius_m: f64) -> f64 {
    let to_sun = sun_position_m - position_m;
    let (sun_distance, body_distance) = (to_sun.norm(), position_m.norm());
    if sun_distance <= SOLAR_RADIUS_M || body_distance <= 0.0 {
        return if body_distance <= 0.0 { 0.0 } else { 1.0 };
    }
    let sun_radius = (SOLAR_RADIUS_M / sun_distance).asin();
    let body_radius = (body_radius_m / body_distance).clamp(0.0, 1.0).asin();
    let to_body = -position_m;
    let separation = to_body.cross(&to_sun).norm().atan2(to_body.dot(&to_sun));
    // A body beyond the Sun hides nothing.
    if body_distance > sun_distance {
        return 1.0;
    }
    1.0 - hidden_share(sun_radius, body_radius, separation)
}

/// Share of a disc of radius `sun` hidden by one of radius `body`, centres `separation` apart.
fn hidden_share(sun: f64, body: f64, separation: f64) -> f64 {
    if separation >= sun + body {
        return 0.0;
    }
    if separation <= body - sun {
        return 1.0;
    }
    if separation <= sun - body {
        return (body / sun).powi(2);
    }
    let chord = (separation * separation + sun * sun - body * body) / (2.0 * separation);
    let half_angle_sun = (chord / sun).clamp(-1.0, 1.0).acos();
    let half_angle_body = ((separation - chord) / body).clamp(-1.0, 1.0).acos();
    let half_height = (sun * sun - chord * chord).max(0.0).sqrt();
    let lens = sun * sun * half_angle_sun + body * body * half_angle_body - separation * half_height;
    (lens / (PI * sun * sun)).clamp(0.0, 1.0)
}
