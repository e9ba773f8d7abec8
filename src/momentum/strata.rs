//! Which spans of the mission are simulated, and what each stands for.

use crate::config::Timing;
use crate::mission::{Phase, UnloadPolicy};

/// How finely the mission is simulated.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Resolution {
    /// As finely as the tolerance asks: one span stands for some weeks, at nine phases of the orbit.
    Default,
    /// Every unload has its own span.
    Full,
}

/// How a phase is divided.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Grid {
    /// Steps of one cycle (an orbit; a day or a dwell where there is none).
    pub steps: usize,
    /// How many times as many strata as at least are taken.
    pub strata: usize,
}

/// A stretch of a phase that one simulated span stands for.
#[derive(Debug, Clone, PartialEq)]
pub struct Stratum {
    /// Index of its phase.
    pub phase: usize,
    /// Start after the start of the mission, s.
    pub start_s: f64,
    /// Length, s.
    pub duration_s: f64,
    /// Time between unloads if it is fixed, s.
    pub interval_s: Option<f64>,
    /// What is simulated.
    pub span: Span,
}

/// A simulated span: equal steps, windows of one length that end at different phases of the orbit,
/// and instants within the first orbit.
#[derive(Debug, Clone, PartialEq)]
pub struct Span {
    /// Start after the start of the mission, s.
    pub start_s: f64,
    /// Length of a step, s.
    pub step_s: f64,
    /// Steps in one window.
    pub window_steps: usize,
    /// First step of each window.
    pub windows: Vec<usize>,
    /// Steps over which excursions are taken: one orbit; in a survey one window.
    pub cycle_steps: usize,
    /// Steps after which the excursion is taken; the first is where it begins, with the first window.
    pub checkpoints: Vec<usize>,
    /// Whether the torque is kept at the checkpoints.
    pub keeps_torque: bool,
}

impl Span {
    /// Length of a window, s.
    #[must_use]
    pub fn window_s(&self) -> f64 {
        self.step_s * self.window_steps as f64
    }

    /// Steps simulated.
    #[must_use]
    pub fn steps(&self) -> usize {
        let last_window = self.windows.iter().max().copied().unwrap_or(0) + self.window_steps;
        last_window.max(self.checkpoints.last().copied().unwrap_or(0))
    }

    /// Length of all that is simulated, s.
    #[must_use]
    pub fn length_s(&self) -> f64 {
        self.step_s * self.steps() as f64
    }
}

const DAY_S: f64 = 86_400.0;

/// Longest stretch of time that one span stands for at default resolution: a 13th of a year, so that the
/// seasons are sampled thirteen times.
const STRATUM_S: f64 = 365.25 / 13.0 * DAY_S;

/// Fewest spans a phase is given, if it has that many unloads.
const FEWEST: f64 = 4.0;

/// Odd on purpose: the price of a momentum that turns in the body goes up and down four times an orbit, with overtones at
/// 8, 12, 16 …; eight windows would all meet the overtone at the same place (seen: 4 % off), nine average it out.
pub(super) const WINDOWS: usize = 9;
const CHECKPOINTS: usize = 24;
/// Checkpoints where every span needs them and every unload has its span: memory.
const CHECKPOINTS_FULL: usize = 12;
/// With a span for every unload, spans of a phase that have checkpoints at least, evenly spread.
const SPANS_WITH_CHECKPOINTS: usize = 200;

/// A survey has several windows in the time that one stratum lasts elsewhere, as long as these are no more steps.
const ENOUGH_STEPS: usize = 4000;
/// … and no more than this.
const MOST_WINDOWS: f64 = 4.0;
/// Dwells in a window of a survey whose wheels are not unloaded at a fixed interval.
const DWELLS: f64 = 8.0;

/// Divides a phase into strata, in order of time.
#[must_use]
pub fn strata(index: usize, phase: &Phase, resolution: Resolution, grid: &Grid) -> Vec<Stratum> {
    let interval_s = fixed_interval_s(phase);
    let window_s = window_s(phase, resolution);
    let most = (phase.duration_s / interval_s.unwrap_or(window_s)).max(1.0);
    let wanted = match resolution {
        Resolution::Default => {
            let least = (phase.duration_s / STRATUM_S).ceil().max(FEWEST) * surveyed(phase, window_s, grid.steps);
            (least * grid.strata as f64).min(most)
        }
        Resolution::Full => most,
    };
    let count = to_count(wanted.ceil().max(1.0));
    let whole_s = match resolution {
        Resolution::Default => phase.duration_s / count as f64,
        // Unloads fall where they fall; the last one that the phase cuts short counts by its share.
        Resolution::Full => interval_s.unwrap_or(window_s),
    };
    let shape = Shape { phase, window_s, resolution, steps: grid.steps };
    (0..count)
        .map(|k| {
            let after_s = whole_s * k as f64;
            let (start_s, duration_s) = (phase.start_s + after_s, whole_s.min(phase.duration_s - after_s));
            Stratum { phase: index, start_s, duration_s, interval_s, span: shape.span(start_s, duration_s, &shape.kept(k, count)) }
        })
        .collect()
}

/// A short span in the middle of a stretch, to find how many steps a cycle needs.
pub(super) fn probe(phase: &Phase, start_s: f64, duration_s: f64, steps: usize) -> Span {
    let window_s = cycle_s(phase) * if phase.attitude.law.dwell_s().is_some() { 4.0 } else { 2.0 };
    let shape = Shape { phase, window_s, resolution: Resolution::Default, steps };
    shape.span(start_s, duration_s, &Kept { place: 0, checkpoints: CHECKPOINTS, torque: true })
}

