//! Phases in order of time.

use super::attitude::NadirAttitude;
use super::event::{self, Event};
use super::orbit;
use crate::config::{self, Spec};
use crate::environment::{Epoch, Orbit};
use crate::uncertain::{Parameters, Uncertain};
use crate::vehicle::Faults;

/// When the wheels are unloaded.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum UnloadPolicy {
    /// Not at all.
    Never,
    /// At a fixed interval, s.
    Every(f64),
    /// When this share of the wheel envelope is filled.
    AtFill(f64),
}

/// A stretch of the mission with one orbit, attitude and unload policy.
#[derive(Debug, Clone)]
pub struct Phase {
    /// Name.
    pub name: String,
    /// Start after the start of the mission, s.
    pub start_s: f64,
    /// Length, s.
    pub duration_s: f64,
    /// Orbit.
    pub orbit: Orbit,
    /// Attitude.
    pub attitude: NadirAttitude,
    /// Unload policy.
    pub unload: UnloadPolicy,
    /// What else takes propellant.
    pub events: Vec<Event>,
}

/// Reads all phases that are right; the others leave faults.
pub(super) fn read(spec: &Spec, start: Epoch, has_wheels: bool, parameters: &mut Parameters, faults: &mut Faults) -> Vec<Phase> {
    if spec.mission.phases.is_empty() {
        faults.push("mission.phases", "expected at least one phase, got an empty list", "describe a phase with `name` and `duration`");
    }
    faults.unique("mission.phases", spec.mission.phases.iter().map(|phase| phase.name.as_str()));
    let shared = orbit::read(&spec.mission.orbit, "mission.orbit", start, faults);
    let mut start_s = 0.0;
    let mut phases = Vec::new();
    for (index, written) in spec.mission.phases.iter().enumerate() {
        let at = format!("mission.phases[{index}]");
        let own = written.orbit.as_ref().map(|own| orbit::read(own, &format!("{at}.orbit"), start, faults));
        let duration = faults.positive(&format!("{at}.duration"), written.duration.0, "a duration");
        let unload = policy(written.unload.as_ref(), &at, has_wheels, faults);
        let attitude = attitude(&written.attitude, &written.name, parameters);
        let events = events(written, &at, parameters, faults);
        let orbit = own.unwrap_or_else(|| shared.clone());
        if let (Some(duration_s), Some(unload), Some(orbit)) = (duration, unload, orbit) {
            phases.push(Phase { name: written.name.clone(), start_s, duration_s, orbit, attitude, unload, events });
            start_s += duration_s;
        }
    }
    phases
}

fn events(written: &config::Phase, at: &str, parameters: &mut Parameters, faults: &mut Faults) -> Vec<Event> {
    let listed = written.events.iter().enumerate();
    listed.filter_map(|(k, event)| event::read(event, &format!("{at}.events[{k}]"), parameters, faults)).collect()
}

fn attitude(written: &config::Attitude, phase: &str, parameters: &mut Parameters) -> NadirAttitude {
    let Some(bias) = &written.bias else {
        return NadirAttitude { bias_rad: [Uncertain::fixed(0.0); 3] };
    };
    let mut axes = ["x", "y", "z"].into_iter();
    let bias_rad = bias.0.map(|spread| {
        let axis = axes.next().unwrap_or_default();
        parameters.register(format!("mission.phases[{phase}].attitude.bias.{axis}"), "rad", spread)
    });
    NadirAttitude { bias_rad }
}

fn policy(written: Option<&config::Unload>, at: &str, has_wheels: bool, faults: &mut Faults) -> Option<UnloadPolicy> {
    let Some(written) = written else { return Some(UnloadPolicy::Never) };
    if !has_wheels {
        faults.push(
            &format!("{at}.unload"),
            "there are no wheels to unload",
            "describe at least three wheels under `wheels`, or leave `unload` out",
        );
        return None;
    }
    match (written.every, written.at_fill) {
        (Some(interval), None) => faults.positive(&format!("{at}.unload.every"), interval.0, "an interval").map(UnloadPolicy::Every),
        (None, Some(fill)) => {
            faults.within(&format!("{at}.unload.at_fill"), fill.0, 0.01, 1.0, "a share of the wheel envelope").map(UnloadPolicy::AtFill)
        }
        _ => {
            faults.push(
                &format!("{at}.unload"),
                "expected one of `every` and `at_fill`",
                "keep one: `every: 1 d`, or `at_fill: 70 %`; an overlay takes the other away with `every: null`",
            );
            None
        }
    }
}
