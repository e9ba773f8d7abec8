//! A path read from an ephemeris file, interpolated.
//!
//! What is read: the text form (keyword = value) of an Orbit Ephemeris Message, CCSDS 502.0-B, versions 1.0 to 3.0, of one object
//! about one centre, in km and km/s.
//!
//! - Frames: EME2000, J2000, GCRF, ICRF; one for the whole file. They differ by 0.02″ (0.7 m in 7000 km) and are treated alike, as I.
//! - Time systems: UTC, TAI, TT, GPS, and TDB, taken as TT, from which it differs by less than 2 ms. Epochs are
//!   `2028-03-01T12:00:00.000` or, with the day of the year, `2028-061T12:00:00.000`; a `Z` behind them changes nothing. Leap seconds
//!   of UTC are read.
//! - Segments follow each other without a gap; where two overlap the later holds from its start. The usable span of each is
//!   `USEABLE_START_TIME` (else `START_TIME`) to `USEABLE_STOP_TIME` (else `STOP_TIME`), and its data must reach over it.
//! - Interpolation: Hermite's, through positions and velocities of the points around the instant, fewer at the ends of a segment,
//!   never across two segments. A file that states `INTERPOLATION = HERMITE` with a degree n gets the n/2 + 1 points that this needs,
//!   2 to 8; every other file, also one that states `LAGRANGE` or `LINEAR`, gets 4 points (degree 7), since velocities are given.
//! - Velocity is the derivative of that polynomial. It agrees with the velocities given and has one degree less; a polynomial through
//!   the velocities of the same points has about half that degree, and is less accurate.
//! - Covariances and accelerations are passed over.

use std::sync::Arc;

use nalgebra::Vector3;
use sha2::{Digest, Sha256};

use super::epoch::Epoch;
use super::hermite::{MOST_POINTS, hermite};
use super::oem::{Entry, EphemerisError, Faults, Point, Reader, Segment};
use super::orbit::State;

/// Points that a Hermite polynomial runs through by default: degree 7.
const POINTS: usize = 4;
/// A step this many times as long as both its neighbours is a hole in the data.
const HOLE: f64 = 8.0;
/// A gap between segments, or epochs outside a stated span, up to this are the rounding of the file's digits, s.
const ROUNDING_S: f64 = 1e-3;

/// Positions and velocities over time, in I, from a centre named by the file.
///
/// Reads EME2000, J2000, GCRF and ICRF alike (they differ by 0.02″) and takes TDB as TT (within 2 ms). Between its points a Hermite
/// polynomial through four of them (or as many as the stated degree asks for) and their velocities is taken, never across segments;
/// velocity is the derivative of that polynomial. Files that ask for Lagrange's interpolation are read the same way, since they give
/// velocities too.
#[derive(Debug, Clone)]
pub struct Ephemeris {
    centre: String,
    object: String,
    file: String,
    sha256: String,
    longest_step_s: f64,
    pieces: Arc<Vec<Piece>>,
}

/// One segment: its usable span and its points.
#[derive(Debug, Clone)]
struct Piece {
    from: Epoch,
    to: Epoch,
    points: Vec<Point>,
    order: usize,
}

impl Ephemeris {
    /// Reads the text form of an Orbit Ephemeris Message (CCSDS 502.0-B).
    ///
    /// # Errors
    /// Every fault found, by line, at most 50: what is missing or cannot be read, frames and time systems that are not known, epochs
    /// out of order or outside their span, too few data, gaps, segments that do not go together.
    pub fn parse(text: &str) -> Result<Self, Vec<EphemerisError>> {
        let Reader { segments, mut faults, .. } = Reader::read(text);
        same("centre", segments.iter().map(|segment| &segment.centre), &mut faults);
        same("frame", segments.iter().map(|segment| &segment.frame), &mut faults);
        let mut pieces: Vec<Piece> = Vec::with_capacity(segments.len());
        let (mut first, mut whole) = (None, true);
        for segment in segments {
            let Segment { line, .. } = segment;
            first.get_or_insert_with(|| (segment.object.text.clone(), segment.centre.text.clone()));
            match piece(segment, &mut faults) {
                Some(piece) => {
                    // Next to a segment that could not be used a gap says nothing.
                    if let Some(before) = pieces.last().filter(|_| whole) {
                        follow(before, &piece, line, &mut faults);
                    }
                    whole = true;
                    pieces.push(piece);
                }
                None => whole = false,
            }
        }
        let Some((object, centre)) = first.filter(|_| faults.is_empty()) else { return Err(faults.sorted()) };
        let digit = |four: u8| char::from_digit(u32::from(four), 16).unwrap_or('0');
        let sha256 = Sha256::digest(text).iter().flat_map(|byte| [digit(byte >> 4), digit(byte & 15)]).collect();
        let steps = pieces.iter().flat_map(|piece| piece.points.windows(2)).map(step_s);
        let longest_step_s = steps.fold(0.0, f64::max);
        Ok(Self { centre, object, file: String::new(), sha256, longest_step_s, pieces: Arc::new(pieces) })
    }

