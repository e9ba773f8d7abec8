//! The mission as it can be flown: phases in order of time, each with orbit, attitude and unload policy.
//!
//! In: the configuration as written and the vehicle. Out: a validated [`Mission`]. Knows nothing of torques.

mod activity;
mod attitude;
mod event;
mod files;
mod joint;
mod orbit;
mod phase;
mod plausible;
mod pointing;
mod read_attitude;
mod settings;
mod surroundings;
mod survey;

pub use activity::SolarActivity;
pub use attitude::{Attitude, Law, Moment};
pub use event::{Band, BurnSource, Event, EventKind, When};
pub use joint::DriverGroup;
pub use phase::{Phase, UnloadPolicy};
pub use plausible::WARNINGS;
pub use pointing::{Direction, Pointing, Sky};
pub use settings::{Bound, Margin, Precision, Requirement, Sampling, Settings};
pub use surroundings::{Accommodation, BodyLightShares};
pub use survey::Survey;

use std::path::Path;

use crate::authority::{Authority, Generator, NetForce};
use crate::config::Spec;
use crate::environment::{Air, Body, Epoch, Exponential};
use crate::uncertain::{Parameters, Spread, Uncertain};
use crate::vehicle::{Faults, Vehicle, Wheel, Wheels};

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
    /// How molecules leave the facets; `None` for a drag coefficient.
    pub accommodation: Option<Accommodation>,
    /// Wind to the east and to the north over the turning air, m/s.
    pub wind_m_per_s: [Uncertain; 2],
    /// Atmosphere of a body other than the Earth.
    pub atmosphere: Option<Exponential>,
    /// Albedo and infrared of the body, where the configuration gives them.
    pub body_light: BodyLightShares,
}

/// Height under which the Earth's air counts, m: the ceiling of the atmosphere model.
const AIR_BELOW_M: f64 = 1.5e6;

/// Drag coefficient of a plate in free-molecular flow where nothing better is known (common practice).
const USUAL_DRAG_COEFFICIENT: f64 = 2.2;

impl Mission {
    /// Validates what the user wrote; registers what is uncertain.
    ///
    /// Returns `None` after pushing at least one fault.
    pub fn new(spec: &Spec, folder: &Path, parameters: &mut Parameters, faults: &mut Faults) -> Option<Self> {
        let before = faults.count();
        let start = Epoch::parse(&spec.mission.start)
            .map_err(|error| faults.push("mission.start", error.to_string(), "write a date such as `2029-04-01` or `2029-04-01T12:00:00Z`"))
            .ok();
        let activity = SolarActivity::new(spec.environment.solar_activity.as_ref(), parameters, faults);
        let factor = spec.environment.density_factor.clone().map_or(Spread::Fixed(1.0), |factor| factor.0);
        let factor = faults.positive_spread("environment.density_factor", factor, "a factor");
        let drag = spec.environment.drag_coefficient.clone().map_or(Spread::Fixed(USUAL_DRAG_COEFFICIENT), |drag| drag.0);
        let drag = faults.positive_spread("environment.drag_coefficient", drag, "a drag coefficient");
        let density_factor = factor.map(|factor| parameters.register("environment.density_factor", "", factor));
        let drag_coefficient = drag.map(|drag| parameters.register("environment.drag_coefficient", "", drag));
        let accommodation = surroundings::accommodation(&spec.environment, parameters, faults);
        let wind_m_per_s = surroundings::wind(&spec.environment, parameters);
        let atmosphere = surroundings::atmosphere(&spec.environment, faults);
        let body_light = surroundings::body_light(&spec.environment, parameters, faults);
        let start = start?;
        let phases = phase::read(spec, start, &files::Files { folder }, parameters, faults);
        let in_air = |phase: &Phase| phase.trajectory.body().is_earth() && phase.lowest_altitude_m < AIR_BELOW_M;
        if let Some(phase) = phases.iter().find(|phase| in_air(phase) && spec.environment.solar_activity.is_none()) {
            let message = format!("is missing: phase {} passes through the Earth's air, whose density follows it", phase.name);
            faults.push("environment.solar_activity", message, "add `environment: {solar_activity: {level: moderate}}`, or a cycle");
        }
        if faults.count() > before {
            return None;
        }
        Some(Self {
            start,
            phases,
            activity: activity?,
            density_factor: density_factor?,
            drag_coefficient: drag_coefficient?,
            accommodation,
            wind_m_per_s,
            atmosphere,
            body_light,
        })
    }

