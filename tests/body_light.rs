//! Light and heat of a body against closed forms and a sum over many small pieces of its surface.
#![allow(clippy::unwrap_used, reason = "a helper of a test fails by panicking")]

mod support;

use couplet::environment::{SPEED_OF_LIGHT_M_PER_S, Warmth, patches};
use couplet::lifetime::Plan;
use couplet::mission::Margin;
use couplet::momentum::Resolution;
use nalgebra::Vector3;
use support::{SMALL, heron, scenario};

const R: f64 = 6_378_137.0;
const S: f64 = 1361.0;

/// Even infrared M on a plate that faces the body: M (R/r)² / c (view factor of a sphere, any text on heat transfer).
#[test]
fn infrared_on_a_plate_that_faces_the_body() {
    for altitude in [200e3, 700e3, 2000e3, 35_786e3] {
        let r = R + altitude;
        let list = patches(&Vector3::new(0.0, r, 0.0), &Vector3::x(), R, S, Warmth::Even);
        let pressure: f64 = list.iter().map(|p| p.infrared_pa * p.direction.dot(&-Vector3::y())).sum();
        let expected = S / SPEED_OF_LIGHT_M_PER_S * (R / r).powi(2);
        // The middle patch looks straight down in place of the mean of its ring's directions: none of its weight is lost.
        assert!((pressure / expected - 1.0).abs() < 1e-12, "{altitude}: {}", pressure / expected);
    }
}

/// Reflected sunlight against the surface cut into 400,000 pieces that each reflect as Lambert's law says. 19 patches are
/// coarse: within 3 % of the full Moon's part of the light seen, at every phase down to where a tenth is lit.
#[test]
fn reflected_light_against_a_fine_sum() {
    let r = R + 600e3;
    let position = Vector3::new(0.0, 0.0, r);
    let fine = |sun: &Vector3<f64>| -> Vector3<f64> {
        let mut sum = Vector3::zeros();
        let (rings, columns) = (400, 1000);
        let least = R / r;
        for i in 0..rings {
            let cos = least + (1.0 - least) * (f64::from(i) + 0.5) / f64::from(rings);
            let sin = (1.0 - cos * cos).sqrt();
            for k in 0..columns {
                let (s, c) = (std::f64::consts::TAU * (f64::from(k) + 0.5) / f64::from(columns)).sin_cos();
                let normal = Vector3::new(sin * c, sin * s, cos);
                let area = std::f64::consts::TAU * (1.0 - least) / f64::from(rings * columns) * R * R;
                let to = position - normal * R;
                let distance = to.norm();
                let out = normal.dot(&to) / distance;
                sum -= to / distance
                    * (S / SPEED_OF_LIGHT_M_PER_S / std::f64::consts::PI * normal.dot(sun).max(0.0) * out * area / (distance * distance));
            }
        }
        sum
    };
    let coarse = |sun: &Vector3<f64>| -> Vector3<f64> {
        patches(&position, sun, R, S, Warmth::Even).iter().map(|p| p.direction * p.reflected_pa).sum()
    };
    let full = fine(&Vector3::z()).norm();
    for degrees in [0.0, 20.0, 45.0, 70.0, 90.0, 110.0] {
        let (s, c) = f64::to_radians(degrees).sin_cos();
        let sun = Vector3::new(s, 0.0, c);
        let off = (coarse(&sun) - fine(&sun)).norm() / full;
        assert!(off < 0.03, "{degrees} deg: {off}");
    }
    // On the night side, beyond what the Sun reaches, nothing.
    assert!(coarse(&Vector3::new(0.0, 0.0, -1.0)).norm() < 1e-30);
}

/// Heat of an airless body comes from where the Sun shines.
#[test]
fn heat_of_an_airless_body_comes_from_the_day_side() {
    let list = patches(&Vector3::new(0.0, 0.0, -2.0e6), &Vector3::z(), 1.738e6, S, Warmth::DaySide);
    assert!(list.iter().all(|patch| patch.infrared_pa <= 0.0 && patch.reflected_pa <= 0.0));
    assert!(patches(&Vector3::new(0.0, 0.0, 1.7e6), &Vector3::z(), 1.738e6, S, Warmth::Even).is_empty());
}

/// It counts by itself below 2,000 km, and its uncertain albedo is a feature like any other: doubling a draw of it doubles
/// the part of the torque that it makes.
#[test]
fn the_choice_of_counting_it() {
    let counted = |settings: &[&str]| scenario(SMALL, settings).mission.phases[0].body_light;
    assert!(counted(&[]));
    assert!(!counted(&["environment.body_light=off"]));
    assert!(!counted(&["mission.orbit.altitude=2100 km"]));
    assert!(counted(&["mission.orbit.altitude=2100 km", "environment.body_light=on"]));
    let secular = |albedo: &str| {
        let settings = [
            "mission.phases=[{name: only, duration: 20 d, unload: {every: 1 d}}]",
            "environment.infrared=0 W/m2",
            &format!("environment.albedo={albedo}"),
        ];
        let plan = Plan::new(heron(&settings), Resolution::Default, Margin::NONE).unwrap();
        plan.summary()[0].sources.iter().find(|(name, _, _)| *name == "body_light").unwrap().2
    };
    let (one, two) = (secular("0.15 ± 0.01"), secular("0.3"));
    // The centre of mass follows the propellant, some grams of which hang on this light: 1e-5.
    assert!(two.norm() > 0.01 && (two - one * 2.0).norm() < 1e-5 * two.norm(), "{one} {two}");
}