    /// Name of the centre, in capitals.
    #[must_use]
    pub fn centre(&self) -> &str {
        &self.centre
    }

    /// Name of the spacecraft in the file, in capitals.
    #[must_use]
    pub fn object(&self) -> &str {
        &self.object
    }

    /// The same, read from `file`.
    #[must_use]
    pub fn named(mut self, file: &str) -> Self {
        file.clone_into(&mut self.file);
        self
    }

    /// The file it was read from, as the configuration names it; empty if it is not known.
    #[must_use]
    pub fn file(&self) -> &str {
        &self.file
    }

    /// SHA-256 of the text it was read from, hexadecimal.
    #[must_use]
    pub fn sha256(&self) -> &str {
        &self.sha256
    }

    /// First usable instant.
    #[must_use]
    pub fn start(&self) -> Epoch {
        self.pieces.first().map_or(Epoch::from_tt_seconds(0.0), |piece| piece.from)
    }

    /// Last usable instant.
    #[must_use]
    pub fn stop(&self) -> Epoch {
        self.pieces.last().map_or(Epoch::from_tt_seconds(0.0), |piece| piece.to)
    }

    /// Longest time between neighbouring points of a segment, s.
    #[must_use]
    pub fn longest_step_s(&self) -> f64 {
        self.longest_step_s
    }

    /// Position and velocity; before the first and after the last usable instant those of that instant.
    #[must_use]
    pub fn state(&self, epoch: Epoch) -> State {
        let at = epoch.tt_seconds().max(self.start().tt_seconds()).min(self.stop().tt_seconds());
        // Pieces rise by their start; of two that overlap the later one holds.
        let after = self.pieces.partition_point(|piece| piece.from.tt_seconds() <= at);
        let piece = self.pieces.get(after.saturating_sub(1));
        piece.map_or(State { position_m: Vector3::zeros(), velocity_m_per_s: Vector3::zeros() }, |piece| piece.state(at))
    }
}

impl Piece {
    fn state(&self, at_s: f64) -> State {
        let after = self.points.partition_point(|point| point.epoch.tt_seconds() <= at_s);
        let last = self.points.len().saturating_sub(self.order);
        let first = after.saturating_sub(self.order.div_ceil(2)).min(last);
        hermite(self.points.get(first..first + self.order).unwrap_or(&self.points), at_s)
    }
}

