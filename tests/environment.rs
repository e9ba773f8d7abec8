//! The environment against published figures and against properties any such model has.

use std::f64::consts::{PI, TAU};

use approx::{assert_abs_diff_eq, assert_relative_eq};
use couplet::environment::{
    Activity, Body, Elements, Epoch, Orbit, OrbitError, SOLAR_RADIUS_M, air_velocity_m_per_s, density_kg_per_m3, node_of_local_time,
    sun_of_date, sun_position_m, sun_synchronous_inclination, sunlit_fraction,
};
use nalgebra::Vector3;
use nrlmsise00::{Input, MagneticActivity, Model};

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

// ---- Time ----

#[test]
fn a_time_of_day_without_zone_is_refused_and_the_message_says_what_to_do() {
    assert!(Epoch::parse("2028-03-01T12:00:00").unwrap_err().to_string().contains("`Z`"));
    for wrong in ["", "2028-02-30", "next week", "2028-03-01T25:00:00Z", "20O8-01-01"] {
        assert!(Epoch::parse(wrong).is_err(), "{wrong}");
    }
}

#[test]
fn dates_read_as_utc_and_print_back() {
    assert_eq!(at("2028-03-01"), at("2028-03-01T00:00:00Z"));
    assert_eq!(at("2028-03-01T14:00:00+02:00"), at("2028-03-01T12:00:00Z"));
    for text in ["2028-03-01T12:00:00Z", "2016-12-31T23:59:59Z", "2000-01-01T00:00:00Z"] {
        assert_eq!(at(text).to_string(), text);
    }
}

// Source: IERS Bulletin C 52: a leap second at the end of 2016, and TT − UTC = 69.184 s after it.
#[test]
fn two_seconds_pass_over_the_leap_second_of_2016() {
    let span = at("2017-01-01T00:00:00Z").tt_seconds() - at("2016-12-31T23:59:59Z").tt_seconds();
    assert_abs_diff_eq!(span, 2.0, epsilon = 1e-6);
    // J2000.0 TT is 2000-01-01T11:58:55.816 UTC (Seidelmann, Explanatory Supplement; from memory).
    assert_abs_diff_eq!(at("2000-01-01T11:58:55.816Z").tt_seconds(), 0.0, epsilon = 1e-6);
}

#[test]
fn years_and_days_count_from_the_first_of_january() {
    assert_abs_diff_eq!(at("2028-01-01").decimal_year(), 2028.0, epsilon = 1e-9);
    // 2028 is a leap year: 1 March is day 61, and 2 July 00:00 its middle.
    assert_abs_diff_eq!(at("2028-07-02").decimal_year(), 2028.5, epsilon = 1e-9);
    let (day, second) = at("2028-03-01T12:00:30.5Z").day_of_year_and_ut_seconds();
    assert_abs_diff_eq!(day, 61.0, epsilon = 1e-9);
    assert_abs_diff_eq!(second, 43_230.5, epsilon = 1e-6);
    assert!(Epoch::from_tt_seconds(1e15).decimal_year().is_nan());
}

// ---- Sun ----

// Source: Meeus, Astronomical Algorithms, 2nd ed., example 25.a: 1992 October 13.0 TD. Its figures have five decimals.
#[test]
fn the_sun_of_the_worked_example() {
    let sun = sun_of_date(Epoch::from_tt_seconds((2_448_908.5 - 2_451_545.0) * 86_400.0));
    assert_abs_diff_eq!(sun.apparent_right_ascension_rad.to_degrees(), 198.380_83 - 360.0, epsilon = 1e-5);
    assert_abs_diff_eq!(sun.apparent_declination_rad.to_degrees(), -7.785_07, epsilon = 1e-5);
    // From memory: true longitude 199.90988°, distance 0.99766 au.
    assert_abs_diff_eq!(sun.true_longitude_rad.to_degrees(), 199.909_88, epsilon = 2e-5);
    assert_abs_diff_eq!(sun.distance_m / AU, 0.997_66, epsilon = 5e-6);
}

// ---- Orbit ----

// Source: Curtis, Orbital Mechanics for Engineering Students, 2nd ed., example 4.8 (from memory); its constants are rounder.
#[test]
fn node_and_perigee_drift_of_the_worked_example() {
    let (perigee, apogee) = (6_378e3 + 280e3, 6_378e3 + 400e3);
    let orbit =
        Orbit::new(elements(0.5 * (perigee + apogee), (apogee - perigee) / (apogee + perigee), 51.43), at("2028-01-01"), Body::EARTH);
    let orbit = orbit.unwrap();
    assert_relative_eq!(orbit.node_rate_rad_per_s(), -1.0465e-6, max_relative = 2e-4);
    assert_relative_eq!(orbit.perigee_rate_rad_per_s(), 7.9193e-7, max_relative = 2e-4);
}

