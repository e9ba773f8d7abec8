//! Where on the orbit an unload takes place, and what waiting saves.

use nalgebra::Vector3;

use super::Plan;
use crate::authority::Price;
use crate::config::Timing;
use crate::pulses::{Performance, Pricer, Wear};

/// Propellant of the nominal unloads that may wait for the cheapest point of the orbit, kg.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct TimingGain {
    /// Unloading as due, at any point of the orbit.
    pub as_due_kg: f64,
    /// Unloading at the cheapest of nine points of the orbit.
    pub cheapest_kg: f64,
}

/// The angular impulse (N·m·s, body frame) of least price: the windows of a stratum hold about the same momentum, met
/// by the body at nine points of the orbit. One that cannot be given is taken only if none can.
pub(super) fn cheapest(pricer: &Pricer, impulses: &[Vector3<f64>]) -> Option<Vector3<f64>> {
    let price = |impulse: &Vector3<f64>| match pricer.price_map().price(impulse) {
        Price::Served { kg } => kg,
        Price::NotServed { .. } => f64::INFINITY,
    };
    let priced = impulses.iter().map(|impulse| (price(impulse), *impulse));
    priced.reduce(|best, next| if next.0 < best.0 { next } else { best }).map(|(_, impulse)| impulse)
}

impl Plan {
    /// Where the unloads of a stratum take place.
    pub(super) fn timing(&self, stratum: usize) -> Timing {
        self.scenario.mission.phases[self.strata[stratum].phase].timing
    }

    /// What waiting for the cheapest point saves in the nominal mission; `None` where no phase waits.
    #[must_use]
    pub fn timing_gain(&self) -> Option<TimingGain> {
        let waiting: Vec<usize> = (0..self.strata.len()).filter(|k| self.timing(*k) == Timing::Cheapest).collect();
        if waiting.is_empty() {
            return None;
        }
        let performance = Performance::nominal(&self.scenario.vehicle.propulsion);
        let mut gain = TimingGain { as_due_kg: 0.0, cheapest_kg: 0.0 };
        for stratum in waiting {
            let (windows, Some(rate)) = self.nominal_unloads(stratum) else { continue };
            let impulses: Vec<Vector3<f64>> = windows.iter().map(|h| -h).collect();
            let mut wear = Wear::none(self.vehicle().propulsion.thrusters.len());
            let mut cost =
                |impulse: &Vector3<f64>, times: f64| self.pricer(stratum).cost(impulse, times, &performance, &mut wear).unwrap_or(f64::NAN);
            gain.as_due_kg += impulses.iter().map(|impulse| cost(impulse, rate.count / impulses.len() as f64)).sum::<f64>();
            gain.cheapest_kg += cheapest(self.pricer(stratum), &impulses).map_or(0.0, |impulse| cost(&impulse, rate.count));
        }
        Some(gain)
    }
}
