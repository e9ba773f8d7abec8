//! What the user writes about the spacecraft: the keys, with their meaning, unit and default.
//!
//! The doc comments become the JSON Schema and the reference in docs/config.md.

use schemars::JsonSchema;
use serde::Deserialize;

use super::leaf::{Quantity, SpreadQuantity, SpreadTriple, Triple};
use crate::units::kind;

/// Mass properties and the disturbances that the spacecraft itself makes.
#[derive(Debug, Clone, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Spacecraft {
    /// Name that the reports carry.
    pub name: String,
    /// Mass without propellant, such as `446 ± 9 kg`.
    pub dry_mass: SpreadQuantity<kind::Mass>,
    /// Centre of mass without propellant, in the body frame, such as `0.01 0 0.74 m`.
    pub centre_of_mass: SpreadTriple<kind::Length>,
    /// Half widths of the box in which the centre of mass is stated to lie, for the layout's worst corner, such as `5 5 10 mm`. Default: none.
    pub centre_of_mass_box: Option<Triple<kind::Length>>,
    /// Moments of inertia Ixx, Iyy, Izz without propellant about that centre of mass, such as `92 118 85 kg m2`.
    pub inertia: SpreadTriple<kind::Inertia>,
    /// Elements Ixy, Ixz, Iyz of the inertia matrix (with their sign in the matrix), such as `1.5 -0.8 2 kg m2`. Default: zero.
    pub products_of_inertia: Option<SpreadTriple<kind::Inertia>>,
    /// Residual magnetic dipole in the body frame, such as `0.6 0.3 0.4 ± 0.2 A m2`. Default: zero.
    pub residual_dipole: Option<SpreadTriple<kind::Dipole>>,
    /// Constant torque of the spacecraft on itself in the body frame (heat rejection, antenna recoil, outgassing), such as `2 0 -1 uN m`. Default: zero.
    pub body_torque: Option<SpreadTriple<kind::Torque>>,
}

/// How a kind of surface meets light and air.
#[derive(Debug, Clone, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Material {
    /// Name, such as `solar cell`.
    pub name: String,
    /// Share of light reflected like a mirror, 0 to 1, such as `0.1 ± 0.01`.
    pub specular: SpreadQuantity<kind::Number>,
    /// Share of light reflected diffusely, 0 to 1, such as `0.2 ± 0.02`.
    pub diffuse: SpreadQuantity<kind::Number>,
    /// Drag coefficient. Default: `environment.drag_coefficient`.
    pub drag_coefficient: Option<SpreadQuantity<kind::Number>>,
}

/// One flat facet of the outside of the spacecraft.
#[derive(Debug, Clone, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Surface {
    /// Name of the facet.
    pub name: String,
    /// Area, such as `3.2 m2`.
    pub area: Quantity<kind::Area>,
    /// Centre of pressure in the body frame, such as `0.9 0 0.7 m`.
    pub centre: Triple<kind::Length>,
    /// Outward normal in the body frame, any length but zero, such as `1 0 0`.
    pub normal: Triple<kind::Number>,
    /// Name of its material, one of `materials`.
    pub material: String,
    /// Whether the back of the facet sees Sun and air as well, such as a solar array. Default: false.
    #[serde(default)]
    pub both_sides: bool,
    /// Body axis about which the facet turns so that its normal follows the Sun, such as `0 1 0`. Default: fixed.
    pub follows_sun_about: Option<Triple<kind::Number>>,
    /// Another surface that takes the sunlight from it. Default: none; facets hide nothing from one another by themselves.
    pub shaded: Option<Shaded>,
}

/// Where another surface takes the sunlight from a facet.
#[derive(Debug, Clone, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Shaded {
    /// Name of the surface that hides the Sun, one of `surfaces`.
    pub by: String,
    /// Least angle between the Sun and that surface's normal at which it does, such as `0 deg`. Default: `0 deg`.
    pub from: Option<Quantity<kind::Angle>>,
    /// Largest such angle, such as `50 deg`.
    pub to: Quantity<kind::Angle>,
}

