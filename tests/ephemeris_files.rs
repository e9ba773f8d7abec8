//! Ephemeris files written by hand: instants, layouts and degrees that CCSDS 502.0-B allows; any text; large files.
#![allow(clippy::unwrap_used, reason = "a helper of a test fails by panicking")]

mod ephemeris_text;

use std::fmt::Write;
use std::time::{Duration, Instant};

use couplet::environment::{Ephemeris, Epoch};
use ephemeris_text::{GOOD, one_fault, read, segment, with_line};
use hifitime::TimeScale;
use proptest::prelude::*;

/// The start of a file whose first two epochs are these.
fn start_of(system: &str, first: &str, second: &str) -> Epoch {
    let text = GOOD.lines().take(8).flat_map(|line| [line, "\n"]).collect::<String>();
    let times = format!("TIME_SYSTEM = {system}\nSTART_TIME = {first}\nSTOP_TIME = {second}\nMETA_STOP\n");
    read(&format!("{text}{times}{first} 7000 0 0 0 7.5 0\n{second} 6999 450 0 -0.5 7.5 0\n")).start()
}

/// TAI − UTC after (and on the last second before) four leap seconds, from IERS Bulletin C 1998, 2005, 2016 and from 1972.
#[test]
fn leap_seconds_are_those_of_the_iers() {
    for (utc, offset_s) in [
        ("1972-01-01T00:00:00", 10.0),
        ("1998-12-31T23:59:59", 31.0),
        ("1999-01-01T00:00:00", 32.0),
        ("2005-12-31T23:59:59", 32.0),
        ("2006-001T00:00:00", 33.0),
        ("2016-366T23:59:59", 36.0),
        ("2017-01-01T00:00:00", 37.0),
    ] {
        let tt = |system: &str| start_of(system, utc, "2200-01-01T00:00:00").tt_seconds();
        assert!((tt("UTC") - tt("TAI") - offset_s).abs() < 1e-6, "{utc}");
        // GPS time was UTC in 1980, when TAI − UTC was 19 s; TT − TAI is 32.184 s by definition.
        assert!((tt("GPS") - tt("TAI") - 19.0).abs() < 1e-6 && (tt("TAI") - tt("TT") - 32.184).abs() < 1e-6, "{utc}");
    }
    // J2000.0 is 12:00 TT and 11:58:55.816 UTC (Seidelmann, Explanatory Supplement).
    for (system, text) in [("TT", "2000-01-01T12:00:00"), ("TDB", "2000-001T12:00:00Z"), ("UTC", "2000-01-01T11:58:55.816")] {
        assert!(start_of(system, text, "2000-01-02T00:00:00").tt_seconds().abs() < 1e-9, "{system}");
    }
}

/// The 60th second of 2016-12-31 is one of its own: points a second apart stay a second apart.
#[test]
fn a_leap_second_is_read_where_there_is_one() {
    let data = |last: &str| {
        let head =
            with_line(10, "START_TIME = 2016-12-31T23:59:58").replace("STOP_TIME = 2029-01-01T00:03:00", "STOP_TIME = 2017-01-01T00:00:00");
        let head: String = head.lines().take(12).flat_map(|line| [line, "\n"]).collect();
        format!(
            "{head}2016-12-31T23:59:58 1 2 3 4 5 6\n2016-12-31T23:59:59 1 2 3 4 5 6\n{last} 9 2 3 4 5 6\n2017-01-01T00:00:00 1 2 3 4 5 6\n"
        )
    };
    let leap = read(&data("2016-12-31T23:59:60"));
    assert!((leap.longest_step_s() - 1.0).abs() < 1e-6);
    assert!((leap.state(leap.start().plus_seconds(2.0)).position_m.x - 9000.0).abs() < 1e-3);
    assert!((read(&data("2016-12-31T23:59:60.5")).longest_step_s() - 1.5).abs() < 1e-6);
    one_fault(&data("2016-12-31T12:59:60"), "line 15: `2016-12-31T12:59:60` is no epoch: this minute has no leap second");
    one_fault(&data("2016-12-30T23:59:60"), "line 15: `2016-12-30T23:59:60` is no epoch: this minute has no leap second");
    one_fault(&with_line(9, "TIME_SYSTEM = TAI").replace("00:02:00", "23:59:60"), "line 15: `2029-01-01T23:59:60` is no epoch");
}

