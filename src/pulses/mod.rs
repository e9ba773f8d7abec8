//! An unload turned into valve commands.
//!
//! In: an angular impulse, the price map of the layout and what valves can do. Out: pulses per
//! thruster, their propellant, what is left over. Knows nothing of orbits or of the mission.

mod firing;
mod lanes;
mod pricer;
mod unload;

pub use firing::{Firing, fire};
pub use lanes::{LanePerformance, LaneTariff, LaneWear};
pub use pricer::{ForceChoice, Performance, Pricer, SmallestFiring, Wear};
pub use unload::{ThrusterPulses, UnloadCommand, UnloadError, unload};
