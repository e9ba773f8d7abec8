//! The text form of an Orbit Ephemeris Message: lines to segments of numbers.
//!
//! Source: CCSDS 502.0-B, Orbit Data Messages, versions 1.0 to 3.0, keyword = value notation. Covariance blocks are passed
//! over; accelerations are checked and passed over.

use std::collections::BTreeMap;

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
/// Keywords that the head of the file must have, besides its version.
const HEAD: [&str; 2] = ["CREATION_DATE", "ORIGINATOR"];
/// Faults after which no more are told.
const MOST_FAULTS: usize = 50;
/// Largest number of a data line, km or km/s: a tenth of a light year. More is a slip, and would overflow the polynomials.
const LARGEST: f64 = 1e12;

/// The faults of a file, at most [`MOST_FAULTS`].
#[derive(Debug, Default)]
pub(super) struct Faults(Vec<EphemerisError>);

impl Faults {
    pub(super) fn push(&mut self, line: usize, message: impl Into<String>, help: impl Into<String>) {
        if !self.is_full() {
            self.0.push(EphemerisError { line: line.max(1), message: message.into(), help: help.into() });
        }
    }

    pub(super) fn is_full(&self) -> bool {
        self.0.len() >= MOST_FAULTS
    }

    pub(super) fn is_empty(&self) -> bool {
        self.0.is_empty()
    }

    /// All of them, by line.
    pub(super) fn sorted(mut self) -> Vec<EphemerisError> {
        self.0.sort_by_key(|fault| fault.line);
        self.0
    }
}

/// One line of data: epoch, position and velocity.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Point {
    pub(super) epoch: Epoch,
    pub(super) position_m: [f64; 3],
    pub(super) velocity_m_per_s: [f64; 3],
    pub(super) line: usize,
}

/// A value of a header and its line.
#[derive(Debug, Clone, Default)]
pub(super) struct Entry {
    pub(super) text: String,
    pub(super) line: usize,
}

/// One segment: what its header says, and its data.
#[derive(Debug, Clone, Default)]
pub(super) struct Segment {
    pub(super) line: usize,
    pub(super) object: Entry,
    pub(super) centre: Entry,
    pub(super) frame: Entry,
    pub(super) start: Option<Epoch>,
    pub(super) stop: Option<Epoch>,
    pub(super) usable: [Option<Epoch>; 2],
    /// Degree of Hermite's polynomial, if the file asks for one.
    pub(super) degree: Option<usize>,
    pub(super) points: Vec<Point>,
    /// Lines of data could not be read, so that what is missing says nothing.
    pub(super) lost: bool,
}

/// Where in the file the reader stands.
enum State {
    Header,
    /// After a line that no header precedes: those that follow it have the same fault.
    Astray,
    Meta(Meta),
    Data,
    /// With the line on which it began.
    Covariance(usize),
}

/// A header of a segment while it is read.
#[derive(Default)]
struct Meta {
    line: usize,
    entries: BTreeMap<String, Entry>,
}

/// Reads a file to segments.
pub(super) struct Reader {
    state: State,
    system: TimeSystem,
    head: Vec<String>,
    head_line: usize,
    pub(super) segments: Vec<Segment>,
    pub(super) faults: Faults,
}

impl Reader {
    /// Reads all lines, up to the fault that fills the list.
    pub(super) fn read(text: &str) -> Self {
        let text = text.strip_prefix('\u{feff}').unwrap_or(text);
        let mut reader = Self {
            state: State::Header,
            system: TimeSystem::Utc,
            head: Vec::new(),
            head_line: 0,
            segments: Vec::new(),
            faults: Faults::default(),
        };
        let meant = |line: &str| !line.is_empty() && !line.starts_with("COMMENT");
        let mut lines = (1..).zip(text.lines().map(str::trim)).filter(|(_, line)| meant(line));
        let Some((number, line)) = lines.next() else {
            reader.faults.push(1, "the file has no segment", "begin with `CCSDS_OEM_VERS = 2.0`, a header and data");
            return reader;
        };
        if !reader.version(line, number) {
            return reader;
        }
        let mut last = number;
        for (number, line) in lines {
            if reader.faults.is_full() {
                return reader;
            }
            reader.line(line, number);
            last = number;
        }
        reader.end(last);
        reader
    }