/// What all thrusters share, unless one says otherwise.
#[derive(Debug, Clone, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Propulsion {
    /// Thrust of one thruster, such as `1 N ± 3 %`.
    pub thrust: Option<SpreadQuantity<kind::Force>>,
    /// Specific impulse in steady firing, such as `215 s ± 2 %`; or give `exhaust_speed`.
    pub isp: Option<SpreadQuantity<kind::Time>>,
    /// Exhaust speed in steady firing, such as `2108 m/s`; or give `isp`.
    pub exhaust_speed: Option<SpreadQuantity<kind::Speed>>,
    /// Shortest on-time of a pulse, such as `20 ms`.
    pub shortest_pulse: Quantity<kind::Time>,
    /// Longest on-time of a pulse, such as `500 ms`.
    pub longest_pulse: Quantity<kind::Time>,
    /// How much of the steady exhaust speed a pulse reaches, by on-time. Between the entries a straight line; beyond them the last value. Default: all of it.
    #[serde(default)]
    pub pulse_performance: Vec<PulsePerformance>,
    /// Largest share of the time a thruster may be on during an unload, such as `10 %`. Default: `10 %`.
    pub duty_cycle: Option<Quantity<kind::Number>>,
    /// Half-angle of the cone in which the push of a thruster lies, such as `0.5 deg`. Default: exact.
    pub alignment: Option<Quantity<kind::Angle>>,
    /// How far the thrust of one thruster may lie from its nominal value, either way, for parasitic torque and force, such as `5 %`. Default: exact.
    pub thrust_tolerance: Option<Quantity<kind::Number>>,
    /// Plume, for the check against the facets. Default: not checked.
    pub plume: Option<Plume>,
    /// Whether an unload may leave a net force: `zero` fires couples only, `any` takes the least propellant. Default: `zero`.
    #[serde(default)]
    pub net_force: NetForceChoice,
    /// What happens where an unload that is due asks a thruster for less than its shortest pulse. Default: `carry`.
    #[serde(default)]
    pub small_unload: SmallUnload,
    /// Pulses that one thruster is qualified for. Default: not stated, not checked.
    pub qualified_pulses: Option<Quantity<kind::Number>>,
    /// Propellant that one thruster is qualified to pass, such as `60 kg`. Default: not stated, not checked.
    pub qualified_throughput: Option<Quantity<kind::Mass>>,
    /// How thrust and exhaust speed of thrusters and engines follow the feed pressure. Default: thrust in proportion, exhaust speed not at all.
    pub pressure_law: Option<PressureLaw>,
    /// Thrusters and strings that may be lost. Default: none.
    #[serde(default)]
    pub failures: Vec<Failure>,
}

/// A thruster or a string that may be lost during the mission.
#[derive(Debug, Clone, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Failure {
    /// Name, such as `valve of string A`.
    pub name: String,
    /// Name of the thruster or the string that is lost.
    pub out: String,
    /// Probability that it happens at all, such as `2 %`.
    pub probability: Quantity<kind::Number>,
    /// Time after the start of the mission from which on it is lost, such as `3 yr` or `0 .. 7 yr`. Default: from the start.
    pub from: Option<SpreadQuantity<kind::Time>>,
    /// Whether unloads may leave a net force from then on. Default: `propulsion.net_force`.
    pub net_force: Option<NetForceChoice>,
}

/// A plume as a cone.
#[derive(Debug, Clone, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Plume {
    /// Half-angle, such as `30 deg`.
    pub half_angle: Quantity<kind::Angle>,
    /// Range within which it matters, such as `2 m`.
    pub range: Quantity<kind::Length>,
}

/// Whether an unload may push the spacecraft.
#[derive(Debug, Clone, Copy, Default, PartialEq, Eq, Deserialize, JsonSchema)]
#[serde(rename_all = "snake_case")]
pub enum NetForceChoice {
    /// Couples only: the forces add up to nothing.
    #[default]
    Zero,
    /// Whatever takes the least propellant.
    Any,
}

/// What happens where an unload that is due asks a thruster for less than its shortest pulse.
#[derive(Debug, Clone, Copy, Default, PartialEq, Eq, Deserialize, JsonSchema)]
#[serde(rename_all = "snake_case")]
pub enum SmallUnload {
    /// What is left over stays in the wheels and is carried on until a whole pulse is due.
    #[default]
    Carry,
    /// The unload waits for as many intervals as it takes until every thruster makes a whole pulse.
    Wait,
}

/// One point of the pulse performance: at this on-time, this share of the steady exhaust speed.
#[derive(Debug, Clone, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct PulsePerformance {
    /// On-time, such as `20 ms`.
    pub on_time: Quantity<kind::Time>,
    /// Share of the steady exhaust speed, such as `72 %`.
    pub share: Quantity<kind::Number>,
}

