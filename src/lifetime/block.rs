//! Many lifetimes flown side by side.
//!
//! Momentum, the choice of thrusters and their pulses are computed for all lanes together; what differs from lifetime to
//! lifetime (events, lost thrusters, arms that have moved) is flown one by one between them.

use nalgebra::Vector3;

use super::flight::{Books, Flight};
use super::{Outcome, Plan, UnloadRate};
use crate::config::Timing;
use crate::mission::UnloadPolicy;
use crate::momentum::FeatureValues;
use crate::propellant::Row;
use crate::pulses::{LanePerformance, LaneTariff, LaneWear};
use crate::uncertain::{Anew, Draw, LANES, Lane};

/// Lifetimes side by side, at most [`LANES`].
pub(super) struct Block<'a> {
    plan: &'a Plan,
    draws: &'a [Draw],
    flights: Vec<Flight<'a>>,
    /// Values of the features of the phase at hand.
    phase: Option<usize>,
    features: Vec<Lane>,
    /// Momentum of windows and excursions of the stratum at hand, N·m·s.
    momentum: Vec<[Lane; 3]>,
    performance: LanePerformance,
    wear: LaneWear,
}

impl<'a> Block<'a> {
    pub(super) fn new(plan: &'a Plan, draws: &'a [Draw]) -> Self {
        let flights: Vec<Flight<'a>> = draws.iter().map(|draw| Flight::new(plan, draw)).collect();
        let thrusters = plan.vehicle().propulsion.thrusters.len();
        let performance = LanePerformance::new(flights.iter().map(|flight| &flight.performance), thrusters);
        Self { plan, draws, flights, phase: None, features: Vec::new(), momentum: Vec::new(), performance, wear: LaneWear::none(thrusters) }
    }

    pub(super) fn fly(mut self) -> Vec<Outcome> {
        for stratum in 0..self.plan.strata().len() {
            self.enter(stratum);
            let rates = self.rates(stratum);
            if self.flights.first().is_some_and(Flight::twice) {
                self.flights.iter_mut().for_each(|flight| flight.press(0.0));
                let books: Vec<Books> = self.flights.iter().map(|flight| flight.books.clone()).collect();
                self.stratum(stratum, &rates);
                for (flight, books) in self.flights.iter_mut().zip(books) {
                    let takes_kg = books.left_kg - flight.books.left_kg;
                    flight.books = books;
                    flight.press(takes_kg / 2.0);
                }
            }
            self.stratum(stratum, &rates);
            self.flights.iter_mut().for_each(Flight::close);
        }
        let plan = self.plan;
        self.flights.into_iter().zip(self.draws).map(|(flight, draw)| plan.ended(flight, draw)).collect()
    }

    /// Enters a stratum and computes the momentum of its windows.
    fn enter(&mut self, stratum: usize) {
        let plan = self.plan;
        self.flights.iter_mut().for_each(|flight| flight.enter(stratum));
        let phase = plan.strata()[stratum].phase;
        if self.phase != Some(phase) {
            self.phase = Some(phase);
            let values = FeatureValues::new(&plan.scenario, &plan.nominal);
            let one = |column: &usize| -> Lane {
                let feature = &plan.basis.features[*column];
                std::array::from_fn(|lane| self.flights.get(lane).map_or(0.0, |flight| values.of(feature, &flight.draw)))
            };
            self.features = plan.panels.features(phase).iter().map(one).collect();
            if plan.scenario().parameters.any(Anew::Phase) {
                self.perform();
            }
        }
        let (first, end) = plan.rows_of(stratum);
        self.momentum.resize((end - first) / 3, [[0.0; LANES]; 3]);
        plan.panels.momentum(stratum, &self.features, &mut self.momentum);
    }

    /// Takes over the performance of every lifetime.
    fn perform(&mut self) {
        let thrusters = self.plan.vehicle().propulsion.thrusters.len();
        self.performance = LanePerformance::new(self.flights.iter().map(|flight| &flight.performance), thrusters);
    }

    /// A vector of one lane.
    fn vector(&self, index: usize, lane: usize) -> Vector3<f64> {
        Vector3::from(self.momentum[index].each_ref().map(|component| component[lane]))
    }

