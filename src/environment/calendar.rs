//! Instants as ephemeris files write them, in several time systems.

use std::ops::RangeInclusive;

use jiff::civil::Date;
use jiff::tz::TimeZone;

use super::epoch::{Epoch, YEARS, day_has_leap_second};

/// GPS time behind TAI, s. Source: IS-GPS-200 (GPS = UTC on 1980-01-06, when TAI − UTC was 19 s).
const TAI_MINUS_GPS_S: f64 = 19.0;
/// Digits after the point that are read at most: a femtosecond, far below what an epoch resolves.
const MOST_DIGITS: usize = 15;

/// A scale of time.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum TimeSystem {
    /// Coordinated universal time.
    Utc,
    /// International atomic time.
    Tai,
    /// Terrestrial time; barycentric dynamical time is within 2 ms of it.
    Tt,
    /// Time of the Global Positioning System: TAI − 19 s.
    Gps,
}

impl TimeSystem {
    /// Names that files use.
    pub(super) const NAMES: [&str; 5] = ["UTC", "TAI", "TT", "TDB", "GPS"];

    pub(super) fn named(name: &str) -> Option<Self> {
        match name.to_uppercase().as_str() {
            "UTC" => Some(Self::Utc),
            "TAI" => Some(Self::Tai),
            "TT" | "TDB" => Some(Self::Tt),
            "GPS" => Some(Self::Gps),
            _ => None,
        }
    }
}

/// Reads `2028-03-01T12:00:00.25` or `2028-061T12:00:00.25`, with or without a `Z` behind it; the error is the cause.
///
/// The 60th second is read where UTC has one: `2016-12-31T23:59:60`.
pub(super) fn read_instant(text: &str, system: TimeSystem) -> Result<Epoch, &'static str> {
    let text = text.strip_suffix('Z').unwrap_or(text);
    let (date, time) = text.split_once('T').ok_or("no `T` stands between date and time of day")?;
    let date = read_date(date).ok_or("there is no such date")?;
    if !YEARS.contains(&date.year()) {
        return Err("the models hold for the years 1900 to 2200");
    }
    let midnight = TimeZone::UTC.to_timestamp(date.at(0, 0, 0, 0)).map_err(|_| "there is no such date")?.as_second() as f64;
    let (minutes, second, fraction) = read_time(time).ok_or("the time of day is not `hh:mm:ss` with decimals")?;
    // The second of its own that a minute of UTC may have counts from the 59th, whose offset from TAI still holds.
    let (second, fraction) = match second {
        60.. if system != TimeSystem::Utc || minutes != 24 * 60 - 1 || !day_has_leap_second(midnight) => {
            return Err("this minute has no leap second");
        }
        60.. => (59, fraction + 1.0),
        _ => (second, fraction),
    };
    let whole = midnight + f64::from(minutes * 60 + second);
    Ok(match system {
        TimeSystem::Utc => Epoch::from_unix(whole, fraction),
        TimeSystem::Tai => Epoch::from_tai_calendar(whole, fraction),
        TimeSystem::Gps => Epoch::from_tai_calendar(whole, fraction + TAI_MINUS_GPS_S),
        TimeSystem::Tt => Epoch::from_tt_calendar(whole, fraction),
    })
}

/// `YYYY-MM-DD` or `YYYY-DDD`.
fn read_date(text: &str) -> Option<Date> {
    let mut parts = text.split('-');
    let year = i16::try_from(digits(parts.next()?, 4, 0..=9999)?).ok()?;
    match (parts.next()?, parts.next(), parts.next()) {
        (month, Some(day), None) => {
            let (month, day) = (digits(month, 2, 1..=12)?, digits(day, 2, 1..=31)?);
            Date::new(year, i8::try_from(month).ok()?, i8::try_from(day).ok()?).ok()
        }
        (day, None, None) => {
            let day = digits(day, 3, 1..=366)?;
            let date = Date::new(year, 1, 1).ok()?.checked_add(jiff::Span::new().days(i64::from(day) - 1)).ok()?;
            (date.year() == year).then_some(date)
        }
        _ => None,
    }
}

/// `hh:mm:ss[.d…]`: minutes of the day, seconds of the minute (60 too) and their fraction.
fn read_time(text: &str) -> Option<(u32, u32, f64)> {
    let mut parts = text.split(':');
    let (hour, minute, second) = (parts.next()?, parts.next()?, parts.next()?);
    if parts.next().is_some() {
        return None;
    }
    let (second, fraction) = match second.split_once('.') {
        Some((second, decimals)) if decimals.bytes().all(|byte| byte.is_ascii_digit()) => {
            let kept = decimals.get(..MOST_DIGITS.min(decimals.len()))?;
            (second, format!("0.{kept}0").parse().ok()?)
        }
        Some(_) => return None,
        None => (second, 0.0),
    };
    Some((digits(hour, 2, 0..=23)? * 60 + digits(minute, 2, 0..=59)?, digits(second, 2, 0..=60)?, fraction))
}

/// A number of exactly `count` digits within a range.
fn digits(text: &str, count: usize, range: RangeInclusive<u32>) -> Option<u32> {
    let plain = text.len() == count && text.bytes().all(|byte| byte.is_ascii_digit());
    text.parse().ok().filter(|number| plain && range.contains(number))
}
