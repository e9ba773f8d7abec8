//! What CCSDS 502.0-B does not allow in an ephemeris file is a fault at its line, and segments must go together.
#![allow(clippy::unwrap_used, reason = "a helper of a test fails by panicking")]

mod ephemeris_text;

use ephemeris_text::{GOOD, faults, one_fault, read, segment, with_line};

#[test]
fn what_is_missing_is_told_with_its_line() {
    for (line, key, fault_line) in [
        (2, "CREATION_DATE", "line 1: the head of the file has no"),
        (3, "ORIGINATOR", "line 1: the head of the file has no"),
        (5, "OBJECT_NAME", "line 4: the header has no"),
        (6, "OBJECT_ID", "line 4: the header has no"),
        (7, "CENTER_NAME", "line 4: the header has no"),
        (8, "REF_FRAME", "line 4: the header has no"),
        (9, "TIME_SYSTEM", "line 4: the header has no"),
        (10, "START_TIME", "line 4: the header has no"),
        (11, "STOP_TIME", "line 4: the header has no"),
    ] {
        one_fault(&with_line(line, ""), &format!("{fault_line} `{key}`"));
        let empty = if line < 4 { format!("{fault_line} `{key}`") } else { format!("line {line}: `{key}` has no value") };
        one_fault(&with_line(line, &format!("{key} =")), &empty);
    }
    one_fault("", "line 1: the file has no segment");
    one_fault("\n\n  \nCOMMENT only\n", "line 1: the file has no segment");
    one_fault("CCSDS_OEM_VERS = 2.0\nCREATION_DATE = 2028-11-30T00:00:00\n", "line 2: the file has no segment");
    one_fault(&with_line(1, ""), "line 1: expected `CCSDS_OEM_VERS`, got `CREATION_DATE = ");
    one_fault(&with_line(1, "CCSDS_OPM_VERS = 2.0"), "line 1: expected `CCSDS_OEM_VERS`");
    one_fault(&with_line(1, "CCSDS_OEM_VERS = 4.0"), "line 1: expected version 1.0, 2.0 or 3.0, got `4.0`");
    one_fault(&with_line(4, "hello"), "line 4: `hello` stands before the first header");
    one_fault(&with_line(4, ""), "line 11: `META_STOP` stands before the first header");
    one_fault(&with_line(12, ""), "line 12: `2029-01-01T00:00:00 7000 0 0 0 7.5 0` is no `keyword = value`");
}

#[test]
fn what_cannot_be_read_is_told_with_its_line() {
    for frame in ["ITRF2000", "TEME", "TOD", "MCI", "RTN", "EME 2000"] {
        let expected = format!("line 8: expected one of the frames EME2000, J2000, ICRF, GCRF, got `{frame}`");
        one_fault(&with_line(8, &format!("REF_FRAME = {frame}")), &expected);
    }
    for system in ["UT1", "MET", "TCB", "TCG", "SCLK", "GMST"] {
        let expected = format!("line 9: expected one of the time systems UTC, TAI, TT, TDB, GPS, got `{system}`");
        one_fault(&with_line(9, &format!("TIME_SYSTEM = {system}")), &expected);
    }
    for number in ["nan", "NaN", "inf", "-Infinity", "1e999", "0x10", "1,5", "--1", "x"] {
        for line in [format!("6996 {number} 0 -1.0 7.4 0"), format!("6996 899 0 -1.0 7.4 0 0 0 {number}")] {
            one_fault(&with_line(15, &format!("2029-01-01T00:02:00 {line}")), &format!("line 15: `{number}` is no finite number"));
        }
    }
    for number in ["1e306", "-1.1e12"] {
        let expected = format!("line 15: `{number}` is beyond 1e12 km or km/s");
        one_fault(&with_line(15, &format!("2029-01-01T00:02:00 {number} 0 0 0 0 0")), &expected);
    }
    for (columns, words) in [("", 1), (" 1 2 3", 4), (" 1 2 3 4 5", 6), (" 1 2 3 4 5 6 7", 8), (" 1 2 3 4 5 6 7 8 9 10", 11)] {
        let expected = format!("line 15: expected an epoch and 6 numbers (or 9 with accelerations), got {words} words");
        one_fault(&with_line(15, &format!("2029-01-01T00:02:00{columns}")), &expected);
    }
    one_fault(&format!("{GOOD}the end\n"), "line 17: expected an epoch and 6 numbers");
    one_fault(&format!("{GOOD}META_STOP\n"), "line 17: expected an epoch and 6 numbers");
    one_fault(
        &with_line(8, "REF_FRAME = EME2000\nREF_FRAME = ITRF2000"),
        "line 9: `REF_FRAME` stands twice in the header, first on line 8",
    );
    for degree in ["seven", "0", "-7", "7.5", "99999999999999999999999"] {
        let header = format!("STOP_TIME = 2029-01-01T00:03:00\nINTERPOLATION = HERMITE\nINTERPOLATION_DEGREE = {degree}");
        one_fault(&with_line(11, &header), "line 13: expected a degree of 1 or more, got `");
    }
    one_fault(&format!("{GOOD}COVARIANCE_START\nEPOCH = 2029-01-01T00:00:00\n"), "line 17: the covariance has no end");
    one_fault(&format!("{GOOD}COVARIANCE_START\n1\n{}", segment(3)), "line 17: the covariance has no end");
}

