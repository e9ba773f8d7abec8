//! Solar activity over the mission.

use std::f64::consts::PI;

use crate::config::{self, ActivityLevel};
use crate::environment::{Activity, Epoch};
use crate::uncertain::{Parameters, Spread, Uncertain};
use crate::vehicle::Faults;

/// Levels between which density is interpolated when the activity is uncertain. Straight lines between five would put the
/// mean density at 600 km 4 % too high for a flux from 80 to 200; a polynomial through five Chebyshev points is within
/// 0.1 % in the mean and 2 % everywhere.
const LEVELS: usize = 5;
const KEY: &str = "environment.solar_activity";

/// Solar activity: what chance decides (a flux, or the amplitude of a cycle), and how the flux follows from it in time.
#[derive(Debug, Clone)]
pub struct SolarActivity {
    chance: Uncertain,
    /// Values of `chance` at which density is computed, rising.
    levels: Vec<f64>,
    course: Course,
}

/// How the radio flux F10.7 follows from what chance decides.
#[derive(Debug, Clone, Copy, PartialEq)]
enum Course {
    /// A reference level with its own Ap.
    Level(Activity),
    /// It is the flux.
    Constant,
    /// It is the amplitude of a cycle.
    Cycle { start: Epoch, period_s: f64, low: f64, high: f64 },
}

impl SolarActivity {
    pub(super) fn new(written: Option<&config::SolarActivity>, parameters: &mut Parameters, faults: &mut Faults) -> Option<Self> {
        // Not given where nothing depends on it.
        let Some(written) = written else {
            let nominal = Spread::Fixed(Activity::MODERATE.f107);
            return Some(Self::spread(Uncertain::fixed(nominal.nominal()), &nominal, Course::Level(Activity::MODERATE)));
        };
        match (written.level, written.f107.clone(), &written.cycle) {
            (Some(level), None, None) => {
                let activity = match level {
                    ActivityLevel::Low => Activity::LOW,
                    ActivityLevel::Moderate => Activity::MODERATE,
                    ActivityLevel::High => Activity::HIGH,
                };
                let fixed = Spread::Fixed(activity.f107);
                Some(Self::spread(parameters.register(KEY, "sfu", fixed.clone()), &fixed, Course::Level(activity)))
            }
            (None, Some(f107), None) => {
                let key = format!("{KEY}.f107");
                let spread = flux(&key, f107.0, faults)?;
                Some(Self::spread(parameters.register(key, "sfu", spread.clone()), &spread, Course::Constant))
            }
            (None, None, Some(cycle)) => {
                let course = course(cycle, faults);
                let key = format!("{KEY}.cycle.amplitude");
                let amplitude = cycle.amplitude.clone().map_or(Spread::Fixed(1.0), |amplitude| amplitude.0);
                let amplitude = faults.spread(&key, amplitude, 0.0, 3.0, "a factor on the rise of a cycle")?;
                Some(Self::spread(parameters.register(key, "", amplitude.clone()), &amplitude, course?))
            }
            _ => {
                let help = "keep one: `level: moderate`, `f107: 90 .. 190`, or `cycle: {start: …, period: …, low: …, high: …}`";
                faults.push(KEY, "expected one of `level`, `f107` and `cycle`", help);
                None
            }
        }
    }

    fn spread(chance: Uncertain, spread: &Spread, course: Course) -> Self {
        let (low, high) = spread.support();
        let node = |k: usize| f64::midpoint(low, high) - (high - low) / 2.0 * (PI * (k as f64 + 0.5) / LEVELS as f64).cos();
        let levels = if spread.is_fixed() { vec![low] } else { (0..LEVELS).map(node).collect() };
        Self { chance, levels, course }
    }

    /// How many levels density is computed at.
    #[must_use]
    pub fn count(&self) -> usize {
        self.levels.len()
    }

    /// Activity of each level at an instant.
    #[must_use]
    pub fn levels_at(&self, epoch: Epoch) -> Vec<Activity> {
        let at = |value: &f64| match self.course {
            Course::Level(activity) => activity,
            Course::Constant => Activity::from_f107(*value),
            Course::Cycle { start, period_s, low, high } => {
                let phase = PI * (epoch.tt_seconds() - start.tt_seconds()) / period_s;
                Activity::from_f107(low + value * (high - low) * phase.sin().powi(2))
            }
        };
        self.levels.iter().map(at).collect()
    }

    /// What chance decides: the flux, or the amplitude of the cycle.
    #[must_use]
    pub const fn chance(&self) -> &Uncertain {
        &self.chance
    }

    /// Weight of a level at a value of what chance decides: Lagrange's polynomials, which add up to one.
    #[must_use]
    pub fn weight(&self, level: usize, value: f64) -> f64 {
        let Some(own) = self.levels.get(level) else { return 0.0 };
        let others = self.levels.iter().enumerate().filter(|(k, _)| *k != level);
        others.map(|(_, other)| (value - other) / (own - other)).product()
    }
}

/// A radio flux that the atmosphere model takes.
fn flux(key: &str, spread: Spread, faults: &mut Faults) -> Option<Spread> {
    faults.spread(key, spread, 50.0, 400.0, "a radio flux F10.7 in solar flux units")
}

fn course(cycle: &config::Cycle, faults: &mut Faults) -> Option<Course> {
    let at = |key: &str| format!("{KEY}.cycle.{key}");
    let start =
        Epoch::parse(&cycle.start).map_err(|error| faults.push(&at("start"), error.to_string(), "write a date such as `2030-06-01`")).ok();
    let period = faults.positive(&at("period"), cycle.period.0, "a period");
    let low = flux(&at("low"), Spread::Fixed(cycle.low.0), faults);
    let high = flux(&at("high"), Spread::Fixed(cycle.high.0), faults);
    if cycle.low.0 > cycle.high.0 {
        faults.push_also(&at("low"), "the minimum lies above the maximum", "swap them", &at("high"), "the maximum");
        return None;
    }
    Some(Course::Cycle { start: start?, period_s: period?, low: low?.nominal(), high: high?.nominal() })
}