// Source: the same, example 4.7: 758.63 km and 98.43°. Its rate is that of the same year to 1e-4.
#[test]
fn sun_synchronous_inclinations() {
    let inclination = |km: f64| sun_synchronous_inclination(RADIUS + km * 1e3, 0.0, &Body::EARTH).unwrap().to_degrees();
    assert_abs_diff_eq!(inclination(758.63), 98.43, epsilon = 0.005);
    // Published for Earth observation at 705 km: 98.2° and 98.9 min.
    assert_abs_diff_eq!(inclination(705.0), 98.2, epsilon = 0.05);
    let orbit = Orbit::new(elements(RADIUS + 705e3, 0.0, 98.2), at("2028-01-01"), Body::EARTH).unwrap();
    assert_abs_diff_eq!(orbit.period_s() / 60.0, 98.9, epsilon = 0.05);
    assert!(sun_synchronous_inclination(RADIUS + 7.0e6, 0.0, &Body::EARTH).is_none());
    assert!(sun_synchronous_inclination(f64::NAN, 0.0, &Body::EARTH).is_none());
}

// Source: the Landsat 8 ground track repeats after 233 turns in 16 days, from a mean semi-major axis of 7077.7 km at 98.2°
// (USGS Landsat 8 Data Users Handbook; from memory). 0.1 km of axis is 0.13 s.
#[test]
fn the_nodal_period_of_a_repeating_ground_track() {
    let start = at("2028-01-01");
    let orbit = Orbit::new(elements(7_077.7e3, 0.0, 98.2), start, Body::EARTH).unwrap();
    assert_abs_diff_eq!(orbit.nodal_period_s(), 16.0 * 86_400.0 / 233.0, epsilon = 0.3);
    // And the motion keeps to it: a hundred turns later the spacecraft is at the same height over the equator.
    let later = orbit.state(start.plus_seconds(100.0 * orbit.nodal_period_s()));
    assert_abs_diff_eq!(later.position_m.z, orbit.state(start).position_m.z, epsilon = 1.0);
}

// Source: the secular rate of the mean anomaly has the factor 3 cos² i − 1 (Kozai 1959; from memory), which is zero at 54.7356°.
#[test]
fn the_mean_anomaly_does_not_drift_at_the_inclination_where_it_cannot() {
    let start = at("2028-01-01");
    let orbit = Orbit::new(elements(8e6, 0.1, 54.735_610_3), start, Body::EARTH).unwrap();
    let later = orbit.state(start.plus_seconds(500.0 * orbit.period_s()));
    // J2 at another inclination would move it by up to 500 · 2π · 1e-3 rad.
    assert_abs_diff_eq!(later.position_m.norm(), orbit.state(start).position_m.norm(), epsilon = 1.0);
}

#[test]
fn a_sun_synchronous_orbit_keeps_its_local_time_for_a_year() {
    let start = at("2028-03-01T12:00:00Z");
    let axis = RADIUS + 600e3;
    let shape = Elements {
        inclination_rad: sun_synchronous_inclination(axis, 0.0, &Body::EARTH).unwrap(),
        ascending_node_rad: node_of_local_time(start, 10.5),
        ..elements(axis, 0.0, 0.0)
    };
    let orbit = Orbit::new(shape, start, Body::EARTH).unwrap();
    let end = start.plus_seconds(365.0 * 86_400.0);
    let node = shape.ascending_node_rad + orbit.node_rate_rad_per_s() * 365.0 * 86_400.0;
    let off = (node - node_of_local_time(end, 10.5) + PI).rem_euclid(TAU) - PI;
    // Precession of the frame is 0.014° a year, the tolerance ten times that, 2 s of local time.
    assert_abs_diff_eq!(off.to_degrees(), 0.0, epsilon = 0.15);
}

#[test]
fn the_noon_node_faces_the_sun_within_the_equation_of_time() {
    for month in 1..=12 {
        let epoch = at(&format!("2030-{month:02}-11T08:00:00Z"));
        let sun = sun_position_m(epoch);
        let off = (sun.y.atan2(sun.x) - node_of_local_time(epoch, 12.0) + PI).rem_euclid(TAU) - PI;
        // The equation of time stays within 16.5 minutes, 4.2°.
        assert!(off.to_degrees().abs() < 4.2, "{month}: {}", off.to_degrees());
    }
}