#[test]
fn times_that_do_not_go_together_are_told_with_their_line() {
    one_fault(&with_line(15, "2029-01-01T00:01:00 6996 899 0 -1.0 7.4 0"), "line 15: the epochs do not rise");
    one_fault(&with_line(15, "2029-01-01T00:00:30 6996 899 0 -1.0 7.4 0"), "line 15: the epochs do not rise");
    one_fault(&with_line(11, "STOP_TIME = 2029-01-01T00:02:30"), "line 16: 2029-01-01T00:03:00Z lies outside the segment's span");
    one_fault(&with_line(10, "START_TIME = 2029-01-01T00:00:30"), "line 13: 2029-01-01T00:00:00Z lies outside the segment's span");
    one_fault(&with_line(11, "STOP_TIME = 2029-01-01T00:03:30"), "line 4: the data, ");
    one_fault(&with_line(10, "START_TIME = 2028-12-31T23:59:00"), "line 4: the data, ");
    let usable = |from: &str, to: &str| {
        let header =
            format!("STOP_TIME = 2029-01-01T00:03:00\nUSEABLE_START_TIME = 2029-01-01T{from}\nUSEABLE_STOP_TIME = 2029-01-01T{to}");
        with_line(11, &header)
    };
    one_fault(&usable("00:02:00", "00:01:00"), "line 4: the usable span is empty");
    let span = read(&usable("00:00:30", "00:02:30"));
    assert!((span.stop().tt_seconds() - span.start().tt_seconds() - 120.0).abs() < 1e-6);
    let before = span.start().plus_seconds(-20.0);
    assert_eq!(span.state(before), read(GOOD).state(span.start()));
    let lines = |count: usize| GOOD.lines().take(count).flat_map(|line| [line, "\n"]).collect::<String>();
    one_fault(&lines(12), "line 4: the segment has no line of data");
    one_fault(&lines(13), "line 4: the segment has 1 line of data");
    one_fault(&lines(9), "line 9: the file ends within a header");
}

#[test]
fn segments_must_go_together() {
    let both = |second: &str| format!("{GOOD}{second}");
    // A shared end point, and an overlap of two minutes.
    for minutes in [3, 1] {
        let read = read(&both(&segment(minutes)));
        assert!(
            (read.stop().tt_seconds() - read.start().tt_seconds() - f64::from(u32::try_from(minutes + 3).unwrap()) * 60.0).abs() < 1e-6
        );
        // From its start the later one holds, which begins at 7000 km.
        let at = |t: f64| read.state(read.start().plus_seconds(f64::from(u32::try_from(minutes).unwrap()) * 60.0 + t)).position_m.x;
        assert!((at(0.0) - 7.0e6).abs() < 1e-3 && (at(60.0) - 6.999e6).abs() < 1e-3);
        // A millisecond before, the earlier one does, whose points lie kilometres lower.
        assert!(at(-1e-3) < 6.9995e6);
    }
    one_fault(&both(&segment(4)), "line 17: a gap of 60.000 s between segments: 2029-01-01T00:03:00Z to 2029-01-01T00:04:00Z");
    let early = GOOD.lines().take(3).flat_map(|line| [line, "\n"]).collect::<String>() + &segment(2) + &segment(0);
    one_fault(&early, "line 17: the segments are out of order");
    one_fault(&both(&segment(3).replace("EARTH", "MARS")), "line 20: the centre changes from `EARTH` to `MARS`");
    one_fault(&both(&segment(3).replace("EME2000", "GCRF")), "line 21: the frame changes from `EME2000` to `GCRF`");
    // A usable stop leaves a gap although the data would reach.
    let usable = with_line(11, "STOP_TIME = 2029-01-01T00:03:00\nUSEABLE_STOP_TIME = 2029-01-01T00:02:00") + &segment(3);
    one_fault(&usable, "line 18: a gap of 60.000 s between segments");
    // Each segment has its own time system: TAI is 37 s ahead of UTC.
    let tai = segment(3).replace("= UTC", "= TAI");
    let read = read(&both(&tai));
    assert!((read.stop().tt_seconds() - read.start().tt_seconds() - (360.0 - 37.0)).abs() < 1e-6);
}

#[test]
fn all_faults_are_told_by_line_and_at_most_fifty() {
    let three = with_line(8, "REF_FRAME = ITRF").replace("7.5 0\n2029-01-01T00:01:00", "7.5 0\n2029-01-32T00:01:00").replace("-1.4", "x");
    let got = faults(&three);
    let lines: Vec<&str> = got.iter().map(|fault| fault.split(':').next().unwrap()).collect();
    assert_eq!(lines, ["line 8", "line 14", "line 16"], "{got:?}");
    let standing = with_line(16, &"2029-01-01T00:01:30 1 2 3 4 5 6\n".repeat(500));
    assert_eq!(faults(&standing).len(), 50);
    assert_eq!(faults(&with_line(16, &"x\n".repeat(500))).len(), 50);
    assert_eq!(faults(&format!("{GOOD}{}", "META_START\nMETA_STOP\n".repeat(500))).len(), 50);
    one_fault(&"<?xml version=\"1.0\"?>\n<oem>\n".repeat(500), "line 1: expected `CCSDS_OEM_VERS`, got `<?xml");
}
