//! Attitudes against what their words say, and surveys against an even spread.
#![allow(clippy::unwrap_used, reason = "a helper of a test fails by panicking")]

mod support;

use couplet::environment::{ECLIPTIC_NORTH, sun_position_m};
use couplet::mission::{Direction, Law, Scenario};
use nalgebra::{Rotation3, Vector3};
use support::{SMALL, scenario};

const DAY_S: f64 = 86_400.0;

fn with(attitude: &str, orbit: &str) -> Scenario {
    let phases = format!("mission.phases=[{{name: only, duration: 300 d, attitude: {attitude}}}]");
    scenario(SMALL, &[&phases, &format!("mission.orbit={orbit}")])
}

const LOW: &str = "{altitude: 700 km, inclination: 98 deg, ascending_node: 50 deg}";

/// Rotation from the body to I at a time after the start, s.
fn at(scenario: &Scenario, time_s: f64) -> Rotation3<f64> {
    let phase = &scenario.mission.phases[0];
    let moment = phase.moment(scenario.mission.start, time_s);
    phase.attitude.inertial_from_body(&moment, &moment.sky())
}

fn sky(scenario: &Scenario, time_s: f64) -> couplet::mission::Sky {
    scenario.mission.phases[0].moment(scenario.mission.start, time_s).sky()
}

const TIMES_S: [f64; 6] = [0.0, 1234.5, 9000.0, 3.3 * DAY_S, 91.7 * DAY_S, 299.0 * DAY_S];

/// By default z looks down and y stands against the orbit normal.
#[test]
fn nadir_by_default() {
    let s = with("{}", LOW);
    for t in TIMES_S {
        let (r, v) = (sky(&s, t).state.position_m, sky(&s, t).state.velocity_m_per_s);
        assert!((at(&s, t) * Vector3::z() + r.normalize()).norm() < 1e-12);
        assert!((at(&s, t) * Vector3::y() + r.cross(&v).normalize()).norm() < 1e-12);
    }
}

/// Yaw steering: z looks down and an array's axis y stands square to the Sun, so that an array on it can face the Sun.
#[test]
fn yaw_steering_keeps_the_array_axis_square_to_the_sun() {
    let s = with("{second_axis: 1 0 0, towards: sun}", LOW);
    for t in TIMES_S {
        let sky = sky(&s, t);
        let sun = (sky.sun_m - sky.state.position_m).normalize();
        assert!((at(&s, t) * Vector3::z() + sky.state.position_m.normalize()).norm() < 1e-12);
        assert!((at(&s, t) * Vector3::y()).dot(&sun).abs() < 1e-12);
        assert!((at(&s, t) * Vector3::x()).dot(&sun) > 0.0);
    }
}

/// A body axis goes to the Sun, the Earth, along the velocity or to a place of the sky exactly; the second as near as it can.
#[test]
fn axes_point_where_they_are_told() {
    let s = with("{axis: 0 1 0, to: sun, second_axis: 1 1 0, towards: ecliptic_north}", LOW);
    let f = with("{axis: 1 2 2, to: {sky: {right_ascension: 90 deg, declination: 30 deg}}, second_axis: 0 0 1, towards: sun}", LOW);
    let v = with("{axis: 1 0 0, to: anti_velocity}", LOW);
    let e = with("{axis: -1 0 0, to: earth, second_axis: 0 0 1, towards: sun}", "{about: mars, altitude: 400 km, inclination: 90 deg}");
    for t in TIMES_S {
        let sky_s = sky(&s, t);
        let sun = (sky_s.sun_m - sky_s.state.position_m).normalize();
        assert!((at(&s, t) * Vector3::y() - sun).norm() < 1e-12);
        // As near as it can: no component across the plane of the two directions.
        assert!((at(&s, t) * Vector3::x()).dot(&sun.cross(&ECLIPTIC_NORTH)).abs() < 1e-12);
        assert!((at(&s, t) * Vector3::x()).dot(&ECLIPTIC_NORTH) > 0.0);

        let target = Vector3::new(0.0, 30_f64.to_radians().cos(), 0.5);
        assert!((at(&f, t) * Vector3::new(1.0, 2.0, 2.0) / 3.0 - target).norm() < 1e-12);

        let velocity = sky(&v, t).state.velocity_m_per_s.normalize();
        assert!((at(&v, t) * Vector3::x() + velocity).norm() < 1e-12);

        // The Earth from Mars: from the Sun to the Earth less from the Sun to Mars.
        let epoch = e.mission.start.plus_seconds(t);
        let mars = e.mission.phases[0].trajectory.body().heliocentric_position_m(epoch);
        let earth = (-sun_position_m(epoch) - mars - sky(&e, t).state.position_m).normalize();
        assert!((at(&e, t) * -Vector3::x() - earth).norm() < 1e-12);
    }
}

/// A spin of 6 rpm is a turn in ten seconds about the pointed axis, which stays.
#[test]
fn a_spin_turns_about_its_axis() {
    let s = with("{axis: 0 0 1, to: sun, spin: 6 rpm}", "{sun_distance: 1 AU}");
    let (zero, quarter, whole) = (at(&s, 0.0), at(&s, 2.5), at(&s, 10.0));
    // In ten seconds the Sun's direction moves by 2e-6 rad.
    assert!((whole * Vector3::x() - zero * Vector3::x()).norm() < 1e-5);
    assert!((quarter * Vector3::x() - zero * Vector3::y()).norm() < 1e-5);
    assert!((quarter * Vector3::z() - zero * Vector3::z()).norm() < 1e-5);
}