#[test]
fn only_the_two_forms_of_dates_are_read() {
    for text in [
        "2029-01-01T00:02",
        "2029-01-01T00",
        "2029-01-01",
        "2029-01-01T24:00:00",
        "2029-01-01T00:60:00",
        "2029-01-01T00:02:61",
        "2029-01-01T00:02:00+01:00",
        "2029-01-01T00:02:00[UTC]",
        "2029-01-01T00:02:00,5",
        "2029-01-01T00:02:00.-5",
        "2029-01-01T00:02:00.1e3",
        "2029-01-01T000200",
        "2029-01-01t00:02:00",
        "2029-1-1T00:02:00",
        "2029-02-29T00:02:00",
        "2029-13-01T00:02:00",
        "2029-000T00:02:00",
        "2029-366T00:02:00",
        "2029-+01T00:02:00",
        "+029-01-01T00:02:00",
        "2029-01-01-01T00:02:00",
        "1899-01-01T00:02:00",
        "2201-01-01T00:02:00",
        "２０２９-01-01T00:02:00",
        "T",
        "now",
    ] {
        one_fault(&with_line(15, &format!("{text} 6996 899 0 -1.0 7.4 0")), &format!("line 15: `{text}` is no epoch: "));
        one_fault(&with_line(10, &format!("USEABLE_STOP_TIME = {text}\nSTART_TIME = 2029-01-01T00:00:00")), "line 10: `");
    }
    // More digits than an epoch resolves, and a bare point.
    for text in ["2029-01-01T00:02:00.00000000000000000000000001", "2029-001T00:02:00.", "2029-001T00:02:00Z"] {
        assert!((read(&with_line(15, &format!("{text} 6996 899 0 -1.0 7.4 0"))).longest_step_s() - 60.0).abs() < 1e-6);
    }
}

/// Layout: byte order mark, CRLF, tabs, blank lines and comments anywhere, the keywords of version 3, accelerations, covariances.
#[test]
fn every_layout_gives_the_same_path() {
    let plain = read(GOOD);
    assert_eq!((plain.centre(), plain.object()), ("EARTH", "HERON"));
    assert!((plain.longest_step_s() - 60.0).abs() < 1e-6);
    let covariance = "COVARIANCE_START\nEPOCH = 2029-01-01T00:00:00\nCOV_REF_FRAME = RTN\n1\n2 3\nCOVARIANCE_STOP\n";
    let loose = GOOD.replace('\n', "\n\nCOMMENT between\n").replace(" = ", "\t=\t").replace(" 7.4 0\n", "\t\t7.4 0 \t\n");
    for text in [
        format!("\u{feff}{GOOD}"),
        GOOD.replace('\n', "\r\n"),
        GOOD.trim_end().to_owned(),
        GOOD.replace(" = ", "="),
        format!("\n  \nCOMMENT first\n{loose}\n\n"),
        GOOD.replace("2.0", "3.0")
            .replace("CREATION", "CLASSIFICATION = public\nCREATION")
            .replace("META_START", "MESSAGE_ID = 7\nMETA_START"),
        GOOD.replace("VERS = 2.0", "VERS = 1.0").replace("EARTH", " earth "),
        GOOD.replace("7.4 0\n", "7.4 0 1e-3 -2 +3.5E0\n"),
        format!("{GOOD}{covariance}"),
    ] {
        let got = read(&text);
        assert_eq!((got.centre(), got.object()), ("EARTH", "HERON"));
        for t in [0.0, 37.0, 150.0] {
            assert_eq!(got.state(got.start().plus_seconds(t)), plain.state(plain.start().plus_seconds(t)), "{text}");
        }
    }
    for frame in ["EME2000", "J2000", "ICRF", "GCRF", "gcrf"] {
        read(&with_line(8, &format!("REF_FRAME = {frame}")));
    }
}

