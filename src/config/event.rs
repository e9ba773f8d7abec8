//! What the user writes about what takes propellant besides unloading.

use schemars::JsonSchema;
use serde::Deserialize;

use super::leaf::{Quantity, SpreadQuantity, SpreadTriple, Triple};
use crate::units::kind;

/// One thing that takes propellant: give one of `rate_damping`, `slews`, `burn`, `deadband`, `spin`, `axis_turn`, `safe_mode`.
#[derive(Debug, Clone, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Event {
    /// Name, such as `tip-off`.
    pub name: String,
    /// When it happens. Default: damping and spin at the start of the phase, all else spread evenly over it.
    pub when: Option<When>,
    /// Damping of the rates after separation.
    pub rate_damping: Option<RateDamping>,
    /// Slews made on thrusters.
    pub slews: Option<Slews>,
    /// Orbit burns.
    pub burn: Option<Burn>,
    /// Time in which thrusters hold the attitude within a band.
    pub deadband: Option<Deadband>,
    /// A change of the spin.
    pub spin: Option<SpinChange>,
    /// Turns of the axis of a spin.
    pub axis_turn: Option<AxisTurn>,
    /// Days in safe mode, held within a band.
    pub safe_mode: Option<SafeMode>,
}

/// When an event happens.
#[derive(Debug, Clone, PartialEq, Eq, Deserialize, JsonSchema)]
#[serde(rename_all = "snake_case")]
pub enum When {
    /// At the start of the phase.
    Start,
    /// At its end.
    End,
    /// Spread evenly over it.
    Spread,
    /// On dates within it, ISO 8601, such as `{on: [2030-05-01, 2031-05-01]}`; a count holds for each.
    On(Vec<String>),
}

/// Damping of body rates with thrusters.
#[derive(Debug, Clone, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct RateDamping {
    /// Rates about x, y, z before damping, such as `0 0 0 ± 0.8 deg/s`.
    pub rates: SpreadTriple<kind::AngularRate>,
}

/// Rest-to-rest slews on thrusters.
#[derive(Debug, Clone, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Slews {
    /// Axis of the rotation in the body frame, any length but zero.
    pub axis: Triple<kind::Number>,
    /// Angle of one slew, such as `90 deg`.
    pub angle: Quantity<kind::Angle>,
    /// Highest rate; a slew too short to reach it is limited by the torque of the thrusters. Such as `0.3 deg/s`.
    pub rate: Quantity<kind::AngularRate>,
    /// How many in the phase, such as `24 ± 6`.
    pub count: SpreadQuantity<kind::Number>,
}

/// Orbit burns, and how the attitude is held during them. Give `engine` or `thrusters`.
#[derive(Debug, Clone, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Burn {
    /// Δv of one burn, such as `1.2 ± 0.05 m/s`.
    pub delta_v: SpreadQuantity<kind::Speed>,
    /// How many in the phase. Default: 1.
    pub count: Option<SpreadQuantity<kind::Number>>,
    /// Name of one of `engines`.
    pub engine: Option<String>,
    /// Names of thrusters that burn together.
    #[serde(default)]
    pub thrusters: Vec<String>,
    /// How the attitude is held. Default: `thrusters`.
    #[serde(default)]
    pub hold: Hold,
}

/// How the attitude is held during a burn.
#[derive(Debug, Clone, Copy, Default, PartialEq, Eq, Deserialize, JsonSchema)]
#[serde(rename_all = "snake_case")]
pub enum Hold {
    /// The other thrusters fire against the torque of the burn.
    #[default]
    Thrusters,
    /// The burning thrusters are switched off in turn; the burn gets longer.
    OffModulation,
    /// Nothing that takes propellant: wheels or a gimbal.
    None,
}

/// Time in which thrusters hold the attitude within a band, each body axis by itself.
#[derive(Debug, Clone, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Deadband {
    /// How long in the phase, such as `20 d`.
    pub time: SpreadQuantity<kind::Time>,
    /// Half the width of the band, such as `0.5 deg`.
    pub half_width: Quantity<kind::Angle>,
    /// Disturbance torque about x, y, z, such as `1e-4 0 2e-5 N m`. Default: none.
    pub disturbance: Option<SpreadTriple<kind::Torque>>,
}

/// A change of the spin.
#[derive(Debug, Clone, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct SpinChange {
    /// Axis in the body frame, any length but zero.
    pub axis: Triple<kind::Number>,
    /// Rate before, such as `0 rpm`. Default: 0.
    pub from: Option<Quantity<kind::AngularRate>>,
    /// Rate after, such as `5 rpm`.
    pub to: Quantity<kind::AngularRate>,
    /// How often in the phase. Default: 1.
    pub count: Option<SpreadQuantity<kind::Number>>,
}

/// Turns of the axis of a spin.
#[derive(Debug, Clone, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct AxisTurn {
    /// Axis of the spin in the body frame, any length but zero.
    pub axis: Triple<kind::Number>,
    /// Rate of the spin, such as `5 rpm`.
    pub rate: Quantity<kind::AngularRate>,
    /// Angle of one turn, such as `30 deg`.
    pub angle: Quantity<kind::Angle>,
    /// Angle by which the body turns during one pulse, such as `45 deg`. Default: 0.
    pub arc: Option<Quantity<kind::Angle>>,
    /// How many in the phase, such as `12 ± 2`.
    pub count: SpreadQuantity<kind::Number>,
}

/// Days in safe mode, held within a band.
#[derive(Debug, Clone, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct SafeMode {
    /// Days a year, such as `4 .. 8`.
    pub days_per_year: SpreadQuantity<kind::Number>,
    /// Half the width of the band, such as `2 deg`.
    pub half_width: Quantity<kind::Angle>,
    /// Disturbance torque about x, y, z, such as `1e-4 0 2e-5 N m`. Default: none.
    pub disturbance: Option<SpreadTriple<kind::Torque>>,
}
