//! What unloads do to the orbit.

use nalgebra::Vector3;

use super::Plan;

const DAY_S: f64 = 86_400.0;

/// Push of the nominal unloads on the orbit.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct UnloadDeltaV {
    /// Mean size of one, m/s.
    pub each_m_per_s: f64,
    /// Sizes of all, over the days of the mission, m/s.
    pub per_day_m_per_s: f64,
    /// Sum of all over the years of the mission, m/s: away from the centre of the body, along the flight, along the orbit normal.
    pub per_year_m_per_s: Vector3<f64>,
}

impl Plan {
    /// Push of the nominal unloads; `None` without unloads. Without net force it vanishes but for rounding.
    ///
    /// Each unload counts at the attitude in which it falls.
    #[must_use]
    pub fn unload_delta_v(&self) -> Option<UnloadDeltaV> {
        let (mut count, mut sizes, mut sum) = (0.0, 0.0, Vector3::zeros());
        for (index, stratum) in self.strata.iter().enumerate() {
            let (windows, Some(rate)) = self.nominal_unloads(index) else { continue };
            let (pricer, mass_kg) = (self.pricer(index), self.basis.masses[index].mass_kg);
            let each = rate.count / windows.len() as f64;
            for (stored, first) in windows.iter().zip(&stratum.span.windows) {
                let Some(firings) = pricer.price_map().firings(&-stored) else { continue };
                let push: Vector3<f64> = firings.map(|(k, impulse)| pricer.layout()[k].force * impulse).sum::<Vector3<f64>>() / mass_kg;
                let end_s = stratum.span.start_s + stratum.span.step_s * (first + stratum.span.window_steps) as f64;
                count += each;
                sizes += push.norm() * each;
                sum += self.in_orbit_frame(stratum.phase, end_s, &push) * each;
            }
        }
        let days = self.scenario.mission.duration_s() / DAY_S;
        (count > 0.0).then(|| UnloadDeltaV {
            each_m_per_s: sizes / count,
            per_day_m_per_s: sizes / days,
            per_year_m_per_s: sum / (days / 365.25),
        })
    }

    /// A body-frame vector at a time as parts away from the centre, along the flight and along the orbit normal.
    fn in_orbit_frame(&self, phase: usize, time_s: f64, body: &Vector3<f64>) -> Vector3<f64> {
        let phase = &self.scenario.mission.phases[phase];
        let moment = phase.moment(self.scenario.mission.start, time_s);
        let sky = moment.sky();
        let inertial = phase.attitude.inertial_from_body(&moment, &sky) * body;
        let radial = sky.state.position_m.normalize();
        let normal = sky.state.position_m.cross(&sky.state.velocity_m_per_s).normalize();
        Vector3::new(radial.dot(&inertial), normal.cross(&radial).dot(&inertial), normal.dot(&inertial))
    }
}