    /// The air about a body.
    #[must_use]
    pub fn air_about(&self, body: &Body) -> Air {
        match self.atmosphere {
            _ if body.is_earth() => Air::Earth,
            Some(atmosphere) if !body.is_sun() => Air::Exponential(atmosphere),
            _ => Air::None,
        }
    }

    /// How many levels of solar activity the air about a body is computed at: one where it does not depend on it.
    #[must_use]
    pub fn levels_about(&self, body: &Body) -> usize {
        if body.is_earth() { self.activity.count() } else { 1 }
    }

    /// Length of the mission, s.
    #[must_use]
    pub fn duration_s(&self) -> f64 {
        self.phases.iter().map(|phase| phase.duration_s).sum()
    }
}

/// Something must be left of the wheels beside what is kept free.
fn check_reserve(wheels: &Wheels, faults: &mut Faults) {
    let one = |wheel: &Wheel| Generator::wheel(wheel.axis.into_inner(), wheels.capacity_n_m_s);
    let held = Authority::new(&wheels.wheels.iter().map(one).collect::<Vec<_>>(), NetForce::Any).guaranteed();
    if wheels.reserve_n_m_s >= held {
        let reserve = wheels.reserve_n_m_s;
        let message = format!("nothing is left: the wheels hold {held:.3} N m s in every direction, and {reserve:.3} are to be kept free");
        faults.push_also("wheels.reserve", message, "keep less free, or take larger wheels", "wheels.capacity", "of each wheel");
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
    /// Quantities that count as one driver.
    pub driver_groups: Vec<DriverGroup>,
    /// Values worth a second look.
    pub warnings: Vec<crate::config::Diagnostic>,
}

impl Scenario {
    /// Validates a configuration.
    ///
    /// # Errors
    /// Every fault found.
    pub fn new(spec: &Spec) -> Result<Self, Vec<crate::config::Diagnostic>> {
        Self::in_folder(spec, Path::new("."))
    }

    /// As [`Scenario::new`], with the files that the configuration names looked for in `folder`.
    ///
    /// # Errors
    /// Every fault found.
    pub fn in_folder(spec: &Spec, folder: &Path) -> Result<Self, Vec<crate::config::Diagnostic>> {
        let (mut parameters, mut faults) = (Parameters::default(), Faults::new());
        let vehicle = Vehicle::new(spec, &mut parameters, &mut faults);
        let mission = Mission::new(spec, folder, &mut parameters, &mut faults);
        let events =
            spec.mission.phases.iter().flat_map(|phase| phase.events.iter().map(|event| format!("{}.{}.", phase.name, event.name)));
        let events: Vec<String> = events.collect();
        // A quantity with a fault of its own is not registered: asking for it would only say so again.
        let driver_groups =
            if faults.count() == 0 { joint::apply(&spec.uncertainty, &events, &mut parameters, &mut faults) } else { Vec::new() };
        if let Some(wheels) = vehicle.as_ref().and_then(|vehicle| vehicle.wheels.as_ref()) {
            check_reserve(wheels, &mut faults);
        }
        let warnings = vehicle.as_ref().map_or_else(Vec::new, |vehicle| plausible::look(vehicle, &spec.silence, &mut faults));
        let settings = settings::settings(&spec.budget, &mut faults);
        let requirements = settings::requirements(spec, &mut faults);
        match (vehicle, mission, settings) {
            (Some(vehicle), Some(mission), Some(settings)) if faults.count() == 0 => {
                Ok(Self { vehicle, mission, parameters, settings, requirements, driver_groups, warnings })
            }
            _ => Err(faults.into_inner()),
        }
    }
}
