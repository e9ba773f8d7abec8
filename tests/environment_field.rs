//! The magnetic field against published figures.

use approx::assert_abs_diff_eq;
use couplet::environment::{Epoch, Igrf};
use nalgebra::Vector3;

const RADIUS: f64 = 6_378_137.0;

fn at(text: &str) -> Epoch {
    Epoch::parse(text).expect("a date of the tests")
}

// Source: IGRF-14 coefficients, doi 10.5281/zenodo.14012302: norm of the degree-1 terms and the pole of the dipole.
#[test]
fn the_dipole_of_igrf_14() {
    for (date, norm_nt, latitude, longitude) in [
        ("2015-01-01", 29_867.31, 80.31, -72.61),
        ("2020-01-01", 29_804.71, 80.59, -72.68),
        ("2025-01-01", 29_733.37, 80.79, -72.76),
        ("2030-01-01", 29_652.57, 80.99, -72.96),
    ] {
        let (s, c) = f64::to_radians(latitude).sin_cos();
        let (sl, cl) = f64::to_radians(longitude).sin_cos();
        let axis = Vector3::new(c * cl, c * sl, s);
        let field = Igrf::at(at(date));
        // On the axis of a dipole the field is twice that on its equator, and points down at the northern pole.
        let pole = field.field_truncated(&(axis * 6_371_200.0), 1) * 1e9;
        let equator = field.field_truncated(&(axis.cross(&Vector3::x()).normalize() * 6_371_200.0), 1) * 1e9;
        assert_abs_diff_eq!(equator.norm(), norm_nt, epsilon = 0.02);
        assert_abs_diff_eq!(pole.norm() / equator.norm(), 2.0, epsilon = 1e-6);
        // The pole is given to 0.01°.
        assert!(pole.angle(&-axis).to_degrees() < 0.01);
    }
}

// Source: ppigrf 2.1.0, IGRF-14, geocentric, 2025-01-01; given to 0.01 nT.
#[test]
fn the_full_field_at_seven_thousand_kilometres() {
    let (s, c) = f64::to_radians(10.0).sin_cos();
    let field = Igrf::at(at("2025-01-01")).field_earth_fixed(&(Vector3::new(s, 0.0, c) * 7_078e3)) * 1e9;
    assert_abs_diff_eq!(field.dot(&Vector3::new(s, 0.0, c)), -41_097.88, epsilon = 0.01);
    assert_abs_diff_eq!(field.dot(&Vector3::new(c, 0.0, -s)), -4_611.67, epsilon = 0.01);
    assert_abs_diff_eq!(field.y, -137.67, epsilon = 0.01);
}

// Source: ppigrf 2.1.0, IGRF-14, geodetic north, east, down, 2025-01-01; given to 0.1 nT.
#[test]
fn the_full_field_at_geodetic_places() {
    for (height_m, latitude, longitude, want) in [
        (0.0, 80.0, 0.0, [6_527.4, 141.6, 54_782.5]),
        (0.0, 0.0, 0.0, [27_456.6, -1_926.5, -15_997.4]),
        (100e3, 0.0, 120.0, [37_687.1, -97.0, -10_148.5]),
        (100e3, -80.0, 240.0, [5_906.1, 14_770.7, -49_545.9]),
    ] {
        let (s, c) = f64::to_radians(latitude).sin_cos();
        let (sl, cl) = f64::to_radians(longitude).sin_cos();
        let field = Igrf::at(at("2025-01-01")).field_earth_fixed(&earth_fixed(latitude, longitude, height_m)) * 1e9;
        let [north, east, down] = [Vector3::new(-s * cl, -s * sl, c), Vector3::new(-sl, cl, 0.0), Vector3::new(-c * cl, -c * sl, -s)];
        for (axis, want) in [north, east, down].iter().zip(want) {
            assert_abs_diff_eq!(field.dot(axis), want, epsilon = 0.06);
        }
    }
}

#[test]
fn the_field_is_finite_and_continuous_over_the_poles() {
    let field = Igrf::at(at("2026-06-01"));
    let pole = field.field_earth_fixed(&Vector3::new(0.0, 0.0, 7e6));
    // One metre moves the field by 1e-11 T at most (its gradient is about 3 B / r).
    assert_abs_diff_eq!(pole, field.field_earth_fixed(&Vector3::new(0.7, -0.7, 7e6)), epsilon = 3e-11);
    assert!(field.field_earth_fixed(&Vector3::zeros()).norm() <= 0.0);
    assert!(Igrf::is_extrapolated(at("2031-01-01")) && !Igrf::is_extrapolated(at("2029-12-31")));
}

#[test]
fn secular_variation_goes_on_after_2030() {
    let place = Vector3::new(5e6, 2e6, 4e6);
    let field = |date: &str| Igrf::at(at(date)).field_earth_fixed(&place);
    let (first, second) = (field("2030-01-01") - field("2025-01-01"), field("2035-01-01") - field("2030-01-01"));
    assert_abs_diff_eq!(first, second, epsilon = 1e-3 * first.norm());
}

/// WGS 84 geodetic degrees and height to Earth-fixed metres, closed form.
fn earth_fixed(latitude_deg: f64, longitude_deg: f64, height_m: f64) -> Vector3<f64> {
    let e2 = 6.694_379_990_141_316e-3;
    let ((s, c), (sl, cl)) = (latitude_deg.to_radians().sin_cos(), longitude_deg.to_radians().sin_cos());
    let normal = RADIUS / (1.0 - e2 * s * s).sqrt();
    Vector3::new((normal + height_m) * c * cl, (normal + height_m) * c * sl, (normal * (1.0 - e2) + height_m) * s)
}