#[test]
fn impossible_orbits_are_refused() {
    let new = |e| Orbit::new(e, at("2028-01-01"), Body::EARTH).map(|_| ());
    assert!(matches!(new(elements(8e6, 1.0, 0.0)), Err(OrbitError::Eccentricity { .. })));
    assert!(matches!(new(elements(8e6, -0.1, 0.0)), Err(OrbitError::Eccentricity { .. })));
    assert!(matches!(new(elements(RADIUS, 0.0, 0.0)), Err(OrbitError::PerigeeTooLow { .. })));
    assert!(matches!(new(elements(-8e6, 0.0, 0.0)), Err(OrbitError::PerigeeTooLow { .. })));
    assert!(matches!(new(elements(f64::NAN, 0.0, 0.0)), Err(OrbitError::NotFinite { .. })));
    assert!(matches!(new(elements(8e6, f64::INFINITY, 0.0)), Err(OrbitError::NotFinite { .. })));
}

// ---- Shadow ----

/// Share of an orbit in shadow, and in full shadow, of a circular orbit whose plane makes `beta_deg` with the Sun.
fn shadow_shares(radius_m: f64, beta_deg: f64) -> (f64, f64) {
    let (count, (sb, cb)) = (200_000, beta_deg.to_radians().sin_cos());
    let sun = Vector3::new(cb, 0.0, sb) * AU;
    let (mut lit, mut dark) = (0.0, 0.0);
    for k in 0..count {
        let angle = TAU * f64::from(k) / f64::from(count);
        let share = sunlit_fraction(&(Vector3::new(angle.cos(), angle.sin(), 0.0) * radius_m), &sun, RADIUS);
        lit += share;
        dark += if share <= 0.0 { 1.0 } else { 0.0 };
    }
    (1.0 - lit / f64::from(count), dark / f64::from(count))
}

// Source: closed form of the cylindrical shadow, derived in the checks of this project. The mean light of the penumbra
// equals a sharp edge to second order in the Sun's radius (0.0047): 2e-4 of an orbit.
#[test]
fn eclipse_fractions_of_circular_orbits() {
    for (km, beta, fraction) in [
        (400.0, 0.0, 0.39010),
        (500.0, 0.0, 0.37788),
        (700.0, 0.0, 0.35724),
        (700.0, 30.0, 0.33308),
        (800.0, 0.0, 0.34829),
        (35_786.0, 0.0, 0.04834),
    ] {
        assert_abs_diff_eq!(shadow_shares(RADIUS + km * 1e3, beta).0, fraction, epsilon = 2e-4);
    }
    // No eclipse from beta = asin(R / (R + h)) on: 64.3° at 700 km; the penumbra adds 0.3°.
    assert_abs_diff_eq!(shadow_shares(RADIUS + 700e3, 65.0).0, 0.0, epsilon = 1e-12);
    assert!(shadow_shares(RADIUS + 700e3, 63.5).0 > 0.0);
}

// Source: derived in the checks of this project: 67.29 min of umbra in a day of 1436.067 min; "about 70 to 72 min" with
// penumbra is published.
#[test]
fn the_umbra_at_geostationary_height() {
    let (_, umbra) = shadow_shares(42_164e3, 0.0);
    assert_abs_diff_eq!(umbra * 1436.067, 67.29, epsilon = 0.05);
    let sun = Vector3::new(AU, 0.0, 0.0);
    let touched = |minutes: f64| {
        let angle = PI - TAU * 0.5 * minutes / 1436.067;
        sunlit_fraction(&(Vector3::new(angle.cos(), angle.sin(), 0.0) * 42_164e3), &sun, RADIUS) < 1.0
    };
    assert!(touched(71.4) && !touched(71.7));
}

#[test]
fn behind_the_tip_of_the_umbra_a_ring_stays_visible() {
    // The umbra ends at R / sin(half angle) with the half angle (Rs − R)/AU: 1.38 million km. At twice that the body covers
    // a quarter of the disc (to the 1 % by which the Sun is farther).
    let tip = RADIUS * AU / (SOLAR_RADIUS_M - RADIUS);
    let share = sunlit_fraction(&Vector3::new(-2.0 * tip, 0.0, 0.0), &Vector3::new(AU, 0.0, 0.0), RADIUS);
    assert_abs_diff_eq!(share, 0.75, epsilon = 0.01);
    assert_abs_diff_eq!(sunlit_fraction(&Vector3::new(-0.9 * tip, 0.0, 0.0), &Vector3::new(AU, 0.0, 0.0), RADIUS), 0.0, epsilon = 1e-12);
}

// ---- Air ----

