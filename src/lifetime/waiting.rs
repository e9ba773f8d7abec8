//! Unloads that wait until thrusters can make whole pulses.

use nalgebra::Vector3;

use super::{Plan, UnloadRate};
use crate::config::SmallUnload;

/// Most intervals that an unload waits: a momentum that hardly grows must not wait for ever.
const MOST_INTERVALS: f64 = 1000.0;

impl Plan {
    /// Whether small unloads wait.
    pub(super) fn waits(&self) -> bool {
        self.vehicle().propulsion.small_unload == SmallUnload::Wait
    }

    /// The rate of unloads, with as many intervals between them as it takes until the thruster that does least makes a whole
    /// pulse, if the configuration says to wait. The momentum is taken to grow steadily over them.
    pub(super) fn waited(&self, stratum: usize, windows: &[Vector3<f64>], rate: UnloadRate) -> UnloadRate {
        if !self.waits() {
            return rate;
        }
        let pricer = self.pricer(stratum);
        let pulses = windows.iter().filter_map(|h| pricer.least_pulses(&(h * -rate.repeat))).filter(|pulses| *pulses > 0.0);
        let intervals = pulses.reduce(f64::min).map_or(1.0, |least| (1.0 / least).ceil().clamp(1.0, MOST_INTERVALS));
        UnloadRate { interval_s: rate.interval_s * intervals, repeat: rate.repeat * intervals, count: rate.count / intervals }
    }

    /// Share of the nominal unloads that ask some thruster for less than its shortest pulse.
    #[must_use]
    pub fn small_unloads(&self) -> f64 {
        let (mut small, mut all) = (0.0, 0.0);
        for stratum in 0..self.strata.len() {
            let (windows, Some(rate)) = self.nominal_unloads(stratum) else { continue };
            let pricer = self.pricer(stratum);
            let under = windows.iter().filter(|h| pricer.least_pulses(&-**h).is_some_and(|pulses| pulses < 1.0)).count();
            small += rate.count * under as f64 / windows.len() as f64;
            all += rate.count;
        }
        if all > 0.0 { small / all } else { 0.0 }
    }
}
