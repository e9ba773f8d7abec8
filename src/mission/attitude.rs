//! How the spacecraft is turned over time.

use nalgebra::{Rotation3, Unit, Vector3};

use super::pointing::{Pointing, Sky};
use super::survey::Survey;
use crate::environment::{Epoch, Trajectory};
use crate::uncertain::Uncertain;

/// A rule that gives the attitude at every instant.
#[derive(Debug, Clone, PartialEq)]
pub enum Law {
    /// Two directions, followed.
    Pointing(Pointing),
    /// The same, turning about the first axis at a rate, rad/s.
    Spin(Pointing, f64),
    /// One inertial pointing after the other.
    Survey(Survey),
    /// Several in turn: the period, s, and each law with its share.
    Mix(f64, Vec<(f64, Law)>),
}

/// The attitude of a phase: a law, and a constant bias of the body from it.
#[derive(Debug, Clone)]
pub struct Attitude {
    /// The law.
    pub law: Law,
    /// Rotation vector from the frame of the law to the body, about x, y, z, rad.
    pub bias_rad: [Uncertain; 3],
}

/// An instant of a phase.
#[derive(Debug, Clone, Copy)]
pub struct Moment<'a> {
    /// Where the spacecraft goes.
    pub trajectory: &'a Trajectory,
    /// Start of the phase.
    pub start: Epoch,
    /// Time after it, s.
    pub time_s: f64,
}

impl Moment<'_> {
    /// The sky then.
    #[must_use]
    pub fn sky(&self) -> Sky {
        self.sky_at(self.time_s)
    }

    fn sky_at(&self, time_s: f64) -> Sky {
        Sky::at(self.trajectory, self.start.plus_seconds(time_s))
    }
}

impl Attitude {
    /// Rotation from the body frame (nominal bias) to I; `sky` is that of the moment.
    #[must_use]
    pub fn inertial_from_body(&self, moment: &Moment<'_>, sky: &Sky) -> Rotation3<f64> {
        let bias = Vector3::from(self.bias_rad.each_ref().map(Uncertain::nominal));
        self.law.inertial_from_body(moment, sky) * Rotation3::new(bias)
    }
}

impl Law {
    /// Rotation from the frame of the law to I.
    #[must_use]
    pub fn inertial_from_body(&self, moment: &Moment<'_>, sky: &Sky) -> Rotation3<f64> {
        match self {
            Self::Pointing(pointing) => pointing.inertial_from_body(sky),
            Self::Spin(pointing, rate) => {
                let axis = Unit::new_unchecked(pointing.axis);
                pointing.inertial_from_body(sky) * Rotation3::from_axis_angle(&axis, rate * moment.time_s)
            }
            Self::Survey(survey) => {
                let (index, middle_s) = survey.dwell_at(moment.time_s);
                let middle = moment.sky_at(middle_s);
                survey.pointing(index, &middle).inertial_from_body(&middle)
            }
            Self::Mix(..) => self.at(moment.time_s).inertial_from_body(moment, sky),
        }
    }

    /// The law that holds at a time after the start of the phase: this one, or the part of the mix whose turn it is.
    #[must_use]
    pub fn at(&self, time_s: f64) -> &Self {
        let Self::Mix(period_s, parts) = self else { return self };
        let mut left = (time_s / period_s).rem_euclid(1.0);
        for (share, law) in parts {
            if left < *share {
                return law;
            }
            left -= share;
        }
        parts.last().map_or(self, |(_, law)| law)
    }

    /// Body axis and rate, rad/s, of the spin at a time after the start of the phase.
    #[must_use]
    pub fn spin_at(&self, time_s: f64) -> Option<(Unit<Vector3<f64>>, f64)> {
        match self.at(time_s) {
            Self::Spin(pointing, rate) => Some((Unit::new_unchecked(pointing.axis), *rate)),
            _ => None,
        }
    }

    /// The next time after `time_s` at which the attitude jumps: the end of a dwell or of a part of a mix.
    #[must_use]
    pub fn next_jump_s(&self, time_s: f64) -> Option<f64> {
        match self {
            Self::Pointing(_) | Self::Spin(..) => None,
            Self::Survey(survey) => Some((survey.dwell_at(time_s).0 + 1.0) * survey.dwell_s),
            Self::Mix(period_s, parts) => {
                let turn = (time_s / period_s).floor() * period_s;
                let mut end = turn;
                for (share, law) in parts {
                    end += share * period_s;
                    if time_s < end {
                        return Some(law.next_jump_s(time_s).map_or(end, |own| own.min(end)));
                    }
                }
                Some(turn + period_s)
            }
        }
    }

    /// The pointings whose two directions are given by the user, for checking that they fix an attitude.
    pub(super) fn pointings(&self) -> Vec<&Pointing> {
        match self {
            Self::Pointing(pointing) | Self::Spin(pointing, _) => vec![pointing],
            Self::Survey(_) => Vec::new(),
            Self::Mix(_, parts) => parts.iter().flat_map(|(_, law)| law.pointings()).collect(),
        }
    }

    /// Time at one attitude of a survey, s, if there is one.
    #[must_use]
    pub fn dwell_s(&self) -> Option<f64> {
        match self {
            Self::Survey(survey) => Some(survey.dwell_s),
            Self::Mix(period_s, parts) => Some(parts.iter().filter_map(|(_, law)| law.dwell_s()).fold(*period_s, f64::max)),
            Self::Pointing(_) | Self::Spin(..) => None,
        }
    }
}
