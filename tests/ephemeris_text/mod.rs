//! A small ephemeris file, its variants, and what is said of them.
#![allow(dead_code, reason = "each test takes what it needs")]

use std::fmt::Write;

use couplet::environment::Ephemeris;

/// Lines 1 to 3 the head, 4 to 12 the header, from 13 the data.
pub(crate) const GOOD: &str = "CCSDS_OEM_VERS = 2.0
CREATION_DATE = 2028-11-30T00:00:00
ORIGINATOR = NOBODY
META_START
OBJECT_NAME = HERON
OBJECT_ID = 2029-001A
CENTER_NAME = EARTH
REF_FRAME = EME2000
TIME_SYSTEM = UTC
START_TIME = 2029-01-01T00:00:00
STOP_TIME = 2029-01-01T00:03:00
META_STOP
2029-01-01T00:00:00 7000 0 0 0 7.5 0
2029-01-01T00:01:00 6999 450 0 -0.5 7.5 0
2029-01-01T00:02:00 6996 899 0 -1.0 7.4 0
2029-01-01T00:03:00 6990 1348 0 -1.4 7.4 0
";

/// The good file with one line replaced; several lines or none may take its place.
pub(crate) fn with_line(number: usize, new: &str) -> String {
    let mut text = String::new();
    for (k, line) in (1..).zip(GOOD.lines()) {
        if k != number {
            writeln!(text, "{line}").unwrap();
        } else if !new.is_empty() {
            writeln!(text, "{new}").unwrap();
        }
    }
    text
}

/// The segment of the good file, moved by minutes.
pub(crate) fn segment(minutes: usize) -> String {
    let moved = GOOD.lines().skip(3).map(|line| (0..=3).fold(line.to_owned(), |line, k| line.replace(&minute(k), &format!("@{k}"))));
    let named = moved.map(|line| (0..=3).fold(line, |line, k| line.replace(&format!("@{k}"), &minute(k + minutes))));
    named.flat_map(|line| [line, "\n".to_owned()]).collect()
}

fn minute(k: usize) -> String {
    format!("T{:02}:{:02}:00", k / 60, k % 60)
}

pub(crate) fn read(text: &str) -> Ephemeris {
    Ephemeris::parse(text).unwrap_or_else(|faults| panic!("{faults:?}\n{text}"))
}

/// All faults as text, none without help.
pub(crate) fn faults(text: &str) -> Vec<String> {
    let Err(faults) = Ephemeris::parse(text) else { panic!("no fault in\n{text}") };
    assert!(faults.iter().all(|fault| !fault.help.is_empty()) && faults.is_sorted_by_key(|fault| fault.line), "{faults:?}");
    faults.iter().map(ToString::to_string).collect()
}

/// Exactly one fault, which begins so.
pub(crate) fn one_fault(text: &str, expected: &str) {
    let got = faults(text);
    assert!(got.len() == 1 && got[0].starts_with(expected), "{got:?}\nexpected {expected}\n{text}");
}