// Source: the ten test cases published with NRLMSISE-00 (gtd7, g/cm³ there), all seven digits, and five rows
// below 100 km, whose temperatures are from memory.
#[test]
fn the_atmosphere_model_gives_its_official_cases() {
    let base = || Input {
        day_of_year: 172,
        seconds_of_day: 29_000.0,
        altitude_km: 400.0,
        latitude_deg: 60.0,
        longitude_deg: -70.0,
        local_solar_time_h: 16.0,
        f107_average: 150.0,
        f107: 150.0,
        magnetic: MagneticActivity::Daily { ap: 4.0 },
    };
    let cases = [
        (base(), 4.074_714e-12, 1250.540, 1241.416),
        (Input { day_of_year: 81, ..base() }, 5.001_846e-12, 1166.754, 1161.710),
        (Input { seconds_of_day: 75_000.0, altitude_km: 1000.0, ..base() }, 2.756_772e-15, 1239.892, 1239.891),
        (Input { altitude_km: 100.0, ..base() }, 3.584_426e-7, 1027.318, 206.8878),
        (Input { latitude_deg: 0.0, ..base() }, 4.809_630e-12, 1212.396, 1208.135),
        (Input { longitude_deg: 0.0, ..base() }, 4.355_866e-12, 1220.146, 1212.712),
        (Input { local_solar_time_h: 4.0, ..base() }, 2.470_651e-12, 1116.385, 1112.999),
        (Input { f107_average: 70.0, ..base() }, 1.571_889e-12, 1031.247, 1024.848),
        (Input { f107: 180.0, ..base() }, 4.564_420e-12, 1306.052, 1293.374),
        (Input { magnetic: MagneticActivity::Daily { ap: 40.0 }, ..base() }, 4.974_543e-12, 1361.868, 1347.389),
        (Input { altitude_km: 0.0, ..base() }, 1.261_066, 1027.318, 281.4648),
        (Input { altitude_km: 10.0, ..base() }, 4.059_139e-1, 1027.318, 227.4180),
        (Input { altitude_km: 30.0, ..base() }, 1.950_822e-2, 1027.318, 237.4389),
        (Input { altitude_km: 50.0, ..base() }, 1.294_709e-3, 1027.318, 279.5551),
        (Input { altitude_km: 70.0, ..base() }, 1.147_668e-4, 1027.318, 219.0732),
    ];
    for (input, density, exosphere, temperature) in cases {
        let output = Model::new().gtd7(&input);
        assert_relative_eq!(output.total_mass, density, max_relative = 3e-7);
        assert_relative_eq!(output.exospheric_temperature, exosphere, max_relative = 1e-6);
        assert_relative_eq!(output.temperature, temperature, max_relative = 1e-6);
    }
}

#[test]
fn density_ends_at_its_ceiling_and_takes_any_number() {
    let epoch = at("2028-06-01T10:00:00Z");
    let density = |position: Vector3<f64>| density_kg_per_m3(epoch, &position, &Activity::MODERATE);
    assert!(density(Vector3::new(RADIUS + 1.49e6, 0.0, 0.0)) > 0.0);
    for nothing in [Vector3::new(42_164e3, 0.0, 0.0), Vector3::new(RADIUS + 1.51e6, 0.0, 0.0), Vector3::new(f64::NAN, 0.0, 0.0)] {
        assert!(density(nothing) <= 0.0);
    }
    // A fault of the model must not pass for no air.
    let fault = Activity { f107: f64::NAN, ..Activity::MODERATE };
    assert!(density_kg_per_m3(epoch, &Vector3::new(6.8e6, 0.0, 0.0), &fault).is_nan());
    assert!(density(Vector3::zeros()).is_finite());
    assert!(density_kg_per_m3(Epoch::from_tt_seconds(f64::INFINITY), &Vector3::new(6.8e6, 0.0, 0.0), &Activity::LOW) <= 0.0);
}

#[test]
fn activity_follows_the_flux() {
    for level in [Activity::LOW, Activity::MODERATE, Activity::HIGH] {
        let same = Activity::from_f107(level.f107);
        assert_abs_diff_eq!(same.ap, level.ap, epsilon = 1e-12);
    }
    assert_abs_diff_eq!(Activity::from_f107(195.0).ap, 30.0, epsilon = 1e-12);
    assert_abs_diff_eq!(Activity::from_f107(400.0).ap, 45.0, epsilon = 1e-12);
    assert_abs_diff_eq!(Activity::from_f107(40.0).ap, 0.0, epsilon = 1e-12);
}

// Source: from memory, the ground of the equator moves east at 465.1 m/s.
#[test]
fn air_turns_east_with_the_ground() {
    let velocity = air_velocity_m_per_s(&Vector3::new(RADIUS, 0.0, 1e6), &Body::EARTH);
    assert_abs_diff_eq!(velocity, Vector3::new(0.0, 465.1, 0.0), epsilon = 0.05);
}