/// One thruster.
#[derive(Debug, Clone, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Thruster {
    /// Name, such as `A1`.
    pub name: String,
    /// String: the group of thrusters behind one latch valve, such as `A`. Default: a string of its own.
    pub string: Option<String>,
    /// Position of the nozzle in the body frame, such as `0.9 0.6 0.1 m`.
    pub position: Triple<kind::Length>,
    /// Direction in which it pushes the spacecraft, any length but zero, such as `0 0 1`; or give `plume`.
    pub push: Option<Triple<kind::Number>>,
    /// Direction in which the plume leaves, opposite to the push; or give `push`.
    pub plume: Option<Triple<kind::Number>>,
    /// Copies of it by symmetry: it then stands for thrusters of its name with 1, 2 and so on behind it.
    pub copies: Option<Copies>,
    /// Share of the thrust lost where the plume meets the spacecraft, such as `3 %`. Default: none.
    pub plume_loss: Option<Quantity<kind::Number>>,
    /// Thrust of this one. Default: `propulsion.thrust`.
    pub thrust: Option<SpreadQuantity<kind::Force>>,
    /// Specific impulse of this one. Default: that of `propulsion`.
    pub isp: Option<SpreadQuantity<kind::Time>>,
    /// Exhaust speed of this one. Default: that of `propulsion`.
    pub exhaust_speed: Option<SpreadQuantity<kind::Speed>>,
}

/// Copies of a thruster by symmetry: give `mirror` or `fold`.
#[derive(Debug, Clone, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Copies {
    /// Axes along which position and push are mirrored, such as `[x, y]`, which makes four of one.
    #[serde(default)]
    pub mirror: Vec<BodyAxis>,
    /// How many there are in all, evenly turned about an axis, such as `4`.
    pub fold: Option<u64>,
    /// That axis, through the origin. Default: `z`.
    pub about: Option<BodyAxis>,
}

/// An axis of the body frame.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Deserialize, JsonSchema)]
#[serde(rename_all = "snake_case")]
pub enum BodyAxis {
    /// x.
    X,
    /// y.
    Y,
    /// z.
    Z,
}

/// The propellant: in one tank, given by `loaded` and `position`, or in several `tanks`.
#[derive(Debug, Clone, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Tank {
    /// Propellant loaded, such as `34 kg`.
    pub loaded: Option<Quantity<kind::Mass>>,
    /// Centre of the tank in the body frame, such as `0 0 0.5 m`.
    pub position: Option<Triple<kind::Length>>,
    /// Several tanks, drained one after the other in the order of this list.
    #[serde(default)]
    pub tanks: Vec<OneTank>,
    /// Expansion of a gas that presses the propellant out. Default: a regulator holds the feed pressure constant.
    pub blowdown: Option<Blowdown>,
    /// Error of the mass loaded, such as `0 ± 0.2 kg`; above zero is more than stated. Default: none.
    pub loading_error: Option<SpreadQuantity<kind::Mass>>,
    /// Propellant that cannot be used, as a share of what is loaded, such as `2 %`. Default: none.
    pub residual: Option<SpreadQuantity<kind::Number>>,
    /// Propellant lost through valves, such as `15 g/yr`. Default: none.
    pub leakage: Option<SpreadQuantity<kind::MassRate>>,
}

/// One of several tanks.
#[derive(Debug, Clone, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct OneTank {
    /// Name, such as `upper`.
    pub name: String,
    /// Propellant loaded, such as `17 kg`.
    pub loaded: Quantity<kind::Mass>,
    /// Centre of the tank in the body frame, such as `0 0.4 0.5 m`.
    pub position: Triple<kind::Length>,
}

/// A gas that expands as propellant leaves; all tanks share it. Give `volume` or `ratio`.
#[derive(Debug, Clone, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Blowdown {
    /// Feed pressure with the tanks as loaded, such as `22 bar`.
    pub pressure: Quantity<kind::Pressure>,
    /// Volume of all tanks, such as `0.048 m3`.
    pub volume: Option<Quantity<kind::Volume>>,
    /// Pressure as loaded over pressure when empty at constant temperature, such as `4`.
    pub ratio: Option<Quantity<kind::Number>>,
    /// Density of the propellant, such as `1008 kg/m3`.
    pub propellant_density: Quantity<kind::Density>,
    /// Exponent of the expansion: 1 at constant temperature, up to 1.67 without heat. Default: 1.
    pub exponent: Option<Quantity<kind::Number>>,
}

