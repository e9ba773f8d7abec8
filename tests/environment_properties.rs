//! What holds of any orbit, shadow or field, whatever its figures.

use std::f64::consts::FRAC_PI_2;

use couplet::environment::{Body, Elements, Epoch, Geodetic, Igrf, Orbit, sunlit_fraction};
use nalgebra::Vector3;
use proptest::prelude::*;

const AU: f64 = 149_597_870_700.0;
const RADIUS: f64 = 6_378_137.0;

fn at(text: &str) -> Epoch {
    Epoch::parse(text).expect("a date of the tests")
}

fn elements(axis: f64, eccentricity: f64, inclination_deg: f64) -> Elements {
    Elements {
        semi_major_axis_m: axis,
        eccentricity,
        inclination_rad: inclination_deg.to_radians(),
        ascending_node_rad: 1.0,
        argument_of_perigee_rad: 0.7,
        mean_anomaly_rad: 0.2,
    }
}

/// WGS 84 geodetic degrees and height to Earth-fixed metres, closed form.
fn earth_fixed(latitude_deg: f64, longitude_deg: f64, height_m: f64) -> Vector3<f64> {
    let e2 = 6.694_379_990_141_316e-3;
    let ((s, c), (sl, cl)) = (latitude_deg.to_radians().sin_cos(), longitude_deg.to_radians().sin_cos());
    let normal = RADIUS / (1.0 - e2 * s * s).sqrt();
    Vector3::new((normal + height_m) * c * cl, (normal + height_m) * c * sl, (normal * (1.0 - e2) + height_m) * s)
}

proptest! {
    #[test]
    fn geodetic_coordinates_come_back(latitude in -90.0..=90.0f64, longitude in -179.9..179.9f64, height in -1e4..5e7f64) {
        let place = Geodetic::from_earth_fixed(&earth_fixed(latitude, longitude, height));
        prop_assert!((place.height_m - height).abs() < 1e-4);
        prop_assert!((place.latitude_rad - latitude.to_radians()).abs() < 1e-10);
        // At a pole any longitude is right.
        prop_assert!((place.longitude_rad - longitude.to_radians()).abs() < 1e-9 || latitude.to_radians().abs() > FRAC_PI_2 - 1e-6);
    }

    #[test]
    fn kepler_keeps_energy_angular_momentum_and_plane(
        e in 0.0..0.97f64, perigee in 6.6e6..9e6f64, inclination in 0.0..180.0f64, elapsed in -1e8..1e8f64,
    ) {
        let start = at("2028-01-01");
        let orbit = Orbit::new(elements(perigee / (1.0 - e), e, inclination), start, Body::EARTH).unwrap();
        let epoch = start.plus_seconds(elapsed);
        let state = orbit.state(epoch);
        let (mu, a) = (Body::EARTH.mu_m3_per_s2, orbit.elements().semi_major_axis_m);
        let energy = 0.5 * state.velocity_m_per_s.norm_squared() - mu / state.position_m.norm();
        // Energy is a small difference near perigee of a long ellipse: rounding grows as 1/(1 − e).
        prop_assert!((energy / (-0.5 * mu / a) - 1.0).abs() < 1e-11 / (1.0 - e));
        let momentum = state.position_m.cross(&state.velocity_m_per_s);
        prop_assert!((momentum.norm() / (mu * a * (1.0 - e * e)).sqrt() - 1.0).abs() < 1e-10);
        prop_assert!(momentum.normalize().dot(&orbit.normal(epoch)) > 1.0 - 1e-12);
    }

    #[test]
    fn velocity_is_the_rate_of_position_when_nothing_drifts(e in 0.0..0.9f64, elapsed in 0.0..1e5f64) {
        let round = Body { j2: 0.0, ..Body::EARTH };
        let start = at("2028-01-01");
        let orbit = Orbit::new(elements(7e6 / (1.0 - e), e, 50.0), start, round).unwrap();
        let at_time = |t: f64| orbit.state(start.plus_seconds(t));
        let slope = (at_time(elapsed + 1.0).position_m - at_time(elapsed - 1.0).position_m) / 2.0;
        // Third derivative over six: below v (v/r)² / 6 ~ 3e-3 m/s.
        prop_assert!((slope - at_time(elapsed).velocity_m_per_s).norm() < 1e-2);
    }

    #[test]
    fn light_is_a_share_and_changes_little_in_little(
        x in -6e7..6e7f64, y in -2e7..2e7f64, z in -2e7..2e7f64, dx in -1.0..1.0f64, dy in -1.0..1.0f64,
    ) {
        let (place, sun) = (Vector3::new(x, y, z), Vector3::new(AU, 0.0, 0.0));
        prop_assume!(place.norm() > RADIUS * 1.01);
        let share = sunlit_fraction(&place, &sun, RADIUS);
        prop_assert!((0.0..=1.0).contains(&share));
        // The penumbra is 9 km wide at the limb of the Earth and wider farther off; a metre is 3e-4 of the least.
        prop_assert!((share - sunlit_fraction(&(place + Vector3::new(dx, dy, 0.0)), &sun, RADIUS)).abs() < 1e-3);
    }

    #[test]
    fn the_field_has_neither_sources_nor_curl(x in -1.0..1.0f64, y in -1.0..1.0f64, z in -1.0..1.0f64, r in 6.6e6..5e7f64) {
        let direction = Vector3::new(x, y, z);
        prop_assume!(direction.norm() > 0.1);
        let place = direction.normalize() * r;
        let igrf = Igrf::at(at("2027-03-01"));
        let step = r * 1e-4;
        let slope = |axis: Vector3<f64>| (igrf.field_earth_fixed(&(place + axis * step)) - igrf.field_earth_fixed(&(place - axis * step))) / (2.0 * step);
        let (ddx, ddy, ddz) = (slope(Vector3::x()), slope(Vector3::y()), slope(Vector3::z()));
        let scale = ddx.norm() + ddy.norm() + ddz.norm();
        prop_assert!((ddx.x + ddy.y + ddz.z).abs() < 1e-5 * scale);
        let curl = Vector3::new(ddy.z - ddz.y, ddz.x - ddx.z, ddx.y - ddy.x);
        prop_assert!(curl.norm() < 1e-5 * scale);
    }
}