/// x = (t/60)⁵ km at 0, 60, … 300 s, under a header that asks for this interpolation.
fn quintic(header: &str) -> f64 {
    let mut text: String = GOOD.lines().take(11).flat_map(|line| [line, "\n"]).collect();
    write!(text, "{header}\nMETA_STOP\n").unwrap();
    for k in 0..=5_u32 {
        let k5 = f64::from(k).powi(5);
        let slope = 5.0 * f64::from(k).powi(4) / 60.0;
        writeln!(text, "2029-01-01T00:0{k}:00 {k5} 7000 0 {slope} 7 0").unwrap();
    }
    let read = read(&text.replace("STOP_TIME = 2029-01-01T00:03:00", "STOP_TIME = 2029-01-01T00:05:00"));
    read.state(read.start().plus_seconds(150.0)).position_m.x
}

/// Two points (degree 3) give in the middle (x₂ + x₃)/2 + h (v₂ − v₃)/8; three and more give the quintic itself.
#[test]
fn the_degree_counts_for_hermite_only() {
    let (exact, cubic) = (2.5_f64.powi(5) * 1e3, f64::midpoint(32.0, 243.0) * 1e3 + (80.0 - 405.0) / 8.0 * 1e3);
    let near = |header: &str, expected: f64| {
        let got = quintic(header);
        // Divided differences of numbers up to 3e6 m lose a nanometre each.
        assert!((got - expected).abs() < 1e-5, "{header}: {got} is not {expected}");
    };
    near("COMMENT nothing stated", exact);
    near("INTERPOLATION = HERMITE", exact);
    for degree in [5, 7, 9, 11, 15, 400] {
        near(&format!("INTERPOLATION = HERMITE\nINTERPOLATION_DEGREE = {degree}"), exact);
    }
    for degree in [1, 2, 3] {
        near(&format!("INTERPOLATION = Hermite\nINTERPOLATION_DEGREE = {degree}"), cubic);
        near(&format!("INTERPOLATION = LAGRANGE\nINTERPOLATION_DEGREE = {degree}"), exact);
        near(&format!("INTERPOLATION_DEGREE = {degree}"), exact);
    }
}

/// Ten megabytes in under two seconds, whatever they hold: here it takes a tenth of one.
#[test]
fn ten_megabytes_are_read_in_linear_time() {
    const SIZE: usize = 10_000_000;
    let fill = |line: &str| line.repeat(SIZE / line.len());
    let head: String = GOOD.lines().take(12).flat_map(|line| [line, "\n"]).collect();
    let mut rows = head.replace("STOP_TIME = 2029-01-01T00:03:00", "STOP_TIME = 2029-12-31T00:00:00");
    rows = rows.replace("META_STOP", "USEABLE_STOP_TIME = 2029-01-02T00:00:00\nMETA_STOP");
    for k in 0..SIZE / 80 {
        let (day, time) = (1 + k / 1440, format!("{:02}:{:02}:00", k / 60 % 24, k % 60));
        writeln!(rows, "2029-{day:03}T{time} -7000.123456789 100.123456789 12.12345 1.123456 7.1234567 0.12").unwrap();
    }
    let many: String = (0..SIZE / 450).fold(GOOD.to_owned(), |text, _| text + &segment(0));
    for (text, good) in [
        (rows, true),
        (many, true),
        (head.clone() + &fill("2029-01-01T00:01:30 1 2 3 4 5 6\n"), false),
        (head.clone() + &fill("x "), false),
        (head.clone() + "2029-01-01T00:01:30 " + &fill("1") + " 2 3 4 5 6\n", false),
        (head.clone() + "2029-01-01T00:01:30." + &fill("1") + " 1 2 3 4 5 6\n", false),
        (GOOD.to_owned() + &fill("META_START\nMETA_STOP\n"), false),
        (GOOD.replace("META_STOP", &(fill("COMMENT\n") + "META_STOP")), true),
        (fill("\n"), false),
    ] {
        let begin = Instant::now();
        let answer = Ephemeris::parse(&text);
        let spent = begin.elapsed();
        assert_eq!(answer.is_ok(), good, "{:?}", answer.map(|_| ()));
        assert!(
            spent < Duration::from_secs(2),
            "{spent:?} for {} …",
            text.lines().nth(13).unwrap_or_default().get(..30).unwrap_or_default()
        );
    }
}

