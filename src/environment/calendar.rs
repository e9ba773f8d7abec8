//! Instants as ephemeris files write them, in several time systems.

use jiff::civil::{Date, DateTime};
use jiff::tz::TimeZone;

use super::epoch::Epoch;

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

/// Reads `2028-03-01T12:00:00.25` or `2028-061T12:00:00.25`, with or without a `Z` behind it.
pub(super) fn read_instant(text: &str, system: TimeSystem) -> Option<Epoch> {
    let text = text.strip_suffix('Z').unwrap_or(text);
    let (date, time) = text.split_once('T')?;
    let parts: Vec<&str> = date.split('-').collect();
    let whole = |text: &str, digits: usize| (text.len() == digits).then(|| text.parse::<i16>().ok())?;
    let date = match parts.as_slice() {
        [year, month, day] => {
            let (month, day) = (i8::try_from(whole(month, 2)?).ok()?, i8::try_from(whole(day, 2)?).ok()?);
            Date::new(whole(year, 4)?, month, day).ok()?
        }
        [year, day] => {
            let first = Date::new(whole(year, 4)?, 1, 1).ok()?;
            let day = whole(day, 3)?;
            let date = first.checked_add(jiff::Span::new().days(i64::from(day) - 1)).ok()?;
            (day >= 1 && date.year() == first.year()).then_some(date)?
        }
        _ => return None,
    };
    let time: DateTime = format!("{date}T{time}").parse().ok()?;
    let as_utc = TimeZone::UTC.to_timestamp(time).ok()?;
    let seconds = as_utc.as_second() as f64;
    let fraction = f64::from(as_utc.subsec_nanosecond()) * 1e-9;
    Some(match system {
        TimeSystem::Utc => Epoch::from_unix(seconds, fraction),
        TimeSystem::Tai => Epoch::from_tai_calendar(seconds, fraction),
        TimeSystem::Gps => Epoch::from_tai_calendar(seconds, fraction + 19.0),
        TimeSystem::Tt => Epoch::from_tt_calendar(seconds, fraction),
    })
}
