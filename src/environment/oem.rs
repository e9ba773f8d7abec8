//! The text form of an Orbit Ephemeris Message: lines to segments of numbers.
//!
//! Source: CCSDS 502.0-B, Orbit Data Messages, versions 1.0 to 3.0, keyword = value notation. Covariance blocks and
//! accelerations are passed over.

use super::calendar::{TimeSystem, read_instant};
use super::epoch::Epoch;

/// What is wrong with an ephemeris file, and where.
#[derive(Debug, Clone, PartialEq, Eq, thiserror::Error)]
#[error("line {line}: {message}")]
pub struct EphemerisError {
    /// Line, from 1.
    pub line: usize,
    /// What is wrong.
    pub message: String,
    /// How to mend it.
    pub help: String,
}

/// Frames whose axes are those of I, to 0.02″.
const FRAMES: [&str; 4] = ["EME2000", "J2000", "ICRF", "GCRF"];
/// Faults after which reading stops.
const MOST_FAULTS: usize = 50;

/// One line of data: epoch, position and velocity.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Point {
    pub(super) epoch: Epoch,
    pub(super) position_m: [f64; 3],
    pub(super) velocity_m_per_s: [f64; 3],
    pub(super) line: usize,
}

/// One segment: what its header says, and its data.
#[derive(Debug, Clone, Default)]
pub(super) struct Segment {
    pub(super) line: usize,
    pub(super) object: String,
    pub(super) centre: String,
    pub(super) start: Option<Epoch>,
    pub(super) stop: Option<Epoch>,
    pub(super) usable: [Option<Epoch>; 2],
    pub(super) degree: Option<usize>,
    pub(super) points: Vec<Point>,
}

/// Where in the file the reader stands.
enum State {
    Header,
    Meta(Meta),
    Data,
    Covariance,
}

/// A header of a segment while it is read: keyword, value and line.
struct Meta {
    line: usize,
    entries: Vec<(String, String, usize)>,
}

/// Reads a file to segments.
pub(super) struct Reader {
    state: State,
    system: TimeSystem,
    pub(super) segments: Vec<Segment>,
    pub(super) faults: Vec<EphemerisError>,
    seen_version: bool,
}

impl Reader {
    /// Reads all lines; at most 50 faults.
    pub(super) fn read(text: &str) -> Self {
        let text = text.strip_prefix('\u{feff}').unwrap_or(text);
        let mut reader =
            Self { state: State::Header, system: TimeSystem::Utc, segments: Vec::new(), faults: Vec::new(), seen_version: false };
        let mut last = 0;
        for (index, line) in text.lines().enumerate() {
            last = index + 1;
            if reader.faults.len() >= MOST_FAULTS {
                return reader;
            }
            let line = line.trim();
            if line.is_empty() || line.starts_with("COMMENT") {
                continue;
            }
            reader.line(line, last);
        }
        match &reader.state {
            State::Meta(_) => reader.fault(last, "the file ends within a header", "end the header with `META_STOP` and write its data"),
            _ if reader.segments.is_empty() && reader.faults.is_empty() => {
                reader.fault(last, "the file has no segment", "begin with `CCSDS_OEM_VERS = 2.0`, a header and data");
            }
            _ => {}
        }
        reader
    }

    fn fault(&mut self, line: usize, message: impl Into<String>, help: impl Into<String>) {
        self.faults.push(EphemerisError { line: line.max(1), message: message.into(), help: help.into() });
    }

    fn line(&mut self, line: &str, number: usize) {
        if !self.seen_version {
            self.seen_version = true;
            return self.version(line, number);
        }
        match &mut self.state {
            State::Header | State::Data if line == "META_START" => self.state = State::Meta(Meta { line: number, entries: Vec::new() }),
            State::Header if line.contains('=') => {}
            State::Header => {
                self.fault(number, format!("`{}` stands before the first header", short(line)), "write `META_START` before it");
            }
            State::Meta(meta) if line == "META_STOP" => {
                let meta = Meta { line: meta.line, entries: std::mem::take(&mut meta.entries) };
                self.state = State::Data;
                self.segment(&meta);
            }
            State::Meta(meta) => match line.split_once('=') {
                Some((key, value)) => meta.entries.push((key.trim().to_uppercase(), value.trim().to_owned(), number)),
                None => self.fault(number, format!("`{}` is no `keyword = value`", short(line)), "end the header with `META_STOP`"),
            },
            State::Data if line == "COVARIANCE_START" => self.state = State::Covariance,
            State::Covariance if line == "COVARIANCE_STOP" => self.state = State::Data,
            State::Covariance => {}
            State::Data => self.data(line, number),
        }
    }