    /// How often each lifetime unloads.
    fn rates(&self, stratum: usize) -> Vec<Option<UnloadRate>> {
        let plan = self.plan;
        let at = &plan.strata()[stratum];
        let windows = at.span.windows.len();
        let phase = &plan.scenario().mission.phases[at.phase];
        // At a fixed interval all are alike, unless small unloads wait.
        let alike = !matches!(phase.unload, UnloadPolicy::AtFill(_)) && !plan.waits();
        let rate = |lane: usize| {
            let own: Vec<_> = (0..windows).map(|k| self.vector(k, lane)).collect();
            plan.rate(stratum, &own, (windows..self.momentum.len()).map(|k| self.vector(k, lane)))
        };
        if alike { vec![rate(0); self.flights.len()] } else { (0..self.flights.len()).map(rate).collect() }
    }

    fn stratum(&mut self, stratum: usize, rates: &[Option<UnloadRate>]) {
        let place = self.plan.place(stratum);
        self.flights.iter_mut().for_each(|flight| flight.events(&place, true));
        self.unload(stratum, rates);
        for flight in &mut self.flights {
            flight.events(&place, false);
            self.plan.leak(flight, stratum);
        }
    }

    fn unload(&mut self, stratum: usize, rates: &[Option<UnloadRate>]) {
        let windows = self.plan.strata()[stratum].span.windows.len();
        // Lanes with all thrusters go together, the others one by one.
        let tariff = self.plan.layouts[0].tariff(stratum);
        let together: Vec<bool> = self.flights.iter().map(|flight| tariff.is_some() && flight.lost == 0).collect();
        for lane in 0..self.flights.len() {
            let Some(rate) = &rates[lane] else { continue };
            self.flights[lane].count(rate);
            if !together[lane] {
                let own: Vec<_> = (0..windows).map(|k| self.vector(k, lane)).collect();
                self.flights[lane].unload(stratum, &own, rate);
            }
        }
        let Some(tariff) = tariff.filter(|_| together.contains(&true)) else { return };
        if self.flights.first().is_some_and(Flight::twice) {
            self.perform();
        }
        self.wear.clear();
        let of = |lane: usize| rates.get(lane).copied().flatten().filter(|_| together[lane]);
        let repeat: Lane = std::array::from_fn(|lane| of(lane).map_or(0.0, |rate| -rate.repeat));
        let count: Lane = std::array::from_fn(|lane| of(lane).map_or(0.0, |rate| rate.count));
        self.give(stratum, tariff, &repeat, &count);
        for (lane, flight) in self.flights.iter_mut().enumerate().filter(|(lane, _)| together[*lane]) {
            flight.take(Row::WheelUnloading, self.wear.kg[lane]);
            self.wear.add_to(lane, &mut flight.books.outcome.wear);
        }
    }

    /// Gives the opposite of what the wheels hold in each lane.
    fn give(&mut self, stratum: usize, tariff: &LaneTariff, repeat: &Lane, count: &Lane) {
        let windows = self.plan.strata()[stratum].span.windows.len();
        let scaled = |vector: &[Lane; 3]| vector.each_ref().map(|component| std::array::from_fn(|lane| component[lane] * repeat[lane]));
        let impulses: Vec<[Lane; 3]> = self.momentum.iter().take(windows).map(scaled).collect();
        let shift = self.flights.iter().any(|flight| flight.shift.is_some()).then(|| {
            let of = |lane: usize| self.flights.get(lane).and_then(|flight| flight.shift).unwrap_or_else(Vector3::zeros);
            [0, 1, 2].map(|axis| std::array::from_fn(|lane| of(lane)[axis]))
        });
        if self.plan.timing(stratum) == Timing::Cheapest {
            let mut least = [f64::INFINITY; LANES];
            let mut cheapest = [[0.0; LANES]; 3];
            for impulse in &impulses {
                let price = tariff.price(impulse);
                for lane in 0..LANES {
                    if price[lane] < least[lane] {
                        least[lane] = price[lane];
                        (0..3).for_each(|axis| cheapest[axis][lane] = impulse[axis][lane]);
                    }
                }
            }
            self.fire(stratum, tariff, &cheapest, shift.as_ref(), count);
            return;
        }
        let each = count.map(|count| count / windows as f64);
        for impulse in &impulses {
            self.fire(stratum, tariff, impulse, shift.as_ref(), &each);
        }
    }

    /// Fires in all lanes, and with more care where lanes leave it.
    fn fire(&mut self, stratum: usize, tariff: &LaneTariff, impulse: &[Lane; 3], shift: Option<&[Lane; 3]>, times: &Lane) {
        let left = tariff.fire(impulse, shift, times, &self.performance, &mut self.wear);
        for (lane, flight) in self.flights.iter_mut().enumerate().filter(|(lane, _)| left[*lane] > 0.0) {
            flight.fire(Row::WheelUnloading, stratum, &Vector3::from(impulse.each_ref().map(|part| part[lane])), left[lane]);
        }
    }
}
