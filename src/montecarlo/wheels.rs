//! Fill of the wheel envelope in the nominal case.

use crate::lifetime::Plan;

/// Largest share of the wheel envelope filled before an unload, with the excursion within an orbit and
/// the reserve on top; `None` without wheels.
pub(super) fn nominal_fill(plan: &Plan) -> Option<f64> {
    let envelope = plan.wheel_envelope()?;
    let phases = plan.phase_momentum();
    let reserve = plan.vehicle().wheels.as_ref().map_or(0.0, |wheels| wheels.reserve_n_m_s / envelope.guaranteed());
    let mut most: f64 = 0.0;
    for (index, stratum) in plan.strata().iter().enumerate() {
        let (windows, rate) = plan.nominal_unloads(index);
        let excursions = phases[stratum.phase].excursions.iter().filter(|(own, _)| *own == index);
        let cyclic = excursions.map(|(_, h)| envelope.fill(h)).fold(0.0, f64::max);
        // Without unloads a window's momentum goes on growing over the whole stratum.
        let grown = if rate.is_some() { 1.0 } else { stratum.duration_s / stratum.span.window_s() };
        let steady = windows.iter().map(|h| envelope.fill(h)).fold(0.0, f64::max) * grown;
        most = most.max(steady + cyclic + reserve);
    }
    Some(most)
}
