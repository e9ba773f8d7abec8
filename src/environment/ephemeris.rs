//! A path read from an ephemeris file, interpolated.

use std::sync::Arc;

use nalgebra::Vector3;
use sha2::{Digest, Sha256};

use super::epoch::Epoch;
use super::oem::{EphemerisError, Point, Reader, Segment};
use super::orbit::State;

/// Points that a Hermite polynomial runs through by default: degree 7.
const POINTS: usize = 4;
/// Most points: beyond this a polynomial swings between its ends.
const MOST_POINTS: usize = 8;
/// A step this many times as long as both its neighbours is a hole in the data.
const HOLE: f64 = 8.0;
/// A gap between segments, or epochs outside a stated span, up to this are the rounding of the file's digits, s.
const ROUNDING_S: f64 = 1e-3;

/// Positions and velocities over time, in I, from a centre named by the file.
///
/// Between its points a Hermite polynomial through four of them (or as many as the stated degree asks for) and their
/// velocities is taken, never across segments; velocity is the derivative of that polynomial. Files that ask for Lagrange's
/// interpolation are read the same way, since they give velocities too.
#[derive(Debug, Clone)]
pub struct Ephemeris {
    centre: String,
    object: String,
    file: String,
    sha256: String,
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
    /// Every fault found, at most 50 and those of the checks between segments: what is missing or cannot be read, frames
    /// and time systems that are not known, epochs out of order, gaps.
    pub fn parse(text: &str) -> Result<Self, Vec<EphemerisError>> {
        let Reader { segments, mut faults, .. } = Reader::read(text);
        let pieces: Vec<Option<Piece>> = segments.iter().map(|segment| piece(segment, &mut faults)).collect();
        let pieces: Option<Vec<Piece>> = pieces.into_iter().collect();
        let (Some(pieces), Some(first)) = (pieces, segments.first()) else { return Err(faults) };
        for (pair, lines) in pieces.windows(2).zip(segments.windows(2)) {
            if let ([before, after], [_, segment]) = (pair, lines) {
                follow(before, after, segment.line, &mut faults);
            }
        }
        if let Some(other) = segments.iter().find(|segment| segment.centre != first.centre) {
            let message = format!("the centre changes from `{}` to `{}`", first.centre, other.centre);
            faults.push(EphemerisError { line: other.line, message, help: "split the file: one centre each".to_owned() });
        }
        if !faults.is_empty() {
            return Err(faults);
        }
        let digit = |four: u8| char::from_digit(u32::from(four), 16).unwrap_or('0');
        let sha256 = Sha256::digest(text).iter().flat_map(|byte| [digit(byte >> 4), digit(byte & 15)]).collect();
        Ok(Self { centre: first.centre.clone(), object: first.object.clone(), file: String::new(), sha256, pieces: Arc::new(pieces) })
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

    /// Position and velocity; before the first and after the last usable instant those of that instant.
    #[must_use]
    pub fn state(&self, epoch: Epoch) -> State {
        let at = epoch.tt_seconds().clamp(self.start().tt_seconds(), self.stop().tt_seconds());
        // Of two pieces that overlap the later one holds.
        let piece = self.pieces.iter().rev().find(|piece| piece.from.tt_seconds() <= at).or_else(|| self.pieces.first());
        piece.map_or(State { position_m: Vector3::zeros(), velocity_m_per_s: Vector3::zeros() }, |piece| piece.state(at))
    }
}

/// Checks one segment.
fn piece(segment: &Segment, faults: &mut Vec<EphemerisError>) -> Option<Piece> {
    let before = faults.len();
    let mut fault = |line: usize, message: String, help: &str| faults.push(EphemerisError { line, message, help: help.to_owned() });
    let (start, stop) = (segment.start?, segment.stop?);
    if segment.points.len() < 2 {
        let message = format!("the segment has {} lines of data", segment.points.len());
        fault(segment.line, message, "give at least two, or the time between them cannot be filled");
        return None;
    }
    for pair in segment.points.windows(2) {
        if let [a, b] = pair
            && b.epoch.tt_seconds() <= a.epoch.tt_seconds()
        {
            fault(
                b.line,
                format!("the epochs do not rise: {} after {}", b.epoch, a.epoch),
                "put the lines in order of time, each epoch once",
            );
        }
    }
    for four in segment.points.windows(4) {
        if let [a, b, c, d] = four {
            let step = |from: &Point, to: &Point| to.epoch.tt_seconds() - from.epoch.tt_seconds();
            if step(b, c) > HOLE * step(a, b).max(step(c, d)) {
                let message = format!("a gap of {:.0} s within a segment: {} to {}", step(b, c), b.epoch, c.epoch);
                fault(c.line, message, "fill the gap, or end the segment before it and begin another");
            }
        }
    }
    for point in &segment.points {
        let t = point.epoch.tt_seconds();
        if t < start.tt_seconds() - ROUNDING_S || t > stop.tt_seconds() + ROUNDING_S {
            let message = format!("{} lies outside the segment's span, {start} to {stop}", point.epoch);
            fault(point.line, message, "correct `START_TIME` and `STOP_TIME`, or the epoch");
            break;
        }
    }
    let (first, last) = (segment.points.first()?, segment.points.last()?);
    let from = segment.usable[0].unwrap_or(start);
    let to = segment.usable[1].unwrap_or(stop);
    if from.tt_seconds() < first.epoch.tt_seconds() - ROUNDING_S || to.tt_seconds() > last.epoch.tt_seconds() + ROUNDING_S {
        let message = format!("the data, {} to {}, do not reach over the usable span, {from} to {to}", first.epoch, last.epoch);
        fault(segment.line, message, "narrow `USEABLE_START_TIME` and `USEABLE_STOP_TIME` (or `START_TIME`, `STOP_TIME`) to the data");
    }
    if to.tt_seconds() <= from.tt_seconds() {
        fault(segment.line, format!("the usable span is empty: {from} to {to}"), "correct its start and stop");
    }
    // A Hermite polynomial through n points has the degree 2 n − 1.
    let order = segment.degree.map_or(POINTS, |degree| degree.div_ceil(2) + usize::from(degree % 2 == 0 && degree > 0));
    let order = order.clamp(2, MOST_POINTS).min(segment.points.len());
    (faults.len() == before).then(|| Piece { from, to, points: segment.points.clone(), order })
}

/// Checks that one segment goes on where the one before ended.
fn follow(before: &Piece, after: &Piece, line: usize, faults: &mut Vec<EphemerisError>) {
    let mut fault = |message: String, help: &str| faults.push(EphemerisError { line, message, help: help.to_owned() });
    if after.from.tt_seconds() < before.from.tt_seconds() {
        fault(
            format!("the segments are out of order: {} comes after one that begins at {}", after.from, before.from),
            "put the segments in order of time",
        );
    } else if after.from.tt_seconds() > before.to.tt_seconds() + ROUNDING_S {
        let gap_s = after.from.tt_seconds() - before.to.tt_seconds();
        fault(format!("a gap of {gap_s:.0} s: {} to {}", before.to, after.from), "fill the gap, or start the mission after it");
    }
}

impl Piece {
    fn state(&self, at_s: f64) -> State {
        let after = self.points.partition_point(|point| point.epoch.tt_seconds() <= at_s);
        let last = self.points.len() - self.order;
        let first = after.saturating_sub(self.order / 2 + self.order % 2).min(last);
        let points = self.points.get(first..first + self.order).unwrap_or(&self.points);
        hermite(points, at_s)
    }
}

/// Hermite's polynomial through points and velocities, by divided differences with each node taken twice; its derivative.
///
/// Source: any text on numerical analysis, such as J. Stoer and R. Bulirsch, Introduction to Numerical Analysis, 2.1.5.
fn hermite(points: &[Point], at_s: f64) -> State {
    let Some(origin) = points.first().map(|point| point.epoch.tt_seconds()) else {
        return State { position_m: Vector3::zeros(), velocity_m_per_s: Vector3::zeros() };
    };
    let nodes: Vec<f64> = points.iter().flat_map(|point| [point.epoch.tt_seconds() - origin; 2]).collect();
    let mut table: Vec<Vector3<f64>> = points.iter().flat_map(|point| [Vector3::from(point.position_m); 2]).collect();
    let slopes: Vec<Vector3<f64>> = points.iter().map(|point| Vector3::from(point.velocity_m_per_s)).collect();
    let mut coefficients = vec![table.first().copied().unwrap_or_else(Vector3::zeros)];
    for level in 1..nodes.len() {
        let next = (0..nodes.len() - level).map(|k| {
            let width = nodes[k + level] - nodes[k];
            if level == 1 && k % 2 == 0 { slopes[k / 2] } else { (table[k + 1] - table[k]) / width }
        });
        table = next.collect();
        coefficients.extend(table.first());
    }
    let t = at_s - origin;
    let (mut position_m, mut velocity_m_per_s) = (Vector3::zeros(), Vector3::zeros());
    for (coefficient, node) in coefficients.iter().zip(&nodes).rev() {
        velocity_m_per_s = velocity_m_per_s * (t - node) + position_m;
        position_m = position_m * (t - node) + coefficient;
    }
    State { position_m, velocity_m_per_s }
}
