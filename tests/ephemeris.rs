//! Ephemeris files: instants and numbers as written, interpolation against two-body motion, and every fault at its line.
#![allow(clippy::unwrap_used, reason = "a helper of a test fails by panicking")]

use std::fmt::Write;

use couplet::config::{Document, read};
use couplet::environment::{Body, Elements, Ephemeris, Epoch, Orbit};
use couplet::mission::{Margin, Scenario};
use proptest::prelude::*;

fn two_body(semi_major_axis_m: f64, eccentricity: f64) -> Orbit {
    let elements = Elements { semi_major_axis_m, eccentricity, inclination_rad: 0.9, argument_of_perigee_rad: 1.1, ..Elements::default() };
    Orbit::new(elements, Epoch::parse("2029-01-01").unwrap(), Body { j2: 0.0, ..Body::EARTH }).unwrap()
}

const HEAD: &str = "CCSDS_OEM_VERS = 2.0
CREATION_DATE = 2028-11-30T00:00:00
ORIGINATOR = NOBODY
";

fn meta(start: &str, stop: &str) -> String {
    format!(
        "META_START
OBJECT_NAME = HERON
OBJECT_ID = 2029-001A
CENTER_NAME = EARTH
REF_FRAME = EME2000
TIME_SYSTEM = UTC
START_TIME = {start}
STOP_TIME = {stop}
META_STOP
"
    )
}

/// Seconds of 2029-01-01 as a calendar.
fn clock(seconds: u32) -> String {
    format!("2029-01-{:02}T{:02}:{:02}:{:02}.000", 1 + seconds / 86_400, seconds / 3600 % 24, seconds / 60 % 60, seconds % 60)
}

fn data(orbit: &Orbit, from: u32, to: u32, step: u32) -> String {
    let mut text = String::new();
    for t in (from..=to).step_by(step as usize) {
        let state = orbit.state(Epoch::parse("2029-01-01").unwrap().plus_seconds(f64::from(t)));
        let (r, v) = (state.position_m / 1e3, state.velocity_m_per_s / 1e3);
        writeln!(text, "{} {:.9} {:.9} {:.9} {:.12} {:.12} {:.12}", clock(t), r.x, r.y, r.z, v.x, v.y, v.z).unwrap();
    }
    text
}

fn file(orbit: &Orbit, to: u32, step: u32) -> String {
    format!("{HEAD}{}{}", meta(&clock(0), &clock(to)), data(orbit, 0, to, step))
}

/// Largest error of position and velocity between the points, m and m/s.
fn errors(orbit: &Orbit, to: u32, step: u32) -> (f64, f64) {
    let ephemeris = Ephemeris::parse(&file(orbit, to, step)).unwrap();
    let mut worst = (0.0_f64, 0.0_f64);
    for k in 0..2000 {
        let epoch = ephemeris.start().plus_seconds(f64::from(to) * (f64::from(k) + 0.37) / 2000.0);
        let (got, expected) = (ephemeris.state(epoch), orbit.state(epoch));
        worst.0 = worst.0.max((got.position_m - expected.position_m).norm());
        worst.1 = worst.1.max((got.velocity_m_per_s - expected.velocity_m_per_s).norm());
    }
    worst
}

/// Degree 7 between points: the error of Hermite's formula is f⁽⁸⁾/8! × Π(t − tₖ)² ≤ a n⁸ h⁸ × 0.32/40320 in the middle interval of
/// four points and some three times that in the first and last. On the circles that is below a tenth of a micrometre; what remains is
/// the file's digits, 1 µm, and the resolution of an epoch, 0.06 µs at 7.5 km/s or 0.5 mm.
///
/// The ellipse passes its perigee in the first interval. Kepler's motion is singular in complex time, as (1 − t/τ)^⅔, at
/// n τ = ±i (arcosh(1/e) − √(1 − e²)): 2050 s for e = 0.6. Its eighth coefficient is of the order 2 a |C(⅔, 8)|/τ⁸ with C = 0.0084, so
/// that the error at 300 s is about a (300/2050)⁸ × 0.017 = 0.09 m times a factor of one to two, and its slope some four times that
/// in 300 s.
#[test]
fn interpolation_against_two_body_motion() {
    let (position, velocity) = errors(&two_body(7.078e6, 0.0), 12_000, 60);
    assert!(position < 1e-3 && velocity < 1e-5, "{position} {velocity}");
    let (position, velocity) = errors(&two_body(42.164e6, 0.0), 172_800, 600);
    assert!(position < 1e-3 && velocity < 1e-6, "{position} {velocity}");
    let (position, velocity) = errors(&two_body(26.6e6, 0.6), 86_400, 300);
    assert!(position < 0.2 && velocity < 3e-3, "{position} {velocity}");
}

