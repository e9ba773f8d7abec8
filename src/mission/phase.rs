//! Phases in order of time.

use super::attitude::{Attitude, Moment};
use super::event::{self, Event, Reading};
use super::files::Files;
use super::{orbit, read_attitude};
use crate::config::{self, BodyLight, Spec, Timing};
use crate::environment::{Epoch, Trajectory};
use crate::uncertain::Parameters;
use crate::vehicle::Faults;

const DAY_S: f64 = 86_400.0;
/// Where light from the body counts by itself: below 2,000 km its infrared is about a tenth of sunlight.
const BODY_LIGHT_BELOW_M: f64 = 2.0e6;

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
    /// Where the spacecraft goes.
    pub trajectory: Trajectory,
    /// Attitude.
    pub attitude: Attitude,
    /// Unload policy.
    pub unload: UnloadPolicy,
    /// Where on the orbit an unload takes place.
    pub timing: Timing,
    /// Lowest altitude over the equatorial radius of the body, m.
    pub lowest_altitude_m: f64,
    /// Whether light and heat of the body count.
    pub body_light: bool,
    /// What else takes propellant.
    pub events: Vec<Event>,
}

impl Phase {
    /// Time after which the spacecraft is in the same place of its orbit, s; a day where nothing comes back.
    #[must_use]
    pub fn cycle_s(&self) -> f64 {
        self.trajectory.revolution_s().unwrap_or(DAY_S)
    }

    /// An instant of the phase, `time_s` after the start of the mission.
    #[must_use]
    pub fn moment(&self, mission_start: Epoch, time_s: f64) -> Moment<'_> {
        let start = mission_start.plus_seconds(self.start_s);
        Moment { trajectory: &self.trajectory, start, time_s: time_s - self.start_s }
    }
}

/// Reads all phases that are right; the others leave faults.
pub(super) fn read(spec: &Spec, start: Epoch, files: &Files<'_>, parameters: &mut Parameters, faults: &mut Faults) -> Vec<Phase> {
    if spec.mission.phases.is_empty() {
        faults.push("mission.phases", "expected at least one phase, got an empty list", "describe a phase with `name` and `duration`");
    }
    faults.unique("mission.phases", spec.mission.phases.iter().map(|phase| phase.name.as_str()));
    let shared = orbit::read(&spec.mission.orbit, "mission.orbit", start, files, faults);
    let mut start_s = 0.0;
    let mut sound = true;
    let mut phases = Vec::new();
    for (index, written) in spec.mission.phases.iter().enumerate() {
        let at = format!("mission.phases[{index}]");
        let own = written.orbit.as_ref().map(|own| orbit::read(own, &format!("{at}.orbit"), start, files, faults));
        let orbit_at = if own.is_some() { format!("{at}.orbit") } else { "mission.orbit".to_owned() };
        let duration = duration(written.duration.0, &at, start.plus_seconds(start_s), faults);
        // Where a duration before is wrong, nothing is known of this start.
        if sound {
            check_start(written.start.as_deref(), &at, start.plus_seconds(start_s), faults);
        }
        sound = sound && duration.is_some();
        let unload = policy(written.unload.as_ref(), &at, spec.wheels.is_some(), faults);
        let attitude = read_attitude::read(&written.attitude, &format!("{at}.attitude"), &written.name, parameters, faults);
        let span_s = (start_s, duration.unwrap_or(0.0));
        let events = events(written, &at, &mut Reading { spec, phase: &written.name, start, span_s, parameters, faults });
        let trajectory = own.unwrap_or_else(|| shared.clone());
        let timing = written.unload.as_ref().map_or(Timing::Due, |unload| unload.timing);
        let (Some(duration_s), Some(unload), Some(attitude), Some(trajectory)) = (duration, unload, attitude, trajectory) else { continue };
        let from = start.plus_seconds(start_s);
        let altitude_m = orbit::lowest_altitude_m(&trajectory, from, duration_s);
        if !orbit::covers(&trajectory, from, duration_s, altitude_m, &orbit_at, faults) {
            continue;
        }
        read_attitude::check_defined(&attitude, &trajectory, from, duration_s, &format!("{at}.attitude"), faults);
        check_timing(timing, &trajectory, &attitude, &at, faults);
        let body_light = match spec.environment.body_light {
            BodyLight::On => !trajectory.body().is_sun(),
            BodyLight::Off => false,
            BodyLight::Auto => altitude_m < BODY_LIGHT_BELOW_M && !trajectory.body().is_sun(),
        };
        let (name, lowest_altitude_m) = (written.name.clone(), altitude_m);
        phases.push(Phase { name, start_s, duration_s, trajectory, attitude, unload, timing, lowest_altitude_m, body_light, events });
        start_s += duration_s;
    }
    phases
}

/// Checks the stated start of a phase against where the ones before it end.
fn check_start(written: Option<&str>, at: &str, expected: Epoch, faults: &mut Faults) {
    let Some(text) = written else { return };
    let at = format!("{at}.start");
    match Epoch::parse(text) {
        Err(error) => faults.push(&at, error.to_string(), "write a date such as `2029-04-01`"),
        Ok(stated) => {
            let gap_d = (stated.tt_seconds() - expected.tt_seconds()) / DAY_S;
            let what = if gap_d > 0.0 { "leaves a gap of" } else { "overlaps by" };
            if gap_d.abs() > 1.0 {
                let message = format!("this {what} {:.1} d: the phases before it end at {expected}", gap_d.abs());
                faults.push(&at, message, "correct this date, or the duration of the phase before it");
            }
        }
    }
}

/// A duration above zero that ends within the years that dates may have.
fn duration(duration_s: f64, at: &str, from: Epoch, faults: &mut Faults) -> Option<f64> {
    const LAST_YEAR: f64 = 2200.0;
    let key = format!("{at}.duration");
    let duration_s = faults.positive(&key, duration_s, "a duration")?;
    let ends = from.decimal_year() + duration_s / (365.25 * DAY_S);
    if ends > LAST_YEAR {
        faults.push(&key, format!("this phase would end in the year {ends:.0}, and nothing is known of the time after 2200"), "shorten it");
        return None;
    }
    Some(duration_s)
}

/// Waiting for the cheapest point of an orbit needs an orbit in which the attitude comes back.
fn check_timing(timing: Timing, trajectory: &Trajectory, attitude: &Attitude, at: &str, faults: &mut Faults) {
    if timing == Timing::Cheapest && (trajectory.revolution_s().is_none() || attitude.law.dwell_s().is_some()) {
        faults.push(
            &format!("{at}.unload.timing"),
            "there is no orbit whose points could be compared (about the Sun, at a Lagrange point, in a survey or a mix)",
            "leave `timing` out there",
        );
    }
}

fn events(written: &config::Phase, at: &str, with: &mut Reading<'_>) -> Vec<Event> {
    with.faults.unique(&format!("{at}.events"), written.events.iter().map(|event| event.name.as_str()));
    let listed = written.events.iter().enumerate();
    listed.filter_map(|(k, event)| event::read(event, &format!("{at}.events[{k}]"), with)).collect()
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
                if written.every.is_some() {
                    "expected one of `every` and `at_fill`, got both"
                } else {
                    "expected one of `every` and `at_fill`, got neither"
                },
                "give one: `every: 1 d`, or `at_fill: 70 %`; an overlay takes the other away with `every: null`",
            );
            None
        }
    }
}
