//! The configuration: from files and flags to values that know where they were written.
//!
//! In: a YAML file, overlays laid over it and `--set` flags. Out: a [`Document`] whose every value
//! knows its file, line and column, and every fault as a [`Diagnostic`]. Knows nothing of what the
//! values mean physically; that is `vehicle`'s part.

#![deny(clippy::expect_used, clippy::indexing_slicing)]

mod attitude;
mod choose;
mod decode;
mod diagnostic;
mod document;
mod environment;
mod event;
mod leaf;
mod long_form;
mod mission;
mod nearest;
mod node;
mod offsets;
mod orbit;
mod overlay;
mod patch;
mod path;
mod ranges;
mod reference;
mod refuse;
mod render;
mod resolved;
mod sample;
mod schema;
mod setting;
mod short_form;
mod source;
mod spacecraft;
mod spans;
mod spec;
mod syntax;
mod uncertainty;
mod walk;

pub use attitude::{Attitude, Direction, Mix, Part, Sky, Survey};
pub use decode::decode;
pub use diagnostic::{Diagnostic, Mark, Related, Severity, Site};
pub use document::Document;
pub use environment::{Accommodation, ActivityLevel, Atmosphere, BodyLight, Cycle, Environment, SolarActivity, Wind};
pub use event::{AxisTurn, Burn, Deadband, Event, Hold, RateDamping, SafeMode, Slews, SpinChange, When};
pub use leaf::{Quantity, SpreadQuantity, SpreadTriple, Triple};
pub use mission::{Axis, Budget, Figure, MarginRule, Mission, Phase, Precision, Requirement, ResolutionChoice, Sampling, Timing, Unload};
pub use nearest::{did_you_mean, known, nearest};
pub use orbit::{About, LagrangePoint, Orbit, OwnBody, Stationary};
pub use patch::Patch;
pub use path::{Path, Segment};
pub use ranges::RANGES;
pub use reference::reference;
pub use render::{render_all, sort, to_json};
pub use source::{Place, Source};
pub use spacecraft::{
    Blowdown, BodyAxis, Copies, Engine, Failure, Material, NetForceChoice, OneTank, Plume, PressureLaw, PressurePoint, Propulsion,
    PulsePerformance, Pyramid, Shaded, SmallUnload, Spacecraft, Surface, Tank, Thruster, Wheel, WheelArray, Wheels,
};
pub use spec::{Spec, read, schema};
pub use uncertainty::{Correlation, DrawnAnew, DriverGroup, Each, Uncertainty};
pub use walk::{Leaf, check_structure};