/// The derivative of the polynomial is nearer to two-body motion than Lagrange's polynomial through the same four velocities, whose
/// error n⁴ h⁴/4! × 0.41 v is 0.2 mm/s for a geostationary orbit at 600 s.
#[test]
fn velocity_is_better_than_velocities_interpolated() {
    let orbit = two_body(42.164e6, 0.0);
    let ephemeris = Ephemeris::parse(&file(&orbit, 6000, 600)).unwrap();
    let at = |steps: f64| ephemeris.start().plus_seconds(600.0 * steps);
    // A quarter into the interval between the second and third of four points: Π (s − j)/(k − j).
    let weights = [-7.0, 105.0, 35.0, -5.0].map(|weight: f64| weight / 128.0);
    let lagrange =
        (3..7).zip(weights).map(|(k, weight)| orbit.state(at(f64::from(k))).velocity_m_per_s * weight).sum::<nalgebra::Vector3<f64>>();
    let expected = orbit.state(at(4.25)).velocity_m_per_s;
    let derivative = (ephemeris.state(at(4.25)).velocity_m_per_s - expected).norm();
    assert!((lagrange - expected).norm() > 1e-4 && derivative < 1e-7, "{lagrange:?} {derivative}");
}

fn small(system: &str, first: &str, second: &str) -> Ephemeris {
    let head = meta(first, second).replace("TIME_SYSTEM = UTC", &format!("TIME_SYSTEM = {system}"));
    let text = format!("{HEAD}{head}{first} 7000 0 0 0 7.5 0\r\n\r\nCOMMENT between\n{second}\t6999 450 0 -0.5 7.5 0 0 0 0\n");
    Ephemeris::parse(&text).unwrap()
}

/// The same instant in every time system: TAI − UTC is 37 s from 2017 (IERS Bulletin C), TT − TAI 32.184 s, TAI − GPS 19 s.
#[test]
fn time_systems_and_forms_of_dates() {
    let utc = small("UTC", "2029-03-01T12:00:00.25Z", "2029-03-01T12:01:00.25").start();
    for (system, first) in [
        ("UTC", "2029-060T12:00:00.25"),
        ("TAI", "2029-03-01T12:00:37.25"),
        ("TT", "2029-03-01T12:01:09.434"),
        ("TDB", "2029-060T12:01:09.434"),
        ("GPS", "2029-03-01T12:00:18.25"),
    ] {
        let start = small(system, first, "2029-03-01T12:02:00").start();
        assert!((start.tt_seconds() - utc.tt_seconds()).abs() < 1e-6, "{system}");
    }
    let read = small("UTC", "2029-03-01T12:00:00", "2029-03-01T12:01:00");
    assert_eq!((read.centre(), read.object()), ("EARTH", "HERON"));
    let state = read.state(read.start());
    assert!((state.position_m.x - 7.0e6).abs() < 1e-6 && (state.velocity_m_per_s.y - 7500.0).abs() < 1e-9);
    // Outside its span the nearest end.
    assert_eq!(read.state(read.stop().plus_seconds(1e6)), read.state(read.stop()));
}

/// Two segments that share an end point: each has its own polynomial.
#[test]
fn segments_that_follow_one_another() {
    let (first, second) = (two_body(7.078e6, 0.0), two_body(7.2e6, 0.01));
    let text = format!(
        "{HEAD}{}{}{}{}",
        meta(&clock(0), &clock(3600)),
        data(&first, 0, 3600, 60),
        meta(&clock(3600), &clock(7200)),
        data(&second, 3600, 7200, 60)
    );
    let both = Ephemeris::parse(&text).unwrap();
    let at = |t: f64| both.start().plus_seconds(t);
    assert!((both.state(at(3599.0)).position_m - first.state(at(3599.0)).position_m).norm() < 1e-2);
    assert!((both.state(at(3601.0)).position_m - second.state(at(3601.0)).position_m).norm() < 1e-2);
    assert!((both.stop().tt_seconds() - both.start().tt_seconds() - 7200.0).abs() < 1e-9);
}

/// The lines of a text whose index is wanted.
fn lines_of(text: &str, wanted: impl Fn(usize) -> bool) -> String {
    text.lines().enumerate().filter(|(k, _)| wanted(*k)).flat_map(|(_, line)| [line, "\n"]).collect()
}

