//! Solar activity over the mission.

use crate::config::{self, ActivityLevel};
use crate::environment::Activity;
use crate::uncertain::{Parameters, Uncertain};
use crate::vehicle::Faults;

/// Levels between which density is interpolated when the activity is uncertain.
const LEVELS: usize = 5;

/// Solar activity, constant over a lifetime: one level, or several levels and where between them a draw lies.
#[derive(Debug, Clone)]
pub struct SolarActivity {
    f107: Uncertain,
    levels: Vec<Activity>,
    step: f64,
}

impl SolarActivity {
    pub(super) fn new(written: &config::SolarActivity, parameters: &mut Parameters, faults: &mut Faults) -> Option<Self> {
        const KEY: &str = "environment.solar_activity";
        match (written.level, written.f107) {
            (Some(level), None) => {
                let activity = match level {
                    ActivityLevel::Low => Activity::LOW,
                    ActivityLevel::Moderate => Activity::MODERATE,
                    ActivityLevel::High => Activity::HIGH,
                };
                Some(Self { f107: Uncertain::fixed(activity.f107), levels: vec![activity], step: 0.0 })
            }
            (None, Some(f107)) => {
                let key = format!("{KEY}.f107");
                let spread = faults.spread(&key, f107.0, 50.0, 400.0, "a radio flux F10.7 in solar flux units")?;
                let (low, high) = spread.support();
                let count = if spread.is_fixed() { 1 } else { LEVELS };
                let step = if count == 1 { 0.0 } else { (high - low) / (count - 1) as f64 };
                let levels = (0..count).map(|k| Activity::from_f107(low + step * k as f64)).collect();
                Some(Self { f107: parameters.register(key, "sfu", spread), levels, step })
            }
            _ => {
                faults.push(KEY, "expected one of `level` and `f107`", "keep one: `level: moderate`, or `f107: 90 .. 190`");
                None
            }
        }
    }

    /// The levels at which density is computed, rising.
    #[must_use]
    pub fn levels(&self) -> &[Activity] {
        &self.levels
    }

    /// The radio flux F10.7.
    #[must_use]
    pub const fn f107(&self) -> &Uncertain {
        &self.f107
    }

    /// Weight of a level at a radio flux: hat functions, which add up to one.
    #[must_use]
    pub fn weight(&self, level: usize, f107: f64) -> f64 {
        let Some(own) = self.levels.get(level) else { return 0.0 };
        if self.levels.len() == 1 {
            return 1.0;
        }
        (1.0 - (f107 - own.f107).abs() / self.step).clamp(0.0, 1.0)
    }
}