    fn version(&mut self, line: &str, number: usize) {
        let help = "begin with `CCSDS_OEM_VERS = 2.0`: the text form of an Orbit Ephemeris Message (CCSDS 502.0-B)";
        match line.split_once('=').map(|(key, value)| (key.trim(), value.trim())) {
            Some(("CCSDS_OEM_VERS", "1.0" | "2.0" | "3.0")) => {}
            Some(("CCSDS_OEM_VERS", other)) => {
                self.fault(number, format!("expected version 1.0, 2.0 or 3.0, got `{}`", short(other)), "write the file in version 2.0");
            }
            _ => self.fault(number, format!("expected `CCSDS_OEM_VERS`, got `{}`", short(line)), help),
        }
    }

    fn segment(&mut self, meta: &Meta) {
        let find = |key: &str| meta.entries.iter().find(|(own, _, _)| own == key).map(|(_, value, line)| (value.as_str(), *line));
        let mut missing = Vec::new();
        let mut needed = |key: &'static str| {
            let found = find(key);
            if found.is_none() {
                missing.push(key);
            }
            found
        };
        let (object, centre) = (needed("OBJECT_NAME"), needed("CENTER_NAME"));
        let (frame, system) = (needed("REF_FRAME"), needed("TIME_SYSTEM"));
        let (start, stop) = (needed("START_TIME"), needed("STOP_TIME"));
        for key in missing {
            self.fault(meta.line, format!("the header has no `{key}`"), format!("add a line `{key} = …`"));
        }
        if let Some((frame, line)) = frame.filter(|(frame, _)| !FRAMES.contains(&frame.to_uppercase().as_str())) {
            let message = format!("expected one of the frames {}, got `{}`", FRAMES.join(", "), short(frame));
            self.fault(line, message, "turn positions and velocities into one of these inertial frames");
        }
        if let Some((name, line)) = system {
            if let Some(system) = TimeSystem::named(name) {
                self.system = system;
            } else {
                let message = format!("expected one of the time systems {}, got `{}`", TimeSystem::NAMES.join(", "), short(name));
                self.fault(line, message, "write the epochs in one of these");
            }
        }
        let mut instant = |found: Option<(&str, usize)>| found.and_then(|(text, line)| self.instant(text, line));
        let (start, stop) = (instant(start), instant(stop));
        let usable = [instant(find("USEABLE_START_TIME")), instant(find("USEABLE_STOP_TIME"))];
        let degree = find("INTERPOLATION_DEGREE").and_then(|(text, _)| text.parse().ok());
        let text = |found: Option<(&str, usize)>| found.map_or_else(String::new, |(text, _)| text.to_uppercase());
        let (object, centre) = (text(object), text(centre));
        self.segments.push(Segment { line: meta.line, object, centre, start, stop, usable, degree, points: Vec::new() });
    }

    fn instant(&mut self, text: &str, line: usize) -> Option<Epoch> {
        let read = read_instant(text, self.system);
        if read.is_none() {
            let help = "write `2028-03-01T12:00:00.000` or, with the day of the year, `2028-061T12:00:00.000`";
            self.fault(line, format!("`{}` is no epoch", short(text)), help);
        }
        read
    }

    fn data(&mut self, line: &str, number: usize) {
        let words: Vec<&str> = line.split_whitespace().collect();
        if !matches!(words.len(), 7 | 10) {
            let message = format!("expected an epoch and 6 numbers (or 9 with accelerations), got {} words", words.len());
            return self.fault(number, message, "write `epoch x y z vx vy vz`, in km and km/s");
        }
        let Some(epoch) = words.first().and_then(|text| self.instant(text, number)) else { return };
        let mut numbers = [0.0; 6];
        for (place, word) in numbers.iter_mut().zip(words.iter().skip(1)) {
            match word.parse::<f64>() {
                Ok(value) if value.is_finite() => *place = value * 1e3,
                _ => return self.fault(number, format!("`{}` is no finite number", short(word)), "write a number such as `-4523.118`"),
            }
        }
        let [x, y, z, vx, vy, vz] = numbers;
        let point = Point { epoch, position_m: [x, y, z], velocity_m_per_s: [vx, vy, vz], line: number };
        if let Some(segment) = self.segments.last_mut() {
            segment.points.push(point);
        }
    }
}

/// The text, cut to a length that a message can hold.
fn short(text: &str) -> String {
    if text.chars().count() <= 40 { text.to_owned() } else { text.chars().take(39).chain(['…']).collect() }
}