/// Checks one segment; none if a fault keeps it from being used.
fn piece(segment: Segment, faults: &mut Faults) -> Option<Piece> {
    if segment.points.len() < 2 && !segment.lost {
        let message = match segment.points.len() {
            0 => "the segment has no line of data",
            _ => "the segment has 1 line of data",
        };
        faults.push(segment.line, message, "give at least two, or the time between them cannot be filled");
        return None;
    }
    let ordered = rising(&segment.points, faults);
    if ordered && !segment.lost {
        holes(&segment.points, faults);
    }
    let (start, stop) = (segment.start?, segment.stop?);
    let inside = within(&segment.points, start, stop, faults);
    let from = segment.usable[0].unwrap_or(start);
    let to = segment.usable[1].unwrap_or(stop);
    if to.tt_seconds() <= from.tt_seconds() {
        faults.push(segment.line, format!("the usable span is empty: {from} to {to}"), "correct its start and stop");
        return None;
    }
    if !ordered || !inside || segment.lost {
        return None;
    }
    let (first, last) = (segment.points.first()?.epoch, segment.points.last()?.epoch);
    if from.tt_seconds() < first.tt_seconds() - ROUNDING_S || to.tt_seconds() > last.tt_seconds() + ROUNDING_S {
        let message = format!("the data, {first} to {last}, do not reach over the usable span, {from} to {to}");
        let help = "narrow `USEABLE_START_TIME` and `USEABLE_STOP_TIME` (or `START_TIME`, `STOP_TIME`) to the data";
        faults.push(segment.line, message, help);
    }
    // A Hermite polynomial through n points has the degree 2 n − 1.
    let order = segment.degree.map_or(POINTS, |degree| degree / 2 + 1);
    let order = order.clamp(2, MOST_POINTS).min(segment.points.len());
    Some(Piece { from, to, points: segment.points, order })
}

/// Time between two neighbours, s.
fn step_s(pair: &[Point]) -> f64 {
    if let [a, b] = pair { b.epoch.tt_seconds() - a.epoch.tt_seconds() } else { 0.0 }
}

/// Whether the epochs rise; every one that does not is a fault.
fn rising(points: &[Point], faults: &mut Faults) -> bool {
    let mut ordered = true;
    for pair in points.windows(2).filter(|pair| step_s(pair) <= 0.0) {
        ordered = false;
        if faults.is_full() {
            break;
        }
        if let [a, b] = pair {
            let message = format!("the epochs do not rise: {} after {}", b.epoch, a.epoch);
            faults.push(b.line, message, "put the lines in order of time, each epoch once");
        }
    }
    ordered
}

/// Looks for data that are missing in the middle of a segment.
fn holes(points: &[Point], faults: &mut Faults) {
    for four in points.windows(4) {
        let [_, b, c, _] = four else { continue };
        let step = |k: usize| four.get(k..k + 2).map_or(0.0, step_s);
        if step(1) > HOLE * step(0).max(step(2)) {
            let message = format!("a gap of {:.0} s within a segment: {} to {}", step(1), b.epoch, c.epoch);
            faults.push(c.line, message, "fill the gap, or end the segment before it and begin another");
        }
    }
}

/// Whether all points lie in the span stated; the first that does not is a fault.
fn within(points: &[Point], start: Epoch, stop: Epoch, faults: &mut Faults) -> bool {
    let span = start.tt_seconds() - ROUNDING_S..=stop.tt_seconds() + ROUNDING_S;
    let Some(point) = points.iter().find(|point| !span.contains(&point.epoch.tt_seconds())) else { return true };
    let message = format!("{} lies outside the segment's span, {start} to {stop}", point.epoch);
    faults.push(point.line, message, "correct `START_TIME` and `STOP_TIME`, or the epoch");
    false
}

/// Checks that all segments say the same; an entry without text is a fault already told.
fn same<'a>(what: &str, entries: impl Iterator<Item = &'a Entry>, faults: &mut Faults) {
    let mut entries = entries.filter(|entry| !entry.text.is_empty());
    let Some(first) = entries.next() else { return };
    for other in entries.filter(|entry| entry.text != first.text) {
        let message = format!("the {what} changes from `{}` to `{}`", first.text, other.text);
        faults.push(other.line, message, format!("split the file: one {what} each"));
    }
}

/// Checks that one segment goes on where the one before ended.
fn follow(before: &Piece, after: &Piece, line: usize, faults: &mut Faults) {
    if after.from.tt_seconds() < before.from.tt_seconds() {
        let message = format!("the segments are out of order: {} comes after one that begins at {}", after.from, before.from);
        faults.push(line, message, "put the segments in order of time");
    } else if after.from.tt_seconds() > before.to.tt_seconds() + ROUNDING_S {
        let gap_s = after.from.tt_seconds() - before.to.tt_seconds();
        let message = format!("a gap of {gap_s:.3} s between segments: {} to {}", before.to, after.from);
        faults.push(line, message, "fill the gap, or start the mission after it");
    }
}
