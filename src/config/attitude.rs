//! What the user writes about how the spacecraft is turned.

use schemars::JsonSchema;
use serde::Deserialize;

use super::leaf::{Quantity, SpreadTriple, Triple};
use crate::units::kind;

/// How the spacecraft is turned: `axis` goes `to` a direction exactly, `second_axis` as near `towards` another as it can; or a `survey`, or a `mix`.
#[derive(Debug, Clone, Default, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Attitude {
    /// Body axis that is pointed exactly. Default: `0 0 1`.
    pub axis: Option<Triple<kind::Number>>,
    /// Where it points. Default: `nadir`.
    pub to: Option<Direction>,
    /// Body axis that fixes the rest. Default: with `nadir` and `zenith` `0 -1 0`, otherwise the body's y (or x if `axis` is near y).
    pub second_axis: Option<Triple<kind::Number>>,
    /// Where it points as near as it can. Default: with `nadir`, `zenith` and `velocity` the orbit normal, in a survey the Sun, otherwise `ecliptic_north`.
    pub towards: Option<Direction>,
    /// Rate at which the body spins about `axis`, such as `5 rpm`. Default: it does not.
    pub spin: Option<Quantity<kind::AngularRate>>,
    /// Inertial pointings of `axis` one after the other, spread evenly over what the Sun allows; without `to`.
    pub survey: Option<Survey>,
    /// Several attitudes in turn; without `axis` and what goes with it.
    pub mix: Option<Mix>,
    /// Constant rotation of the body from this attitude, small angles about x, y, z, such as `0 1.5 0 ± 0.2 deg`. Default: zero.
    pub bias: Option<SpreadTriple<kind::Angle>>,
}

/// A direction that an axis can be pointed in.
#[derive(Debug, Clone, Copy, PartialEq, Deserialize, JsonSchema)]
#[serde(rename_all = "snake_case")]
pub enum Direction {
    /// To the centre of the body that is orbited.
    Nadir,
    /// Away from it.
    Zenith,
    /// To the Sun.
    Sun,
    /// Away from the Sun.
    AntiSun,
    /// To the Earth.
    Earth,
    /// Along the velocity.
    Velocity,
    /// Against the velocity.
    AntiVelocity,
    /// Along the orbital angular momentum.
    OrbitNormal,
    /// To the north pole of the ecliptic.
    EclipticNorth,
    /// To the north pole of the equator of J2000.
    CelestialNorth,
    /// To a place of the sky.
    Sky(Sky),
}

/// A place of the sky, by the equator and equinox of J2000.
#[derive(Debug, Clone, Copy, PartialEq, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Sky {
    /// Right ascension, such as `83.6 deg`.
    pub right_ascension: Quantity<kind::Angle>,
    /// Declination, such as `22 deg`.
    pub declination: Quantity<kind::Angle>,
}

/// Inertial pointings one after the other.
#[derive(Debug, Clone, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Survey {
    /// Least angle between `axis` and the Sun, such as `60 deg`.
    pub sun_angle_from: Quantity<kind::Angle>,
    /// Largest angle between `axis` and the Sun, such as `120 deg`.
    pub sun_angle_to: Quantity<kind::Angle>,
    /// Time at one pointing, such as `12 h`.
    pub dwell: Quantity<kind::Time>,
    /// Seed of the sequence, a whole number. Default: 1.
    pub seed: Option<u64>,
}

/// Several attitudes in turn.
#[derive(Debug, Clone, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Mix {
    /// Time after which the turns begin anew, such as `1 d`.
    pub period: Quantity<kind::Time>,
    /// The attitudes in order; their shares add up to 1. Turning from one to the next takes no time.
    pub of: Vec<Part>,
}

/// One attitude of several.
#[derive(Debug, Clone, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Part {
    /// Share of the time, such as `80 %`.
    pub share: Quantity<kind::Number>,
    /// As in `attitude`.
    pub axis: Option<Triple<kind::Number>>,
    /// As in `attitude`.
    pub to: Option<Direction>,
    /// As in `attitude`.
    pub second_axis: Option<Triple<kind::Number>>,
    /// As in `attitude`.
    pub towards: Option<Direction>,
    /// As in `attitude`.
    pub spin: Option<Quantity<kind::AngularRate>>,
    /// As in `attitude`.
    pub survey: Option<Survey>,
}
