//! Instants, held as terrestrial time and read and written as UTC.

use std::fmt;
use std::ops::RangeInclusive;

use jiff::civil::{Date, DateTime};
use jiff::tz::TimeZone;
use jiff::{Timestamp, Unit};

/// Unix time of J2000.0 read as if TT were UTC: 2000-01-01T12:00:00.
const J2000_UNIX_S: f64 = 946_728_000.0;
const DAY_S: f64 = 86_400.0;
/// TT − TAI. Source: IAU 1991 Resolution A4 (exact).
const TT_MINUS_TAI_S: f64 = 32.184;
/// Characters of `YYYY-MM-DD`.
const DATE_LENGTH: usize = 10;
/// Years, UTC, for which the models of the sky are any good. A year outside is most likely a slip.
pub(super) const YEARS: RangeInclusive<i16> = 1900..=2200;

/// Unix second from which TAI − UTC takes each value. Source: IERS Bulletin C; the last leap second announced up to
/// 2026-12 is that of 2017-01-01, so later instants use 37 s. Before 1972 the first value is used.
const LEAP_SECONDS: [(f64, f64); 28] = [
    (63_072_000.0, 10.0),
    (78_796_800.0, 11.0),
    (94_694_400.0, 12.0),
    (126_230_400.0, 13.0),
    (157_766_400.0, 14.0),
    (189_302_400.0, 15.0),
    (220_924_800.0, 16.0),
    (252_460_800.0, 17.0),
    (283_996_800.0, 18.0),
    (315_532_800.0, 19.0),
    (362_793_600.0, 20.0),
    (394_329_600.0, 21.0),
    (425_865_600.0, 22.0),
    (489_024_000.0, 23.0),
    (567_993_600.0, 24.0),
    (631_152_000.0, 25.0),
    (662_688_000.0, 26.0),
    (709_948_800.0, 27.0),
    (741_484_800.0, 28.0),
    (773_020_800.0, 29.0),
    (820_454_400.0, 30.0),
    (867_715_200.0, 31.0),
    (915_148_800.0, 32.0),
    (1_136_073_600.0, 33.0),
    (1_230_768_000.0, 34.0),
    (1_341_100_800.0, 35.0),
    (1_435_708_800.0, 36.0),
    (1_483_228_800.0, 37.0),
];

/// An instant: seconds of terrestrial time past J2000.0 TT. Resolves better than a microsecond within a century of 2000.
#[derive(Debug, Clone, Copy, PartialEq, PartialOrd)]
pub struct Epoch(f64);

/// Why a text is not an epoch.
#[derive(Debug, Clone, PartialEq, Eq, thiserror::Error)]
#[non_exhaustive]
pub enum EpochError {
    /// A time of day stands without `Z` or an offset.
    #[error("`{0}` has a time of day without a zone; write `Z` after it for UTC")]
    NoZone(String),
    /// A year for which the models do not hold.
    #[error("`{0}` is outside the years {first} to {last}, for which the models hold", first = YEARS.start(), last = YEARS.end())]
    OutOfRange(String),
    /// Not a date of the calendar in ISO 8601 form.
    #[error("`{text}` is not a date: {}", plainly(cause))]
    NotADate {
        /// What was written.
        text: String,
        /// What is wrong with it.
        cause: String,
    },
}

/// The library's cause without what only programmers want to know.
fn plainly(cause: &str) -> String {
    let Some((_, rest)) = cause.rsplit_once(": parameter ") else { return cause.to_owned() };
    let rest = rest.replace(['\'', '`'], "").replace("..=", " to ");
    let rest = rest.replace("is not in the required range of", "must be in the range");
    format!("its {}", rest.replace("is invalid, must be in range", "must be in the range"))
}