fn first_fault(text: &str) -> String {
    let faults = Ephemeris::parse(text).unwrap_err();
    assert!(faults.iter().all(|fault| !fault.help.is_empty() && fault.line >= 1));
    faults[0].to_string()
}

/// Every fault with its line. Lines: 3 of the head, 9 of the header, then the data from line 13.
#[test]
fn faults_are_told_with_their_line() {
    let orbit = two_body(7.078e6, 0.0);
    let good = file(&orbit, 600, 60);
    assert!(Ephemeris::parse(&good).is_ok());
    let line = |n: usize| good.lines().nth(n - 1).unwrap().to_owned();
    let swap = |from: &str, to: &str| first_fault(&good.replacen(from, to, 1));
    let begins = |got: String, expected: &str| assert!(got.starts_with(expected), "{got}\nexpected {expected}");
    begins(first_fault(""), "line 1: the file has no segment");
    begins(swap("CCSDS_OEM_VERS = 2.0", "CCSDS_OEM_VERS = 7"), "line 1: expected version 1.0, 2.0 or 3.0, got `7`");
    begins(first_fault("<?xml version=\"1.0\"?>\n<oem/>"), "line 1: expected `CCSDS_OEM_VERS`, got `<?xml");
    begins(swap("REF_FRAME = EME2000", "REF_FRAME = ITRF2000"), "line 8: expected one of the frames EME2000");
    begins(swap("TIME_SYSTEM = UTC", "TIME_SYSTEM = MET"), "line 9: expected one of the time systems UTC");
    begins(swap("CENTER_NAME = EARTH\n", ""), "line 4: the header has no `CENTER_NAME`");
    begins(swap(&line(14), &line(13)), "line 14: the epochs do not rise");
    begins(swap(&line(16), &line(18)), "line 17: the epochs do not rise");
    begins(swap(&line(15), "2029-02-30T00:00:00 1 2 3 4 5 6"), "line 15: `2029-02-30T00:00:00` is no epoch");
    begins(swap(&line(15), &line(15).replace(' ', " nan")), "line 15: `nan");
    begins(swap(&line(15), &format!("{} 1", line(15))), "line 15: expected an epoch and 6 numbers");
    begins(swap(&line(23), "2029-01-02T00:00:00 1 2 3 4 5 6"), "line 23: 2029-01-02T00:00:00Z lies outside the segment's span");
    begins(swap(&format!("STOP_TIME = {}", clock(600)), &format!("STOP_TIME = {}", clock(900))), "line 4: the data, ");
    begins(first_fault(&lines_of(&good, |k| k < 13)), "line 4: the segment has 1 line of data");
    begins(first_fault(&lines_of(&good, |k| k < 8)), "line 8: the file ends within a header");
    // An hour at a minute's step of which ten minutes are missing.
    let whole = file(&orbit, 3600, 60);
    let holed = lines_of(&whole, |k| !(30..40).contains(&k));
    begins(first_fault(&holed), "line 31: a gap of 660 s within a segment: 2029-01-01T00:17:00Z to 2029-01-01T00:28:00Z");
    let joined = |from: u32| {
        let second = meta(&clock(from), &clock(from + 600)) + &data(&orbit, from, from + 600, 60);
        first_fault(&format!("{good}{second}"))
    };
    begins(joined(900), "line 24: a gap of 300.000 s between segments: 2029-01-01T00:10:00Z to 2029-01-01T00:15:00Z");
    let early = format!(
        "{HEAD}{}{}{}{}",
        meta(&clock(900), &clock(1500)),
        data(&orbit, 900, 1500, 60),
        meta(&clock(0), &clock(900)),
        data(&orbit, 0, 900, 60)
    );
    begins(first_fault(&early), "line 24: the segments are out of order");
    let other = format!("{good}{}{}", meta(&clock(600), &clock(1200)).replace("EARTH", "MARS"), data(&orbit, 600, 1200, 60));
    begins(first_fault(&other), "line 27: the centre changes from `EARTH` to `MARS`");
}