    /// Whether the file is an ephemeris at all; a version that is not known is a fault, and read on.
    fn version(&mut self, line: &str, number: usize) -> bool {
        self.head_line = number;
        let help = "begin with `CCSDS_OEM_VERS = 2.0`: the text form of an Orbit Ephemeris Message (CCSDS 502.0-B)";
        let (key, value) = line.split_once('=').map_or((line, ""), |(key, value)| (key.trim(), value.trim()));
        if key != "CCSDS_OEM_VERS" {
            self.faults.push(number, format!("expected `CCSDS_OEM_VERS`, got `{}`", short(line)), help);
            return false;
        }
        if !matches!(value, "1.0" | "2.0" | "3.0") {
            let message = format!("expected version 1.0, 2.0 or 3.0, got `{}`", short(value));
            self.faults.push(number, message, "write the file in version 2.0");
        }
        true
    }

    fn end(&mut self, last: usize) {
        match &self.state {
            State::Meta(_) => self.faults.push(last, "the file ends within a header", "end the header with `META_STOP` and write its data"),
            State::Covariance(line) => self.faults.push(*line, "the covariance has no end", "write `COVARIANCE_STOP` after it"),
            State::Header if self.faults.is_empty() => {
                self.faults.push(last, "the file has no segment", "write `META_START`, a header, `META_STOP` and data");
            }
            State::Header | State::Astray | State::Data => {}
        }
    }

    fn line(&mut self, line: &str, number: usize) {
        match &mut self.state {
            State::Header | State::Astray | State::Data if line == "META_START" => self.open(number),
            State::Header => match line.split_once('=') {
                Some((key, value)) if !value.trim().is_empty() => self.head.push(key.trim().to_uppercase()),
                Some(_) => {}
                None => {
                    self.faults.push(number, format!("`{}` stands before the first header", short(line)), "write `META_START` before it");
                    self.state = State::Astray;
                }
            },
            State::Meta(_) if line == "META_STOP" => self.close(),
            State::Meta(_) => self.entry(line, number),
            State::Data if line == "COVARIANCE_START" => self.state = State::Covariance(number),
            State::Covariance(_) if line == "COVARIANCE_STOP" => self.state = State::Data,
            State::Covariance(from) if line == "META_START" => {
                let from = *from;
                self.faults.push(from, "the covariance has no end", "write `COVARIANCE_STOP` after it");
                self.open(number);
            }
            State::Astray | State::Covariance(_) => {}
            State::Data => self.data(line, number),
        }
    }

    /// A line within the header of a segment.
    fn entry(&mut self, line: &str, number: usize) {
        let State::Meta(meta) = &mut self.state else { return };
        if let Some((key, value)) = line.split_once('=') {
            let (key, entry) = (key.trim().to_uppercase(), Entry { text: value.trim().to_owned(), line: number });
            if let Some(first) = meta.entries.get(&key) {
                let message = format!("`{}` stands twice in the header, first on line {}", short(&key), first.line);
                self.faults.push(number, message, "remove one of the two");
            } else {
                meta.entries.insert(key, entry);
            }
            return;
        }
        self.faults.push(number, format!("`{}` is no `keyword = value`", short(line)), "end the header with `META_STOP`");
        // What can only follow a header closes it, lest every line after this one be a fault.
        if line == "META_START" || line.starts_with(|first: char| first.is_ascii_digit()) {
            self.close();
            self.line(line, number);
        }
    }

    /// Begins the header of a segment.
    fn open(&mut self, number: usize) {
        if self.segments.is_empty() {
            for key in HEAD.iter().filter(|key| !self.head.iter().any(|own| own == *key)) {
                self.faults.push(self.head_line, format!("the head of the file has no `{key}`"), format!("add a line `{key} = …`"));
            }
        }
        self.state = State::Meta(Meta { line: number, entries: BTreeMap::new() });
    }

    /// Ends the header of a segment; its data follow.
    fn close(&mut self) {
        if let State::Meta(meta) = std::mem::replace(&mut self.state, State::Data) {
            self.segment(meta);
        }
    }

