//! When the wheels are unloaded, and how much is in them then.

use nalgebra::Vector3;

use crate::authority::Authority;
use crate::mission::UnloadPolicy;
use crate::momentum::Stratum;

/// Unloads in one stratum of one lifetime.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct UnloadRate {
    /// Time between unloads, s.
    pub interval_s: f64,
    /// Momentum at an unload over that of a simulated window.
    pub repeat: f64,
    /// Unloads in the stratum.
    pub count: f64,
}

/// The wheels' side of unloading.
#[derive(Debug, Clone)]
pub(super) struct Filling {
    pub(super) envelope: Authority,
    /// Share of the envelope that is kept free.
    pub(super) reserve: f64,
}

impl Filling {
    /// Largest share of the envelope that the excursions within an orbit fill, the reserve included.
    pub(super) fn cyclic(&self, excursions: impl Iterator<Item = Vector3<f64>>) -> f64 {
        self.reserve + excursions.map(|h| self.envelope.fill(&h)).fold(0.0, f64::max)
    }
}

/// Unloads of a stratum: momentum of each window, N·m·s, body frame, and excursions within an orbit.
///
/// Unloading at a fill takes the steady growth as proportional to time and the excursion on top of it;
/// both fills add at worst, so the wheels never hold more than asked. `None` without unloads.
pub(super) fn unload_rate(
    policy: UnloadPolicy,
    stratum: &Stratum,
    orbit_s: f64,
    filling: Option<&Filling>,
    windows: &[Vector3<f64>],
    excursions: impl Iterator<Item = Vector3<f64>>,
) -> Option<UnloadRate> {
    let window_s = stratum.span.window_s();
    let interval_s = match (policy, filling) {
        (UnloadPolicy::Never, _) | (UnloadPolicy::AtFill(_), None) => return None,
        (UnloadPolicy::Every(interval), _) => interval,
        (UnloadPolicy::AtFill(limit), Some(filling)) => {
            let steady = windows.iter().map(|h| filling.envelope.fill(h)).fold(0.0, f64::max) / window_s;
            let free = limit - filling.cyclic(excursions);
            // Never more often than once an orbit: what fills the wheels within one comes back by itself.
            if free <= 0.0 { orbit_s } else { (free / steady).max(orbit_s) }
        }
    };
    let interval_s = stratum.interval_s.unwrap_or(interval_s).min(f64::MAX);
    Some(UnloadRate { interval_s, repeat: interval_s / window_s, count: stratum.duration_s / interval_s })
}