impl Epoch {
    /// Reads `2028-03-01` (00:00 UTC) or `2028-03-01T12:00:00Z` (or any offset), in the years 1900 to 2200 UTC. A leap
    /// second `:60` reads as `:59`.
    ///
    /// # Errors
    /// [`EpochError::NoZone`] for a time of day without zone, [`EpochError::OutOfRange`] for another year,
    /// [`EpochError::NotADate`] for anything else unreadable; a zone in brackets is.
    pub fn parse(text: &str) -> Result<Self, EpochError> {
        let text = text.trim();
        let not_a_date = |cause: &dyn fmt::Display| EpochError::NotADate { text: text.to_owned(), cause: cause.to_string() };
        // The calendar's own reader takes both of these, and leaves the zone of a date without a word.
        if text.contains('[') {
            return Err(not_a_date(&"a zone in brackets is not read; write `Z` for UTC or an offset such as `+01:00`"));
        }
        if !starts_with_date(text) {
            return Err(not_a_date(&"the date must be written `YYYY-MM-DD`"));
        }
        let in_range = |date: Date| if YEARS.contains(&date.year()) { Ok(()) } else { Err(EpochError::OutOfRange(text.to_owned())) };
        let timestamp = if text.len() == DATE_LENGTH {
            let date: Date = text.parse().map_err(|cause: jiff::Error| not_a_date(&cause))?;
            in_range(date)?;
            TimeZone::UTC.to_timestamp(date.at(0, 0, 0, 0)).map_err(|cause| not_a_date(&cause))?
        } else {
            text.parse::<Timestamp>().map_err(|cause| match text.parse::<DateTime>() {
                Ok(_) => EpochError::NoZone(text.to_owned()),
                Err(_) => not_a_date(&cause),
            })?
        };
        in_range(TimeZone::UTC.to_datetime(timestamp).date())?;
        Ok(Self::from_timestamp(timestamp))
    }

    /// The instant `seconds` of TT after J2000.0 TT (2000-01-01T12:00:00 TT).
    #[must_use]
    pub fn from_tt_seconds(seconds: f64) -> Self {
        Self(seconds)
    }

    /// Seconds of TT past J2000.0 TT.
    #[must_use]
    pub fn tt_seconds(self) -> f64 {
        self.0
    }

    /// Julian date in terrestrial time, days.
    #[must_use]
    pub fn julian_date_tt(self) -> f64 {
        2_451_545.0 + self.0 / DAY_S
    }

    /// Julian date in UTC, days.
    #[must_use]
    pub fn julian_date_utc(self) -> f64 {
        2_440_587.5 + self.unix_seconds() / DAY_S
    }

    /// Calendar year with its fraction in UTC: 2025.0 is 2025-01-01T00:00Z. NaN for a year the calendar does not hold.
    #[must_use]
    pub fn decimal_year(self) -> f64 {
        self.utc().map_or(f64::NAN, |utc| {
            let (day, second) = day_and_second(utc, self.unix_seconds());
            f64::from(utc.year()) + (day - 1.0 + second / DAY_S) / f64::from(utc.date().days_in_year())
        })
    }

    /// Day of the year (1 on 1 January) and second of that day, both in UTC. NaN outside the calendar.
    #[must_use]
    pub fn day_of_year_and_ut_seconds(self) -> (f64, f64) {
        self.utc().map_or((f64::NAN, f64::NAN), |utc| day_and_second(utc, self.unix_seconds()))
    }

    /// The instant `seconds` later (earlier if negative).
    #[must_use]
    pub fn plus_seconds(self, seconds: f64) -> Self {
        Self(self.0 + seconds)
    }

    /// Julian centuries of TT past J2000.0.
    pub(super) fn julian_centuries_tt(self) -> f64 {
        self.0 / (DAY_S * 36_525.0)
    }

    /// Days of UTC past 2000-01-01T12:00 UTC; stands in for UT1, from which it differs by less than 0.9 s.
    pub(super) fn ut_days_since_j2000(self) -> f64 {
        (self.unix_seconds() - J2000_UNIX_S) / DAY_S
    }

    fn from_timestamp(timestamp: Timestamp) -> Self {
        Self::from_unix(timestamp.as_second() as f64, f64::from(timestamp.subsec_nanosecond()) * 1e-9)
    }

