//! Flying draws: momentum from one matrix product, then the timeline of each lifetime.

use nalgebra::{DMatrix, Vector3};

use super::policy::unload_rate;
use super::{Outcome, Plan, UnloadRate};
use crate::config::Timing;
use crate::mission::{EventKind, Phase};
use crate::momentum::FeatureValues;
use crate::propellant::{ROWS, Row, damping_momentum, slew_momentum};
use crate::pulses::Performance;
use crate::uncertain::Draw;
use crate::vehicle::MassState;

/// Reads vectors out of the rows of one lifetime.
fn vectors(rows: &[f64], first: usize, count: usize) -> impl Iterator<Item = Vector3<f64>> + '_ {
    rows[first..first + 3 * count].chunks_exact(3).map(Vector3::from_column_slice)
}

/// One lifetime while it is flown.
struct Flight<'a> {
    plan: &'a Plan,
    draw: &'a Draw,
    performance: Performance,
    outcome: Outcome,
    /// Use within the stratum at hand, kg.
    burnt_kg: f64,
}

impl Plan {
    /// Flies one lifetime.
    #[must_use]
    pub fn fly(&self, draw: &Draw) -> Outcome {
        let mut outcomes = self.fly_block(std::slice::from_ref(draw));
        outcomes.remove(0)
    }

    /// Flies many lifetimes at once; the same outcomes as one by one.
    #[must_use]
    pub fn fly_block(&self, draws: &[Draw]) -> Vec<Outcome> {
        let values = FeatureValues::new(&self.scenario, &self.nominal);
        let features = &self.basis.features;
        let weights = DMatrix::from_fn(features.len(), draws.len(), |row, column| values.of(&features[row], &draws[column]));
        let mut momentum = DMatrix::zeros(self.basis.matrix.nrows(), draws.len());
        momentum.gemm(1.0, &self.basis.matrix, &weights, 0.0);
        let rows = self.basis.matrix.nrows().max(1);
        let columns = momentum.as_slice().chunks(rows);
        draws.iter().enumerate().map(|(k, draw)| self.timeline(draw, columns.clone().nth(k).unwrap_or_default())).collect()
    }

    /// Momentum of all rows of the basis in a draw, N·m·s.
    pub(super) fn rows_in(&self, draw: &Draw) -> Vec<f64> {
        let values = FeatureValues::new(&self.scenario, &self.nominal);
        let each = self.basis.features.iter().map(|feature| values.of(feature, draw));
        let weights = nalgebra::DVector::from_iterator(self.basis.features.len(), each);
        (&self.basis.matrix * weights).as_slice().to_vec()
    }

    /// Momentum of every window of a stratum in the nominal case, and how often it is unloaded.
    #[must_use]
    pub fn nominal_unloads(&self, stratum: usize) -> (Vec<Vector3<f64>>, Option<UnloadRate>) {
        let (windows, rate) = self.unloads(stratum, &self.nominal_rows);
        (windows.iter().map(|h| h * rate.map_or(1.0, |rate| rate.repeat)).collect(), rate)
    }

    /// Windows and unloads of a stratum from the rows of one lifetime.
    fn unloads(&self, stratum: usize, rows: &[f64]) -> (Vec<Vector3<f64>>, Option<UnloadRate>) {
        let at = &self.strata[stratum];
        let phase = &self.scenario.mission.phases[at.phase];
        let (first, excursions) = self.basis.offsets[stratum];
        let windows: Vec<_> = vectors(rows, first, at.span.windows.len()).collect();
        let end = self.basis.offsets.get(stratum + 1).map_or(rows.len(), |next| next.0);
        let excursions = vectors(rows, excursions, (end - excursions) / 3);
        let rate = unload_rate(phase.unload, at, phase.cycle_s(), self.filling.as_ref(), &windows, excursions);
        (windows, rate)
    }

    fn timeline(&self, draw: &Draw, rows: &[f64]) -> Outcome {
        let vehicle = &self.scenario.vehicle;
        let tank = &vehicle.tank;
        let mut flight = Flight {
            plan: self,
            draw,
            performance: Performance::in_draw(&vehicle.propulsion, draw),
            outcome: Outcome {
                rows_kg: [0.0; ROWS.len()],
                unloads: 0.0,
                cycles: vec![0.0; vehicle.propulsion.thrusters.len()],
                used_kg: Vec::with_capacity(self.strata.len()),
                life_s: None,
                shortest_interval_s: None,
                unserved: 0.0,
            },
            burnt_kg: 0.0,
        };
        let leakage = tank.leakage_kg_per_s.in_draw(draw);
        let residual = tank.residual.in_draw(draw) * tank.loaded_kg;
        let mut used = 0.0;
        let mut previous = None;
        for (index, stratum) in self.strata.iter().enumerate() {
            let phase = &self.scenario.mission.phases[stratum.phase];
            flight.burnt_kg = 0.0;
            flight.events(index, phase, previous != Some(stratum.phase), stratum.duration_s / phase.duration_s);
            flight.unload(index, rows);
            let leaked = leakage * stratum.duration_s;
            flight.outcome.rows_kg[Row::Leakage.index()] += leaked;
            used += flight.burnt_kg + leaked;
            flight.outcome.used_kg.push(used);
            previous = Some(stratum.phase);
        }
        let mut outcome = flight.outcome;
        outcome.rows_kg[Row::Residual.index()] = residual;
        outcome.rows_kg[Row::Margin.index()] = self.margin * outcome.attitude_total_kg();
        outcome.life_s = self.life(&outcome.used_kg, tank.loaded_kg - residual);
        outcome
    }

