//! The mission as it can be flown: phases in order of time, each with orbit, attitude and unload policy.
//!
//! In: the configuration as written and the vehicle. Out: a validated [`Mission`]. Knows nothing of torques.

mod activity;
mod attitude;
mod event;
mod orbit;
mod phase;
mod settings;

pub use activity::SolarActivity;
pub use attitude::NadirAttitude;
pub use event::{Event, EventKind};
pub use phase::{Phase, UnloadPolicy};
pub use settings::{Bound, Requirement, Settings};

use crate::config::Spec;
use crate::environment::Epoch;
use crate::uncertain::{Parameters, Spread, Uncertain};
use crate::vehicle::{Faults, Vehicle};

/// A validated mission.
#[derive(Debug, Clone)]
pub struct Mission {
    /// Start of the first phase.
    pub start: Epoch,
    /// The phases, one after the other; at least one.
    pub phases: Vec<Phase>,
    /// Solar activity.
    pub activity: SolarActivity,
    /// Factor on the density of the atmosphere model.
    pub density_factor: Uncertain,
    /// Drag coefficient of facets whose material has none of its own.
    pub drag_coefficient: Uncertain,
}

/// Drag coefficient of a plate in free-molecular flow where nothing better is known (common practice).
const USUAL_DRAG_COEFFICIENT: f64 = 2.2;

impl Mission {
    /// Validates what the user wrote; registers what is uncertain.
    ///
    /// Returns `None` after pushing at least one fault.
    pub fn new(spec: &Spec, vehicle_has_wheels: bool, parameters: &mut Parameters, faults: &mut Faults) -> Option<Self> {
        let before = faults.count();
        let start = Epoch::parse(&spec.mission.start)
            .map_err(|error| faults.push("mission.start", error.to_string(), "write a date such as `2029-04-01` or `2029-04-01T12:00:00Z`"))
            .ok();
        let activity = SolarActivity::new(&spec.environment.solar_activity, parameters, faults);
        let factor = spec.environment.density_factor.map_or(Spread::Fixed(1.0), |factor| factor.0);
        let factor = faults.positive_spread("environment.density_factor", factor, "a factor");
        let drag = spec.environment.drag_coefficient.map_or(Spread::Fixed(USUAL_DRAG_COEFFICIENT), |drag| drag.0);
        let drag = faults.positive_spread("environment.drag_coefficient", drag, "a drag coefficient");
        let start = start?;
        let phases = phase::read(spec, start, vehicle_has_wheels, parameters, faults);
        if faults.count() > before {
            return None;
        }
        Some(Self {
            start,
            phases,
            activity: activity?,
            density_factor: parameters.register("environment.density_factor", "", factor?),
            drag_coefficient: parameters.register("environment.drag_coefficient", "", drag?),
        })
    }

    /// Length of the mission, s.
    #[must_use]
    pub fn duration_s(&self) -> f64 {
        self.phases.iter().map(|phase| phase.duration_s).sum()
    }
}

/// The whole input: vehicle, mission and the registry of what is uncertain.
#[derive(Debug, Clone)]
pub struct Scenario {
    /// The spacecraft.
    pub vehicle: Vehicle,
    /// The mission.
    pub mission: Mission,
    /// What is uncertain.
    pub parameters: Parameters,
    /// How the budget is made.
    pub settings: Settings,
    /// What must hold.
    pub requirements: Vec<Requirement>,
}

impl Scenario {
    /// Validates a configuration.
    ///
    /// # Errors
    /// Every fault found.
    pub fn new(spec: &Spec) -> Result<Self, Vec<crate::config::Diagnostic>> {
        let (mut parameters, mut faults) = (Parameters::default(), Faults::new());
        let vehicle = Vehicle::new(spec, &mut parameters, &mut faults);
        let mission = Mission::new(spec, spec.wheels.is_some(), &mut parameters, &mut faults);
        let settings = settings::settings(&spec.budget, &mut faults);
        let requirements = settings::requirements(spec, &mut faults);
        match (vehicle, mission, settings) {
            (Some(vehicle), Some(mission), Some(settings)) if faults.count() == 0 => {
                Ok(Self { vehicle, mission, parameters, settings, requirements })
            }
            _ => Err(faults.into_inner()),
        }
    }
}