    fn segment(&mut self, mut meta: Meta) {
        let object = self.needed(&mut meta, "OBJECT_NAME").unwrap_or_default();
        self.needed(&mut meta, "OBJECT_ID");
        let centre = self.needed(&mut meta, "CENTER_NAME").unwrap_or_default();
        let frame = self.needed(&mut meta, "REF_FRAME").unwrap_or_default();
        if !frame.text.is_empty() && !FRAMES.contains(&frame.text.as_str()) {
            let message = format!("expected one of the frames {}, got `{}`", FRAMES.join(", "), short(&frame.text));
            self.faults.push(frame.line, message, "turn positions and velocities into one of these inertial frames");
        }
        if let Some(name) = self.needed(&mut meta, "TIME_SYSTEM") {
            if let Some(system) = TimeSystem::named(&name.text) {
                self.system = system;
            } else {
                let message = format!("expected one of the time systems {}, got `{}`", TimeSystem::NAMES.join(", "), short(&name.text));
                self.faults.push(name.line, message, "write the epochs in one of these");
            }
        }
        let [start, stop] = ["START_TIME", "STOP_TIME"].map(|key| {
            let entry = self.needed(&mut meta, key)?;
            self.instant(&entry.text, entry.line)
        });
        let usable = ["USEABLE_START_TIME", "USEABLE_STOP_TIME"].map(|key| {
            let entry = optional(&mut meta, key)?;
            self.instant(&entry.text, entry.line)
        });
        let degree = self.degree(&mut meta);
        self.segments.push(Segment { line: meta.line, object, centre, frame, start, stop, usable, degree, ..Segment::default() });
    }

    /// The value of a keyword, in capitals.
    fn needed(&mut self, meta: &mut Meta, key: &'static str) -> Option<Entry> {
        let help = format!("write a line `{key} = …` between `META_START` and `META_STOP`");
        match meta.entries.remove(key) {
            Some(entry) if entry.text.is_empty() => self.faults.push(entry.line, format!("`{key}` has no value"), help),
            Some(entry) => return Some(Entry { text: entry.text.to_uppercase(), ..entry }),
            None => self.faults.push(meta.line, format!("the header has no `{key}`"), help),
        }
        None
    }

    /// The degree that a file states for Hermite's interpolation; that of another kind does not count.
    fn degree(&mut self, meta: &mut Meta) -> Option<usize> {
        let hermite = optional(meta, "INTERPOLATION").is_some_and(|kind| kind.text.eq_ignore_ascii_case("HERMITE"));
        let degree = optional(meta, "INTERPOLATION_DEGREE")?;
        let read = degree.text.parse().ok().filter(|number| *number > 0);
        if read.is_none() {
            let message = format!("expected a degree of 1 or more, got `{}`", short(&degree.text));
            self.faults.push(degree.line, message, "write a whole number such as `7`, or remove the line");
        }
        read.filter(|_| hermite)
    }

    fn instant(&mut self, text: &str, line: usize) -> Option<Epoch> {
        let help = "write `2028-03-01T12:00:00.000` or, with the day of the year, `2028-061T12:00:00.000`";
        let read = read_instant(text, self.system);
        read.map_err(|cause| self.faults.push(line, format!("`{}` is no epoch: {cause}", short(text)), help)).ok()
    }

    fn data(&mut self, line: &str, number: usize) {
        let point = self.point(line, number);
        if let Some(segment) = self.segments.last_mut() {
            segment.lost |= point.is_none();
            segment.points.extend(point);
        }
    }

    fn point(&mut self, line: &str, number: usize) -> Option<Point> {
        let words: Vec<&str> = line.split_whitespace().collect();
        let [first, rest @ ..] = words.as_slice() else { return None };
        if !matches!(rest.len(), 6 | 9) {
            let message = format!("expected an epoch and 6 numbers (or 9 with accelerations), got {} words", words.len());
            self.faults.push(number, message, "write `epoch x y z vx vy vz`, in km and km/s");
            return None;
        }
        let epoch = self.instant(first, number)?;
        let mut numbers = [0.0; 9];
        for (place, word) in numbers.iter_mut().zip(rest) {
            let message = match word.parse::<f64>() {
                Ok(value) if value.abs() <= LARGEST => {
                    *place = value * 1e3;
                    continue;
                }
                Ok(value) if value.is_finite() => format!("`{}` is beyond 1e12 km or km/s", short(word)),
                _ => format!("`{}` is no finite number", short(word)),
            };
            self.faults.push(number, message, "write a number such as `-4523.118`, in km or km/s");
            return None;
        }
        let [x, y, z, vx, vy, vz, ..] = numbers;
        Some(Point { epoch, position_m: [x, y, z], velocity_m_per_s: [vx, vy, vz], line: number })
    }
}

/// A value that may be absent or empty.
fn optional(meta: &mut Meta, key: &str) -> Option<Entry> {
    meta.entries.remove(key).filter(|entry| !entry.text.is_empty())
}

/// The text, cut to a length that a message can hold.
fn short(text: &str) -> String {
    if text.chars().nth(40).is_none() { text.to_owned() } else { text.chars().take(39).chain(['…']).collect() }
}