fn pointings(scenario: &Scenario, count: u32, dwell_s: f64) -> Vec<(Vector3<f64>, Vector3<f64>)> {
    let one = |k: u32| {
        let t = dwell_s * (f64::from(k) + 0.5);
        let sky = sky(scenario, t);
        (at(scenario, t) * Vector3::x(), (sky.sun_m - sky.state.position_m).normalize())
    };
    (0..count).map(one).collect()
}

/// Pointings keep the Sun's range, hold still for a dwell, and fill the ring evenly: of 400 in a ring cut into 40 cells of
/// equal area none is left out and none has more than twice its share (a random draw would leave a cell under 3 or over 19
/// in most runs).
#[test]
fn a_survey_is_even_and_keeps_its_range() {
    let attitude = "{axis: 1 0 0, second_axis: 0 0 -1, survey: {sun_angle_from: 60 deg, sun_angle_to: 120 deg, dwell: 12 h, seed: 7}}";
    let s = with(attitude, "{lagrange: l2}");
    let mut cells = [0_u32; 40];
    for (target, sun) in pointings(&s, 400, DAY_S / 2.0) {
        let cos = target.dot(&sun);
        assert!(cos.abs() <= 0.5 + 1e-9, "{cos}");
        let east = ECLIPTIC_NORTH.cross(&sun).normalize();
        let about = target.dot(&sun.cross(&east)).atan2(target.dot(&east));
        let row = ((cos + 0.5) * 4.0).clamp(0.0, 3.999).floor();
        let column = ((about / std::f64::consts::TAU + 0.5) * 10.0).clamp(0.0, 9.999).floor();
        #[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "0 to 39")]
        let cell = (row * 10.0 + column) as usize;
        cells[cell] += 1;
    }
    assert!(cells.iter().all(|count| (5..=20).contains(count)), "{cells:?}");
    // Still within a dwell, elsewhere after it; another seed points elsewhere.
    assert!((at(&s, 100.0) * Vector3::x() - at(&s, 43_000.0) * Vector3::x()).norm() < 1e-12);
    assert!((at(&s, 100.0) * Vector3::x() - at(&s, 43_300.0) * Vector3::x()).norm() > 0.01);
    let other = with(&attitude.replace("seed: 7", "seed: 8"), "{lagrange: l2}");
    assert!((at(&s, 0.0) * Vector3::x() - at(&other, 0.0) * Vector3::x()).norm() > 0.01);
}

/// The shield, which fixes the rest, looks as near to the Sun as the pointing lets it: square to the pointed axis and in
/// the plane of it and the Sun, at the middle of the dwell.
#[test]
fn a_survey_turns_its_shield_to_the_sun() {
    let attitude = "{axis: 1 0 0, second_axis: 0 0 -1, survey: {sun_angle_from: 60 deg, sun_angle_to: 120 deg, dwell: 12 h}}";
    let s = with(attitude, "{lagrange: l2}");
    for k in 0..50 {
        let t = DAY_S / 2.0 * (f64::from(k) + 0.5);
        let sky = sky(&s, t);
        let sun = (sky.sun_m - sky.state.position_m).normalize();
        let (axis, shield) = (at(&s, t) * Vector3::x(), at(&s, t) * -Vector3::z());
        assert!(shield.dot(&sun) > 0.86, "within 30 deg of the Sun");
        assert!(shield.dot(&axis.cross(&sun)).abs() < 1e-9);
    }
}

/// Shares of a mix are shares of its period.
#[test]
fn a_mix_gives_each_part_its_share() {
    let s = with("{mix: {period: 1 d, of: [{share: 70 %}, {share: 30 %, axis: 0 0 1, to: sun}]}}", LOW);
    let looks_down = |t: f64| (at(&s, t) * Vector3::z() + sky(&s, t).state.position_m.normalize()).norm() < 1e-9;
    let count = (0..1000).filter(|k| looks_down(DAY_S * (10.0 + (f64::from(*k) + 0.5) / 1000.0))).count();
    assert_eq!(count, 700);
    assert!(matches!(s.mission.phases[0].attitude.law, Law::Mix(..)));
}

/// Where nadir passes through the Sun (at noon, with the Sun in the orbit plane) the second axis falls back to the orbit
/// normal: a proper rotation all the time.
#[test]
fn an_attitude_that_loses_its_second_direction_stays_defined() {
    let s = with("{second_axis: 1 0 0, towards: sun}", "{altitude: 700 km, inclination: 23.4 deg}");
    let phase = &s.mission.phases[0];
    for k in 0..20_000 {
        let r = at(&s, f64::from(k) * 30.0);
        assert!((r.matrix().determinant() - 1.0).abs() < 1e-9);
    }
    let Law::Pointing(pointing) = &phase.attitude.law else { panic!("a pointing") };
    let moment = phase.moment(s.mission.start, 0.0);
    let mut noon = moment.sky();
    noon.state.position_m = noon.sun_m.normalize() * noon.state.position_m.norm();
    assert!(!pointing.is_defined(&noon));
    let y = pointing.inertial_from_body(&noon) * Vector3::x();
    let normal = noon.direction(&Direction::OrbitNormal);
    assert!((y - (normal - noon.sun_m.normalize() * noon.sun_m.normalize().dot(&normal)).normalize()).norm() < 1e-9);
}
