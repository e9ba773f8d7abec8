//! One lifetime while it is flown: what is in the tank, how hard it presses, and what unloads and leaks take.

use nalgebra::Vector3;

use super::{Entry, Outcome, Plan, UnloadRate, What};
use crate::config::Timing;
use crate::propellant::{ROWS, Row};
use crate::pulses::{Performance, Wear};
use crate::uncertain::Draw;
use crate::vehicle::{Feed, MassState};

/// A stratum, and whether it begins and ends its phase.
#[derive(Debug, Clone, Copy)]
pub(super) struct Place {
    pub(super) stratum: usize,
    pub(super) first: bool,
    pub(super) last: bool,
}

/// One lifetime while it is flown.
pub(super) struct Flight<'a> {
    pub(super) plan: &'a Plan,
    pub(super) draw: &'a Draw,
    /// Thrusters with the tank as loaded.
    loaded: Performance,
    /// Thrusters at the feed pressure at hand.
    pub(super) performance: Performance,
    /// Factors on thrust and exhaust speed at the feed pressure at hand.
    pub(super) pressed: (f64, f64),
    pub(super) outcome: Outcome,
    /// The books, if they are asked for.
    pub(super) entries: Option<Vec<Entry>>,
    /// Propellant left, kg; below zero it is what the mission lacks.
    left_kg: f64,
}

impl<'a> Flight<'a> {
    pub(super) fn new(plan: &'a Plan, draw: &'a Draw) -> Self {
        let vehicle = plan.vehicle();
        let loaded = Performance::in_draw(&vehicle.propulsion, draw);
        Self {
            plan,
            draw,
            performance: loaded.clone(),
            loaded,
            pressed: (1.0, 1.0),
            outcome: Outcome {
                rows_kg: [0.0; ROWS.len()],
                unloads: 0.0,
                wear: Wear::none(vehicle.propulsion.thrusters.len()),
                used_kg: Vec::with_capacity(plan.strata().len()),
                life_s: None,
                shortest_interval_s: None,
                unserved: 0.0,
                left_kg: 0.0,
                too_large: None,
            },
            entries: None,
            left_kg: vehicle.tank.loaded_kg + vehicle.tank.loading_error_kg.in_draw(draw),
        }
    }

    /// Flies one stratum. In blowdown twice: the first time at the feed pressure of its start tells how much leaves, the second
    /// time at the pressure when half of that has left.
    pub(super) fn through(&mut self, stratum: impl Fn(&mut Self)) {
        if self.plan.vehicle().tank.feed != Feed::Regulated {
            self.press(0.0);
            let (outcome, left_kg, entries) = (self.outcome.clone(), self.left_kg, self.entries.clone());
            stratum(self);
            let takes_kg = left_kg - self.left_kg;
            (self.outcome, self.left_kg, self.entries) = (outcome, left_kg, entries);
            self.press(takes_kg / 2.0);
        }
        stratum(self);
        let used_kg = ROWS.into_iter().filter(|row| row.leaves_the_tank()).map(|row| self.outcome.row(row)).sum();
        self.outcome.used_kg.push(used_kg);
    }

    /// Sets thrust and exhaust speed by the feed pressure after `more_kg` have left.
    fn press(&mut self, more_kg: f64) {
        let vehicle = self.plan.vehicle();
        let used_kg = vehicle.tank.loaded_kg - self.left_kg + more_kg;
        self.pressed = vehicle.propulsion.pressure_law.factors(vehicle.tank.feed.pressure_ratio(used_kg.min(vehicle.tank.loaded_kg)));
        self.performance = self.loaded.times(self.pressed.0, self.pressed.1);
    }

    pub(super) fn finish(mut self) -> Outcome {
        self.outcome.left_kg = self.left_kg;
        self.outcome
    }

    /// Takes propellant for a row.
    pub(super) fn take(&mut self, row: Row, kg: f64) {
        self.outcome.rows_kg[row.index()] += kg;
        self.left_kg -= kg;
    }

    /// Gives an angular impulse (N·m·s, body frame) `times` times.
    pub(super) fn fire(&mut self, row: Row, stratum: usize, impulse: &Vector3<f64>, times: f64) {
        match self.plan.pricer(stratum).cost(impulse, times, &self.performance, &mut self.outcome.wear) {
            Some(kg) => {
                self.take(row, kg);
                self.note(row, stratum, What::Impulse(*impulse), times, kg);
            }
            None => self.outcome.unserved += times,
        }
    }

    /// Writes an entry into the books, if they are asked for.
    pub(super) fn note(&mut self, row: Row, stratum: usize, what: What, times: f64, kg: f64) {
        let plan = self.plan;
        if let Some(entries) = &mut self.entries {
            let price_kg = match &what {
                What::Impulse(impulse) => plan.price(stratum, impulse),
                _ => None,
            };
            entries.push(Entry { row, stratum, what, times, kg, price_kg });
        }
    }

    /// Unloads of a stratum.
    pub(super) fn unload(&mut self, stratum: usize, windows: &[Vector3<f64>], rate: Option<UnloadRate>) {
        let Some(rate) = rate else { return };
        self.outcome.unloads += rate.count;
        let shortest = self.outcome.shortest_interval_s.map_or(rate.interval_s, |other| other.min(rate.interval_s));
        self.outcome.shortest_interval_s = Some(shortest);
        let impulses: Vec<_> = windows.iter().map(|momentum| momentum * -rate.repeat).collect();
        if self.plan.timing(stratum) == Timing::Cheapest {
            if let Some(impulse) = self.plan.cheapest(stratum, &impulses) {
                self.fire(Row::WheelUnloading, stratum, &impulse, rate.count);
            }
            return;
        }
        let each = rate.count / impulses.len() as f64;
        for impulse in impulses {
            self.fire(Row::WheelUnloading, stratum, &impulse, each);
        }
    }

    /// Propellant left, kg, and none if the mission has used more.
    pub(super) fn left_kg(&self) -> f64 {
        self.left_kg.max(0.0)
    }

    /// Mass properties of this draw after `used_kg` more have left.
    pub(super) fn mass(&self, used_kg: f64) -> MassState {
        self.plan.vehicle().mass_in_draw(self.draw, (self.left_kg - used_kg).max(0.0))
    }
}
