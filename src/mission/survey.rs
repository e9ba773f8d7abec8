//! Inertial pointings one after the other, spread evenly over what the Sun allows.

use std::f64::consts::TAU;

use nalgebra::Vector3;
use sha2::{Digest, Sha256};

use super::pointing::{Direction, Pointing, Sky};
use crate::environment::ECLIPTIC_NORTH;

/// The plastic number's powers: steps of the evenly spread sequence in two dimensions.
///
/// Source: M. Roberts' R2 sequence, after the generalised golden ratio of H. Harris and K. Hensley.
const STEPS: [f64; 2] = [0.754_877_666_246_692_8, 0.569_840_290_998_053_2];

/// A sequence of inertial pointings.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Survey {
    /// Body axis that is pointed, unit.
    pub axis: Vector3<f64>,
    /// Body axis that fixes the rest, unit, not along `axis`.
    pub second_axis: Vector3<f64>,
    /// Where it points as near as it can; against it if the second is true.
    pub towards: (Direction, bool),
    /// Least and largest angle between `axis` and the Sun, rad.
    pub sun_angle_rad: [f64; 2],
    /// Time at one pointing, s.
    pub dwell_s: f64,
    /// Where the sequence begins, each in [0, 1).
    pub shift: [f64; 2],
}

/// Where a sequence of a seed begins.
#[must_use]
pub(super) fn shift(seed: u64) -> [f64; 2] {
    let digest = Sha256::digest(seed.to_le_bytes());
    let part = |from: usize| {
        let bytes = digest.iter().skip(from).take(6).fold(0_u64, |sum, byte| sum << 8 | u64::from(*byte));
        bytes as f64 / 2_f64.powi(48)
    };
    [part(0), part(6)]
}

impl Survey {
    /// Index of the pointing at a time after the start of the phase, and the middle of its dwell, s.
    #[must_use]
    pub fn dwell_at(&self, time_s: f64) -> (f64, f64) {
        let index = (time_s / self.dwell_s).floor();
        (index, (index + 0.5) * self.dwell_s)
    }

    /// The pointing of an index: the axis evenly spread over the ring about the Sun (in cosine of the angle from it and
    /// angle about it), both axes fixed in I by the sky at the middle of the dwell.
    #[must_use]
    pub fn pointing(&self, index: f64, middle: &Sky) -> Pointing {
        let part = |k: usize| (0.5 + self.shift[k] + index * STEPS[k]).rem_euclid(1.0);
        let [least, largest] = self.sun_angle_rad.map(f64::cos);
        let cos = least + part(0) * (largest - least);
        let sin = (1.0 - cos * cos).max(0.0).sqrt();
        let sun = middle.direction(&Direction::Sun);
        let east = ECLIPTIC_NORTH.cross(&sun).try_normalize(1e-9).unwrap_or_else(Vector3::x);
        let north = sun.cross(&east);
        let (s, c) = (TAU * part(1)).sin_cos();
        let target = sun * cos + (east * c + north * s) * sin;
        let second = middle.direction(&self.towards.0);
        Pointing {
            axis: self.axis,
            to: (Direction::Fixed(target), false),
            second_axis: self.second_axis,
            towards: (Direction::Fixed(second), self.towards.1),
        }
    }
}