/// How many times as many strata a survey has: its windows do not lie about one another's, one is simulated in each.
fn surveyed(phase: &Phase, window_s: f64, steps: usize) -> f64 {
    if phase.attitude.law.dwell_s().is_none() {
        return 1.0;
    }
    (ENOUGH_STEPS as f64 * cycle_s(phase) / (window_s * steps as f64)).floor().clamp(1.0, MOST_WINDOWS)
}

/// Time that the steps of a grid divide, s.
fn cycle_s(phase: &Phase) -> f64 {
    let cycle_s = phase.cycle_s();
    match (phase.trajectory.revolution_s(), phase.attitude.law.dwell_s()) {
        (None, Some(dwell_s)) => dwell_s.min(cycle_s),
        _ => cycle_s,
    }
}

/// Time between unloads if it is fixed, s.
fn fixed_interval_s(phase: &Phase) -> Option<f64> {
    match phase.unload {
        UnloadPolicy::Every(interval) => Some(interval.min(phase.duration_s)),
        UnloadPolicy::AtFill(_) | UnloadPolicy::Never => None,
    }
}

/// Length of a window, s: the interval between unloads if that is short, else whole orbits of about a day. In a survey the
/// interval however long, since what gathers is no steady growth.
pub(super) fn window_s(phase: &Phase, resolution: Resolution) -> f64 {
    let interval_s = fixed_interval_s(phase);
    let orbit_s = phase.cycle_s();
    let about_a_day = (DAY_S / orbit_s).round().max(1.0) * orbit_s;
    match (interval_s, resolution, phase.attitude.law.dwell_s()) {
        (Some(interval), Resolution::Full, _) | (Some(interval), _, Some(_)) => interval,
        (Some(interval), Resolution::Default, None) if interval <= 1.5 * about_a_day => interval,
        (None, _, Some(dwell_s)) => about_a_day.max(DWELLS * dwell_s).min(phase.duration_s),
        _ => about_a_day,
    }
}

/// What is kept of one span.
struct Kept {
    /// Ninth of the orbit in which a single window begins.
    place: usize,
    checkpoints: usize,
    torque: bool,
}

/// What the spans of a phase have in common.
struct Shape<'a> {
    phase: &'a Phase,
    window_s: f64,
    resolution: Resolution,
    steps: usize,
}

impl Shape<'_> {
    /// What is kept of the span of index `k` of `count`.
    fn kept(&self, k: usize, count: usize) -> Kept {
        let every = (count / SPANS_WITH_CHECKPOINTS).max(1);
        let chosen = k.is_multiple_of(every);
        let (checkpoints, torque) = match (self.resolution, self.phase.unload) {
            (Resolution::Full, UnloadPolicy::AtFill(_)) => (CHECKPOINTS_FULL, chosen),
            (Resolution::Full, _) if !chosen => (0, false),
            _ => (CHECKPOINTS, true),
        };
        // Four ninths of an orbit on from one to the next: neighbours lie far apart.
        Kept { place: 4 * k % WINDOWS, checkpoints, torque }
    }

    fn span(&self, start_s: f64, duration_s: f64, kept: &Kept) -> Span {
        let cycle_s = cycle_s(self.phase);
        let window_steps = to_count(self.window_s / cycle_s * self.steps as f64).max(1);
        let step_s = self.window_s / window_steps as f64;
        let surveys = self.phase.attitude.law.dwell_s().is_some();
        let cycle_steps = if surveys { window_steps } else { to_count(cycle_s / step_s).max(1) };
        let compares = self.phase.timing == Timing::Cheapest;
        let one = surveys || (self.resolution == Resolution::Full && !compares);
        let windows = if one { 1 } else { WINDOWS };
        let part = |k: usize, of: usize| k * cycle_steps / of;
        let mut windows: Vec<usize> = if one && !surveys && !matches!(self.phase.unload, UnloadPolicy::Every(_)) {
            // Where on the orbit the wheels are full nobody knows: one of nine places after the other.
            vec![part(kept.place, WINDOWS)]
        } else {
            (0..windows).map(|k| part(k, windows)).collect()
        };
        windows.dedup();
        let begins = windows.first().copied().unwrap_or(0);
        let parts = if kept.checkpoints == 0 { 0..0 } else { 0..kept.checkpoints + 1 };
        let mut checkpoints: Vec<usize> = parts.map(|k| begins + part(k, kept.checkpoints)).collect();
        checkpoints.dedup();
        let mut span = Span { start_s, step_s, window_steps, windows, cycle_steps, checkpoints, keeps_torque: kept.torque };
        if self.resolution == Resolution::Default {
            // The middle of what is simulated stands in the middle of the stratum.
            span.start_s = start_s + (duration_s - span.length_s()) / 2.0;
            if surveys {
                // Unloads meet the dwells and turns of a survey or a mix where they fall: a whole number of windows after the start.
                let windows = ((span.start_s - self.phase.start_s) / self.window_s).round().max(0.0);
                span.start_s = self.phase.start_s + windows * self.window_s;
            }
        }
        span
    }
}

/// A count from a rounded number that is known to be finite and not negative.
fn to_count(value: f64) -> usize {
    #[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "saturates; rounded and not negative")]
    let count = value.round().max(0.0) as usize;
    count
}