    /// A calendar of atomic time read as if it were UTC: whole seconds of Unix time, and a fraction.
    pub(super) fn from_tai_calendar(whole: f64, fraction: f64) -> Self {
        Self((whole - J2000_UNIX_S) + (fraction + TT_MINUS_TAI_S))
    }

    /// A calendar of terrestrial time read as if it were UTC: whole seconds of Unix time, and a fraction.
    pub(super) fn from_tt_calendar(whole: f64, fraction: f64) -> Self {
        Self((whole - J2000_UNIX_S) + fraction)
    }

    /// Whole seconds of Unix time, and a fraction.
    pub(super) fn from_unix(whole: f64, fraction: f64) -> Self {
        // Whole seconds first: they subtract exactly, the fraction then keeps its digits.
        Self((whole - J2000_UNIX_S) + (fraction + leap_seconds_at_utc(whole) + TT_MINUS_TAI_S))
    }

    fn unix_seconds(self) -> f64 {
        let tai_as_unix = self.0 + J2000_UNIX_S - TT_MINUS_TAI_S;
        let offset = LEAP_SECONDS.iter().rev().find(|(from, offset)| tai_as_unix >= from + offset);
        tai_as_unix - offset.map_or(LEAP_SECONDS[0].1, |entry| entry.1)
    }

    fn utc(self) -> Option<DateTime> {
        let seconds = self.unix_seconds();
        if !seconds.is_finite() {
            return None;
        }
        #[expect(clippy::cast_possible_truncation, reason = "saturates, and jiff refuses what its calendar does not hold")]
        let microseconds = (seconds * 1e6).round() as i64;
        Timestamp::from_microsecond(microseconds).ok().map(|timestamp| TimeZone::UTC.to_datetime(timestamp))
    }
}

impl fmt::Display for Epoch {
    /// ISO 8601 in UTC to the millisecond, without a zero fraction: `2028-03-01T12:00:00Z`.
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self.utc().and_then(|utc| utc.round(Unit::Millisecond).ok()) {
            Some(utc) => write!(f, "{utc}Z"),
            None => write!(f, "{} s TT past J2000", self.0),
        }
    }
}

/// Whether the text starts with a date of the shape `YYYY-MM-DD` that ends there or at the mark of a time of day.
fn starts_with_date(text: &str) -> bool {
    let shape = |(place, byte): (usize, u8)| if matches!(place, 4 | 7) { byte == b'-' } else { byte.is_ascii_digit() };
    let after = text.as_bytes().get(DATE_LENGTH);
    text.len() >= DATE_LENGTH && text.bytes().take(DATE_LENGTH).enumerate().all(shape) && after.is_none_or(|byte| b"Tt ".contains(byte))
}

fn leap_seconds_at_utc(unix_s: f64) -> f64 {
    LEAP_SECONDS.iter().rev().find(|(from, _)| unix_s >= *from).map_or(LEAP_SECONDS[0].1, |entry| entry.1)
}

/// Whether the day of UTC that begins at `midnight` (Unix time) ends with a second of its own, 23:59:60.
pub(super) fn day_has_leap_second(midnight: f64) -> bool {
    // The first entry is the offset with which the table begins, not a step.
    LEAP_SECONDS.iter().skip(1).any(|(from, _)| (from - midnight - DAY_S).abs() < 0.5)
}

fn day_and_second(utc: DateTime, unix_s: f64) -> (f64, f64) {
    let midnight = f64::from(utc.hour()) * 3600.0 + f64::from(utc.minute()) * 60.0 + f64::from(utc.second());
    // The calendar is rounded to the microsecond; the seconds keep what the number holds.
    let fraction = unix_s - unix_s.round();
    let coarse = midnight + f64::from(utc.subsec_nanosecond()) * 1e-9;
    let whole = (coarse - fraction).round();
    ((f64::from(utc.date().day_of_year())), (whole + fraction).max(0.0))
}