    /// Time at which `usable_kg` is gone.
    fn life(&self, used_kg: &[f64], usable_kg: f64) -> Option<f64> {
        let mut before = 0.0;
        for (stratum, used) in self.strata.iter().zip(used_kg) {
            if *used > usable_kg {
                return Some(stratum.start_s + stratum.duration_s * (usable_kg - before) / (used - before));
            }
            before = *used;
        }
        let last = self.scenario.mission.phases.len().checked_sub(1)?;
        let first_of_last = self.strata.iter().position(|stratum| stratum.phase == last)?;
        let at_start = first_of_last.checked_sub(1).and_then(|k| used_kg.get(k)).copied().unwrap_or(0.0);
        let rate = (before - at_start) / self.scenario.mission.phases[last].duration_s;
        (rate > 0.0).then(|| self.scenario.mission.duration_s() + (usable_kg - before) / rate)
    }
}

impl Flight<'_> {
    fn burn(&mut self, row: Row, stratum: usize, impulse: &Vector3<f64>, times: f64) {
        match self.plan.pricer(stratum).cost(impulse, times, &self.performance, &mut self.outcome.cycles) {
            Some(kg) => {
                self.outcome.rows_kg[row.index()] += kg;
                self.burnt_kg += kg;
            }
            None => self.outcome.unserved += times,
        }
    }

    fn unload(&mut self, stratum: usize, rows: &[f64]) {
        let (windows, Some(rate)) = self.plan.unloads(stratum, rows) else { return };
        self.outcome.unloads += rate.count;
        let shortest = self.outcome.shortest_interval_s.map_or(rate.interval_s, |other| other.min(rate.interval_s));
        self.outcome.shortest_interval_s = Some(shortest);
        let impulses: Vec<_> = windows.iter().map(|momentum| momentum * -rate.repeat).collect();
        if self.plan.timing(stratum) == Timing::Cheapest {
            if let Some(impulse) = self.plan.cheapest(stratum, &impulses) {
                self.burn(Row::WheelUnloading, stratum, &impulse, rate.count);
            }
            return;
        }
        let each = rate.count / impulses.len() as f64;
        for impulse in impulses {
            self.burn(Row::WheelUnloading, stratum, &impulse, each);
        }
    }

    /// Events of a phase: damping at its start, slews spread evenly.
    fn events(&mut self, stratum: usize, phase: &Phase, first: bool, share: f64) {
        for event in &phase.events {
            match &event.kind {
                EventKind::RateDamping { rates_rad_per_s } => {
                    if first {
                        let rates = Vector3::from(rates_rad_per_s.each_ref().map(|rate| rate.in_draw(self.draw)));
                        let impulse = damping_momentum(&rates, &self.mass(stratum));
                        self.burn(Row::RateDamping, stratum, &impulse, 1.0);
                    }
                }
                EventKind::Slews { axis, angle_rad, rate_rad_per_s, count } => {
                    let times = count.in_draw(self.draw) * share;
                    let mass = self.mass(stratum);
                    let authority = self.plan.pricer(stratum).authority();
                    match slew_momentum(axis, *angle_rad, *rate_rad_per_s, &mass, authority) {
                        Some(slew) => {
                            self.burn(Row::Slews, stratum, &slew.start_n_m_s, times);
                            self.burn(Row::Slews, stratum, &-slew.start_n_m_s, times);
                        }
                        None => self.outcome.unserved += times,
                    }
                }
            }
        }
    }

    /// Mass properties of this draw with the propellant of the nominal mission.
    fn mass(&self, stratum: usize) -> MassState {
        let vehicle = self.plan.vehicle();
        let propellant_kg = self.plan.basis.masses[stratum].mass_kg - vehicle.dry.mass_kg.nominal();
        vehicle.dry.in_draw(self.draw, propellant_kg, &vehicle.tank.position_m)
    }
}
