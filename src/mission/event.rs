//! What takes propellant besides unloading.

use nalgebra::Vector3;

use crate::config;
use crate::uncertain::{Parameters, Uncertain};
use crate::vehicle::Faults;

/// One event of a phase.
#[derive(Debug, Clone)]
pub struct Event {
    /// Name.
    pub name: String,
    /// What happens.
    pub kind: EventKind,
}

/// What happens in an event.
#[derive(Debug, Clone)]
pub enum EventKind {
    /// Body rates are damped, rad/s.
    RateDamping {
        /// Rates about x, y, z.
        rates_rad_per_s: [Uncertain; 3],
    },
    /// Rest-to-rest slews on thrusters.
    Slews {
        /// Axis in the body frame, unit.
        axis: Vector3<f64>,
        /// Angle of one, rad.
        angle_rad: f64,
        /// Highest rate, rad/s.
        rate_rad_per_s: f64,
        /// How many in the phase.
        count: Uncertain,
    },
}

pub(super) fn read(written: &config::Event, at: &str, parameters: &mut Parameters, faults: &mut Faults) -> Option<Event> {
    let kind = match (&written.rate_damping, &written.slews) {
        (Some(damping), None) => {
            let mut axes = ["x", "y", "z"].into_iter();
            let rates_rad_per_s = damping
                .rates
                .0
                .map(|spread| parameters.register(format!("{}.rates.{}", written.name, axes.next().unwrap_or_default()), "rad/s", spread));
            EventKind::RateDamping { rates_rad_per_s }
        }
        (None, Some(slews)) => {
            let axis = faults.direction(&format!("{at}.slews.axis"), slews.axis.0);
            let angle = faults.positive(&format!("{at}.slews.angle"), slews.angle.0, "an angle");
            let rate = faults.positive(&format!("{at}.slews.rate"), slews.rate.0, "a rate");
            let count = faults.spread(&format!("{at}.slews.count"), slews.count.0, 0.0, f64::INFINITY, "a count");
            EventKind::Slews {
                axis: axis?,
                angle_rad: angle?,
                rate_rad_per_s: rate?,
                count: parameters.register(format!("{}.count", written.name), "", count?),
            }
        }
        _ => {
            faults.push(at, "expected one of `rate_damping` and `slews`", "keep one of them, and write a second event for the other");
            return None;
        }
    };
    Some(Event { name: written.name.clone(), kind })
}