/// How thrust and exhaust speed follow the feed pressure: give the powers or a table.
#[derive(Debug, Clone, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct PressureLaw {
    /// Power of the pressure with which thrust goes, such as `0.85`. Default: 1.
    pub thrust_power: Option<Quantity<kind::Number>>,
    /// Power of the pressure with which exhaust speed goes, such as `0.04`. Default: 0.
    pub exhaust_speed_power: Option<Quantity<kind::Number>>,
    /// Shares by feed pressure, rising. Between the entries a straight line; beyond them the last value.
    #[serde(default)]
    pub table: Vec<PressurePoint>,
}

/// One point of the table.
#[derive(Debug, Clone, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct PressurePoint {
    /// Feed pressure, such as `10 bar`.
    pub pressure: Quantity<kind::Pressure>,
    /// Share of the stated thrust, such as `55 %`.
    pub thrust: Quantity<kind::Number>,
    /// Share of the stated exhaust speed, such as `97 %`.
    pub exhaust_speed: Quantity<kind::Number>,
}

/// An engine for orbit burns.
#[derive(Debug, Clone, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Engine {
    /// Name, such as `main`.
    pub name: String,
    /// Thrust, such as `20 N ± 3 %`.
    pub thrust: SpreadQuantity<kind::Force>,
    /// Specific impulse, such as `225 s ± 1 %`; or give `exhaust_speed`.
    pub isp: Option<SpreadQuantity<kind::Time>>,
    /// Exhaust speed, such as `2206 m/s`; or give `isp`.
    pub exhaust_speed: Option<SpreadQuantity<kind::Speed>>,
    /// Position of the nozzle in the body frame, such as `0 0 -0.1 m`.
    pub position: Triple<kind::Length>,
    /// Direction in which it pushes the spacecraft, any length but zero, such as `0 0 1`.
    pub push: Triple<kind::Number>,
    /// Angle of the push from there about two axes across it, such as `0 ± 0.3 deg`. Default: exact.
    pub misalignment: Option<SpreadQuantity<kind::Angle>>,
}

/// The wheel array.
#[derive(Debug, Clone, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Wheels {
    /// Momentum that one wheel can hold either way, such as `12 N m s`.
    pub capacity: Quantity<kind::Momentum>,
    /// Torque that one wheel can make either way, such as `0.1 N m`.
    pub torque: Quantity<kind::Torque>,
    /// Momentum that must stay free for slews and bias, such as `2 N m s`. Default: none.
    pub reserve: Option<Quantity<kind::Momentum>>,
    /// The wheels, one by one; or give `array`.
    #[serde(default)]
    pub axes: Vec<Wheel>,
    /// A common array: `orthogonal`, `orthogonal_and_skew` (the fourth along x + y + z), or `pyramid`; or give `axes`.
    pub array: Option<WheelArray>,
}

/// A common array of wheels, which stands for `axes` W1, W2 and so on.
#[derive(Debug, Clone, Deserialize, JsonSchema)]
#[serde(rename_all = "snake_case")]
pub enum WheelArray {
    /// Along x, y and z.
    Orthogonal,
    /// Along x, y and z, and a fourth along x + y + z.
    OrthogonalAndSkew,
    /// Evenly on a cone.
    Pyramid(Pyramid),
}

/// Wheels evenly on a cone.
#[derive(Debug, Clone, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Pyramid {
    /// Axis of the cone in the body frame. Default: `0 0 1`.
    pub about: Option<Triple<kind::Number>>,
    /// Angle between it and each spin axis. Default: 54.74 deg, at which four wheels hold as much along it as across it.
    pub half_angle: Option<Quantity<kind::Angle>>,
    /// How many wheels. Default: 4.
    pub count: Option<u64>,
    /// Angle by which the first is turned about the axis from x (or y, where the axis is near x). Default: none.
    pub turned: Option<Quantity<kind::Angle>>,
}

/// One wheel.
#[derive(Debug, Clone, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Wheel {
    /// Name, such as `W1`.
    pub name: String,
    /// Spin axis in the body frame, any length but zero, such as `1 1 1`.
    pub axis: Triple<kind::Number>,
}
