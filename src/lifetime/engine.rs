//! Flying draws: stratum by stratum in order of time, many lifetimes side by side.

use nalgebra::Vector3;

use super::block::Block;
use super::flight::{Flight, Place};
use super::policy::unload_rate;
use super::{Entry, Outcome, Plan, UnloadRate, What};
use crate::momentum::FeatureValues;
use crate::propellant::Row;
use crate::uncertain::{Draw, LANES};

/// Fewer lifetimes than this are flown one by one: a block costs the same however many of its lanes are taken.
const WORTH_A_BLOCK: usize = 8;

/// Reads vectors out of the rows of one lifetime.
fn vectors(rows: &[f64], first: usize, count: usize) -> impl Iterator<Item = Vector3<f64>> + '_ {
    rows[first..first + 3 * count].chunks_exact(3).map(Vector3::from_column_slice)
}

impl Plan {
    /// Flies one lifetime.
    #[must_use]
    pub fn fly(&self, draw: &Draw) -> Outcome {
        let mut flight = Flight::new(self, draw);
        self.through(&mut flight, &self.rows_in(draw));
        self.ended(flight, draw)
    }

    /// Flies many lifetimes at once; the same outcomes as one by one, to rounding.
    #[must_use]
    pub fn fly_block(&self, draws: &[Draw]) -> Vec<Outcome> {
        let fly = |draws: &[Draw]| -> Vec<Outcome> {
            if draws.len() < WORTH_A_BLOCK { draws.iter().map(|draw| self.fly(draw)).collect() } else { Block::new(self, draws).fly() }
        };
        draws.chunks(LANES).flat_map(fly).collect()
    }

    /// Momentum of all rows of the basis in a draw, N·m·s.
    pub(super) fn rows_in(&self, draw: &Draw) -> Vec<f64> {
        let values = FeatureValues::new(&self.scenario, &self.nominal);
        let parameters = &self.scenario.parameters;
        let mut rows = Vec::with_capacity(self.basis.matrix.nrows());
        let mut weights = None;
        for (index, stratum) in self.strata.iter().enumerate() {
            let (first, end) = self.rows_of(index);
            // What is drawn for each phase makes other weights in each.
            let weights = match &mut weights {
                Some((phase, weights)) if *phase == stratum.phase => weights,
                other => {
                    let draw = parameters.in_phase(draw, stratum.phase);
                    let each = self.basis.features.iter().map(|feature| values.of(feature, &draw));
                    &mut other.insert((stratum.phase, nalgebra::DVector::from_iterator(self.basis.features.len(), each))).1
                }
            };
            rows.extend((self.basis.matrix.rows(first, end - first) * &*weights).iter());
        }
        rows
    }

    /// First row of a stratum in the basis, and the row after its last.
    pub(super) fn rows_of(&self, stratum: usize) -> (usize, usize) {
        let end = self.basis.offsets.get(stratum + 1).map_or(self.basis.matrix.nrows(), |next| next.0);
        (self.basis.offsets[stratum].0, end)
    }

    /// Momentum of every window of a stratum in the nominal case, and how often it is unloaded.
    #[must_use]
    pub fn nominal_unloads(&self, stratum: usize) -> (Vec<Vector3<f64>>, Option<UnloadRate>) {
        let (windows, rate) = self.unloads(stratum, &self.nominal_rows);
        (windows.iter().map(|h| h * rate.map_or(1.0, |rate| rate.repeat)).collect(), rate)
    }

    /// Windows and unloads of a stratum from the rows of one lifetime.
    fn unloads(&self, stratum: usize, rows: &[f64]) -> (Vec<Vector3<f64>>, Option<UnloadRate>) {
        let (first, excursions) = self.basis.offsets[stratum];
        let windows: Vec<_> = vectors(rows, first, self.strata[stratum].span.windows.len()).collect();
        let end = self.rows_of(stratum).1;
        let rate = self.rate(stratum, &windows, vectors(rows, excursions, (end - excursions) / 3));
        (windows, rate)
    }

    /// Unloads of a stratum.
    pub(super) fn rate(
        &self,
        stratum: usize,
        windows: &[Vector3<f64>],
        excursions: impl Iterator<Item = Vector3<f64>>,
    ) -> Option<UnloadRate> {
        let at = &self.strata[stratum];
        let phase = &self.scenario.mission.phases[at.phase];
        let rate = unload_rate(phase.unload, at, phase.cycle_s(), self.filling.as_ref(), windows, excursions);
        rate.map(|rate| self.waited(stratum, windows, rate))
    }

    /// The books of the nominal flight, in order of time: how the propellant of every row came about.
    #[must_use]
    pub fn books(&self) -> Vec<Entry> {
        let mut flight = Flight::new(self, &self.nominal);
        flight.books.entries = Some(Vec::new());
        self.through(&mut flight, &self.nominal_rows);
        flight.books.entries.unwrap_or_default()
    }

    /// Flies all strata.
    fn through(&self, flight: &mut Flight<'_>, rows: &[f64]) {
        for index in 0..self.strata.len() {
            let (windows, rate) = self.unloads(index, rows);
            let place = self.place(index);
            flight.enter(index);
            let stratum = |flight: &mut Flight<'_>| {
                flight.events(&place, true);
                if let Some(rate) = &rate {
                    flight.count(rate);
                    flight.unload(index, &windows, rate);
                }
                flight.events(&place, false);
                self.leak(flight, index);
            };
            if flight.twice() {
                flight.press(0.0);
                let books = flight.books.clone();
                stratum(flight);
                let takes_kg = books.left_kg - flight.books.left_kg;
                flight.books = books;
                flight.press(takes_kg / 2.0);
            }
            stratum(flight);
            flight.close();
        }
    }

    /// A stratum, and whether it begins and ends its phase.
    pub(super) fn place(&self, stratum: usize) -> Place {
        let phase = |k: usize| self.strata.get(k).map(|stratum| stratum.phase);
        let own = phase(stratum);
        Place { stratum, first: stratum.checked_sub(1).and_then(phase) != own, last: phase(stratum + 1) != own }
    }

    pub(super) fn leak(&self, flight: &mut Flight<'_>, stratum: usize) {
        let duration_s = self.strata[stratum].duration_s;
        let leaked_kg = self.scenario.vehicle.tank.leakage_kg_per_s.in_draw(&flight.draw) * duration_s;
        flight.take(Row::Leakage, leaked_kg);
        flight.note(Row::Leakage, stratum, What::Time, duration_s, leaked_kg);
    }

    /// The outcome of a lifetime that has been flown to its end.
    pub(super) fn ended(&self, flight: Flight<'_>, draw: &Draw) -> Outcome {
        let tank = &self.scenario.vehicle.tank;
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