proptest! {
    /// Any instant of 1972 to 2026 in four time systems, against hifitime 4.3, which holds its own leap seconds.
    #[test]
    fn instants_are_those_of_hifitime(day in 0..20_000_u32, second in 0..86_400_u32, milli in 0..1000_u32) {
        let (year, of_year) = (1972 + day / 366, 1 + day % 365);
        let time = format!("{:02}:{:02}:{:02}.{milli:03}", second / 3600, second / 60 % 60, second % 60);
        let nanos = milli * 1_000_000;
        let clock = [second / 3600, second / 60 % 60, second % 60].map(|part| u8::try_from(part).unwrap());
        for (system, scale) in [("UTC", TimeScale::UTC), ("TAI", TimeScale::TAI), ("TT", TimeScale::TT), ("GPS", TimeScale::GPST)] {
            let first = hifitime::Epoch::maybe_from_gregorian(i32::try_from(year).unwrap(), 1, 1, 0, 0, 0, 0, scale).unwrap();
            // The date in the calendar of the scale: a number of its days of 86 400 s after 1 January, at noon to be safe.
            let date = (first.to_duration_in_time_scale(scale) + hifitime::Unit::Day * (i64::from(of_year) - 1)) + hifitime::Unit::Hour * 12;
            let (_, month, of_month, ..) = hifitime::Epoch::from_duration(date, scale).to_gregorian(scale);
            let [h, m, s] = clock;
            let year = i32::try_from(year).unwrap();
            let expected = hifitime::Epoch::maybe_from_gregorian(year, month, of_month, h, m, s, nanos, scale).unwrap();
            let expected_s = expected.to_tt_since_j2k().to_seconds();
            let calendar = start_of(system, &format!("{year}-{month:02}-{of_month:02}T{time}"), "2199-01-01T00:00:00");
            let ordinal = start_of(system, &format!("{year}-{of_year:03}T{time}Z"), "2199-01-01T00:00:00");
            prop_assert!((calendar.tt_seconds() - expected_s).abs() < 1e-6, "{system} {calendar} {expected}");
            prop_assert!((ordinal.tt_seconds() - expected_s).abs() < 1e-6, "{system} {ordinal} {expected}");
        }
    }

    /// A good file with pieces cut out, doubled and replaced: it is refused with lines that exist, or its states are finite.
    #[test]
    fn a_mutated_file_is_answered(
        edits in prop::collection::vec((0..1600_usize, 0..80_usize, "[ -~\n]{0,20}|\\PC{0,5}|-?[0-9]{1,400}e?[0-9]{0,3}|META_START\n|META_STOP\n"), 1..6),
        at in -1e4..1e4_f64,
    ) {
        let mut text = GOOD.to_owned() + &segment(3);
        for (from, length, with) in edits {
            let place = |at: usize| (0..=at.min(text.len())).rev().find(|k| text.is_char_boundary(*k)).unwrap();
            text.replace_range(place(from)..place(from + length), &with);
        }
        match Ephemeris::parse(&text) {
            Ok(read) => {
                let state = read.state(read.start().plus_seconds(at));
                prop_assert!(state.position_m.iter().chain(&state.velocity_m_per_s).all(|x| x.is_finite()), "{text}");
                prop_assert!(read.start() < read.stop() && read.longest_step_s() > 0.0);
            }
            Err(faults) => {
                let lines = text.lines().count().max(1);
                prop_assert!(!faults.is_empty() && faults.len() <= 50 && faults.iter().all(|fault| (1..=lines).contains(&fault.line)));
            }
        }
    }
}

/// No instant makes it panic.
#[test]
fn instants_that_are_no_numbers_are_answered() {
    let read = read(GOOD);
    for seconds in [f64::NAN, f64::INFINITY, f64::NEG_INFINITY, f64::MAX] {
        assert!(read.state(Epoch::from_tt_seconds(seconds)).position_m.iter().all(|x| x.is_finite()), "{seconds}");
    }
}