/// In a configuration: a file that is missing, too short for the mission or about another body is a fault of
/// `mission.orbit.ephemeris`; a good one is flown.
#[test]
fn an_ephemeris_in_a_configuration() {
    let folder = tempfile::tempdir().unwrap();
    std::fs::write(folder.path().join("path.oem"), file(&two_body(7.078e6, 0.0), 345_600, 120)).unwrap();
    let none: &[(&str, &str)] = &[];
    let try_it = |orbit: &str, days: u32| {
        let settings = [
            format!("mission.orbit={orbit}"),
            "mission.start=2029-01-01".to_owned(),
            format!("mission.phases=[{{name: only, duration: {days} d, unload: {{every: 1 d}}}}]"),
        ];
        let document = Document::from_text("test.yaml", include_str!("../configs/heron.yaml"), none, &settings).unwrap();
        Scenario::in_folder(&read(&document).unwrap(), folder.path()).map_err(|faults| faults[0].message.clone())
    };
    let flown = try_it("{ephemeris: path.oem}", 4).unwrap();
    let period = flown.mission.phases[0].trajectory.revolution_s().unwrap();
    // 2π √(a³/μ).
    assert!((period - 5926.2).abs() < 0.1, "{period}");
    let plan = couplet::lifetime::Plan::new(flown, couplet::momentum::Resolution::Full, Margin::NONE).unwrap();
    assert!(plan.fly(plan.nominal()).attitude_total_kg() > 1e-3);
    let fault = |orbit: &str, days: u32| try_it(orbit, days).unwrap_err();
    assert!(fault("{ephemeris: path.oem}", 5).contains("covers 2029-01-01T00:00:00Z to 2029-01-05T00:00:00Z, but the phase lasts"));
    assert!(fault("{ephemeris: other.oem}", 4).contains("cannot read"));
    assert!(fault("{about: mars, ephemeris: path.oem}", 4).contains("count from EARTH, not from Mars"));
    assert!(fault("{altitude: 700 km, ephemeris: path.oem}", 4).contains("goes without another way"));
}

proptest! {
    /// No text makes it panic: any text, and a good file with a piece cut out, doubled or replaced.
    #[test]
    fn any_text_is_answered(text in ".{0,400}", cut in 0_usize..2000, length in 0_usize..200, with in "[ -~\n]{0,60}") {
        let _ = Ephemeris::parse(&text);
        let _ = Ephemeris::parse(&format!("{HEAD}{text}"));
        let good = file(&two_body(7.078e6, 0.0), 600, 60);
        let from = cut.min(good.len());
        let to = (from + length).min(good.len());
        let mut mutated = good.clone();
        mutated.replace_range(from..to, &with);
        if let Ok(read) = Ephemeris::parse(&mutated) {
            let _ = read.state(read.start().plus_seconds(30.0));
        }
    }
}

/// The same path as elements and as a file gathers the same momentum, within 1 %: steps are divided by the osculating period in
/// place of the nodal one (errors of a third of a percent each), and the file's velocities follow the ellipse without its drift.
#[test]
fn an_orbit_and_its_ephemeris_gather_the_same_momentum() {
    let elements = "mission.orbit={altitude: 700 km, inclination: 98 deg, ascending_node: 30 deg}";
    let start = "mission.start=2029-01-01";
    let phases = "mission.phases=[{name: only, duration: 4 d, unload: {every: 1 d}}]";
    let none: &[(&str, &str)] = &[];
    let made = |orbit: &str, folder: &std::path::Path| {
        let document = Document::from_text("test.yaml", include_str!("../configs/heron.yaml"), none, &[orbit, start, phases]).unwrap();
        Scenario::in_folder(&read(&document).unwrap(), folder).unwrap()
    };
    let folder = tempfile::tempdir().unwrap();
    let by_elements = made(elements, folder.path());
    let path = by_elements.mission.phases[0].trajectory.clone();
    let mut text = format!("{HEAD}{}", meta(&clock(0), &clock(345_600)));
    for t in (0..=345_600_u32).step_by(60) {
        let state = path.state(by_elements.mission.start.plus_seconds(f64::from(t)));
        let (r, v) = (state.position_m / 1e3, state.velocity_m_per_s / 1e3);
        writeln!(text, "{} {:.9} {:.9} {:.9} {:.12} {:.12} {:.12}", clock(t), r.x, r.y, r.z, v.x, v.y, v.z).unwrap();
    }
    std::fs::write(folder.path().join("path.oem"), text).unwrap();
    let by_file = made("mission.orbit={ephemeris: path.oem}", folder.path());
    let secular = |scenario: Scenario| {
        let plan = couplet::lifetime::Plan::new(scenario, couplet::momentum::Resolution::Full, Margin::NONE).unwrap();
        plan.summary()[0].secular_n_m_s_per_day
    };
    let (a, b) = (secular(by_elements), secular(by_file));
    assert!((a - b).norm() < 0.01 * a.norm(), "{a:?} {b:?}");
}
