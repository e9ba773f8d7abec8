//! Which spans of the mission are simulated, and what each stands for.

use crate::mission::{Mission, Phase, UnloadPolicy};

/// How finely the mission is simulated.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Resolution {
    /// One span stands for about four weeks, at nine phases of the orbit.
    Default,
    /// Every unload has its own span.
    Full,
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
    /// Steps in one orbit, rounded.
    pub orbit_steps: usize,
    /// Steps of the first orbit after which the excursion is taken.
    pub checkpoints: Vec<usize>,
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
        last_window.max(self.orbit_steps)
    }

    /// Length of all that is simulated, s.
    #[must_use]
    pub fn length_s(&self) -> f64 {
        self.step_s * self.steps() as f64
    }
}

const DAY_S: f64 = 86_400.0;

/// Length of time that one span stands for at default resolution: a 13th of a year, so that the
/// seasons are sampled thirteen times.
const STRATUM_S: f64 = 365.25 / 13.0 * DAY_S;

/// Fewest spans a phase is given, if it has that many unloads.
const FEWEST: f64 = 4.0;

/// A multiple of the windows, so that they are evenly spaced.
const STEPS_PER_ORBIT: f64 = 99.0;

/// Odd on purpose: the price of a momentum that turns in the body goes up and down four times an orbit, with overtones at
/// 8, 12, 16 …; eight windows would all meet the overtone at the same place (seen: 4 % off), nine average it out.
const WINDOWS: usize = 9;
const CHECKPOINTS: usize = 24;
const CHECKPOINTS_FULL: usize = 8;

/// Divides the mission into strata, in order of time.
#[must_use]
pub fn strata(mission: &Mission, resolution: Resolution) -> Vec<Stratum> {
    let phases = mission.phases.iter().enumerate();
    phases.flat_map(|(index, phase)| of_phase(index, phase, resolution)).collect()
}

fn of_phase(index: usize, phase: &Phase, resolution: Resolution) -> Vec<Stratum> {
    let orbit_s = phase.orbit.nodal_period_s();
    let interval_s = match phase.unload {
        UnloadPolicy::Every(interval) => Some(interval.min(phase.duration_s)),
        UnloadPolicy::AtFill(_) | UnloadPolicy::Never => None,
    };
    let window_s = window_length(interval_s, orbit_s, resolution);
    let most = (phase.duration_s / interval_s.unwrap_or(window_s)).max(1.0);
    let wanted = match resolution {
        Resolution::Default => (phase.duration_s / STRATUM_S).ceil().max(FEWEST).min(most),
        Resolution::Full => most,
    };
    // At least one; a last unload that the phase cuts short counts by its share.
    let count = wanted.ceil().max(1.0);
    let duration_s = phase.duration_s / count;
    (0..to_count(count))
        .map(|k| {
            let start_s = phase.start_s + duration_s * k as f64;
            let span = span(start_s, duration_s, window_s, orbit_s, resolution);
            Stratum { phase: index, start_s, duration_s, interval_s, span }
        })
        .collect()
}

/// Length of a window: the interval between unloads if that is short, else whole orbits of about a day.
fn window_length(interval_s: Option<f64>, orbit_s: f64, resolution: Resolution) -> f64 {
    let about_a_day = (DAY_S / orbit_s).round().max(1.0) * orbit_s;
    match (interval_s, resolution) {
        (Some(interval), Resolution::Full) => interval,
        (Some(interval), Resolution::Default) if interval <= 1.5 * about_a_day => interval,
        _ => about_a_day,
    }
}

fn span(start_s: f64, duration_s: f64, window_s: f64, orbit_s: f64, resolution: Resolution) -> Span {
    let window_steps = to_count(window_s / orbit_s * STEPS_PER_ORBIT).max(1);
    let step_s = window_s / window_steps as f64;
    let orbit_steps = to_count(orbit_s / step_s).max(1);
    let (windows, checkpoints) = match resolution {
        Resolution::Default => (WINDOWS, CHECKPOINTS),
        Resolution::Full => (1, CHECKPOINTS_FULL),
    };
    let part = |k: usize, of: usize| k * orbit_steps / of;
    let mut windows: Vec<usize> = (0..windows).map(|k| part(k, windows)).collect();
    windows.dedup();
    let mut checkpoints: Vec<usize> = (1..=checkpoints).map(|k| part(k, checkpoints)).collect();
    checkpoints.dedup();
    let mut span = Span { start_s, step_s, window_steps, windows, orbit_steps, checkpoints };
    if resolution == Resolution::Default {
        // The middle of what is simulated stands in the middle of the stratum.
        span.start_s = start_s + (duration_s - span.length_s()) / 2.0;
    }
    span
}

/// A count from a rounded number that is known to be finite and not negative.
fn to_count(value: f64) -> usize {
    #[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "saturates; rounded and not negative")]
    let count = value.round().max(0.0) as usize;
    count
}
