//! Flying draws: momentum from one matrix product, then the timeline of each lifetime.

use nalgebra::{DMatrix, Vector3};

use super::flight::{Flight, Place};
use super::policy::unload_rate;
use super::{Entry, Outcome, Plan, UnloadRate, What};
use crate::momentum::FeatureValues;
use crate::propellant::Row;
use crate::uncertain::Draw;

/// Reads vectors out of the rows of one lifetime.
fn vectors(rows: &[f64], first: usize, count: usize) -> impl Iterator<Item = Vector3<f64>> + '_ {
    rows[first..first + 3 * count].chunks_exact(3).map(Vector3::from_column_slice)
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
        let rate = rate.map(|rate| self.waited(stratum, &windows, rate));
        (windows, rate)
    }

    /// The books of the nominal flight, in order of time: how the propellant of every row came about.
    #[must_use]
    pub fn books(&self) -> Vec<Entry> {
        let mut flight = Flight::new(self, &self.nominal);
        flight.entries = Some(Vec::new());
        self.through(&mut flight, &self.nominal_rows);
        flight.entries.unwrap_or_default()
    }

    fn timeline(&self, draw: &Draw, rows: &[f64]) -> Outcome {
        let tank = &self.scenario.vehicle.tank;
        let mut flight = Flight::new(self, draw);
        self.through(&mut flight, rows);
        let residual = tank.residual.in_draw(draw) * tank.loaded_kg;
        let mut outcome = flight.finish();
        outcome.rows_kg[Row::Residual.index()] = residual;
        outcome.rows_kg[Row::LoadingError.index()] = 0.0 - tank.loading_error_kg.in_draw(draw);
        outcome.rows_kg[Row::Margin.index()] =
            self.margin.attitude * outcome.attitude_total_kg() + self.margin.burns * outcome.row(Row::OrbitBurns);
        let usable_kg = tank.loaded_kg + tank.loading_error_kg.in_draw(draw) - residual;
        outcome.life_s = self.life(&outcome.used_kg, usable_kg);
        outcome
    }

    /// Flies all strata.
    fn through(&self, flight: &mut Flight<'_>, rows: &[f64]) {
        let leakage = self.scenario.vehicle.tank.leakage_kg_per_s.in_draw(flight.draw);
        let mut previous = None;
        for (index, stratum) in self.strata.iter().enumerate() {
            let next = self.strata.get(index + 1).map(|next| next.phase);
            let place = Place { stratum: index, first: previous != Some(stratum.phase), last: next != Some(stratum.phase) };
            let (windows, rate) = self.unloads(index, rows);
            flight.through(|flight| {
                flight.events(&place, true);
                flight.unload(index, &windows, rate);
                flight.events(&place, false);
                let leaked_kg = leakage * stratum.duration_s;
                flight.take(Row::Leakage, leaked_kg);
                flight.note(Row::Leakage, index, What::Time, stratum.duration_s, leaked_kg);
            });
            previous = Some(stratum.phase);
        }
    }

    /// Time at which `usable_kg` is gone.
    fn life(&self, used_kg: &[f64], usable_kg: f64) -> Option<f64> {
        let mut before = 0.0;
        for (stratum, used) in self.strata.iter().zip(used_kg) {
            if *used > usable_kg {
                let share = ((usable_kg - before) / (used - before)).clamp(0.0, 1.0);
                return Some(stratum.start_s + stratum.duration_s * share);
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
