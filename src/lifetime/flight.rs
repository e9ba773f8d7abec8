//! One lifetime while it is flown: what is in the tank, how hard it presses, and what unloads and leaks take.

use std::borrow::Cow;

use nalgebra::Vector3;

use super::layouts::Lost;
use super::timing::cheapest;
use super::{Entry, Outcome, Plan, UnloadRate, What};
use crate::config::Timing;
use crate::propellant::{ROWS, Row};
use crate::pulses::{Performance, Pricer, Wear};
use crate::uncertain::{Anew, Draw};
use crate::vehicle::{Feed, MassState};

/// A stratum, and whether it begins and ends its phase.
#[derive(Debug, Clone, Copy)]
pub(super) struct Place {
    pub(super) stratum: usize,
    pub(super) first: bool,
    pub(super) last: bool,
}

/// What a stratum adds to.
#[derive(Clone)]
pub(super) struct Books {
    pub(super) outcome: Outcome,
    /// The entries, if they are asked for.
    pub(super) entries: Option<Vec<Entry>>,
    /// How often each event of the phase has happened.
    pub(super) done: Vec<f64>,
    /// Propellant left, kg; below zero it is what the mission lacks.
    pub(super) left_kg: f64,
}

/// One lifetime while it is flown.
pub(super) struct Flight<'a> {
    pub(super) plan: &'a Plan,
    /// The draw of the lifetime, and as it is in the phase at hand.
    lifetime: &'a Draw,
    pub(super) draw: Cow<'a, Draw>,
    phase: Option<usize>,
    /// Failures that have happened.
    pub(super) lost: Lost,
    /// How far the centre of mass lies off the one that the layout was made for, m, where that counts.
    pub(super) shift: Option<Vector3<f64>>,
    /// Thrusters with the tank as loaded.
    loaded: Performance,
    /// Thrusters at the feed pressure at hand.
    pub(super) performance: Performance,
    /// Factors on thrust and exhaust speed at the feed pressure at hand.
    pub(super) pressed: (f64, f64),
    pub(super) books: Books,
}

impl<'a> Flight<'a> {
    pub(super) fn new(plan: &'a Plan, draw: &'a Draw) -> Self {
        let vehicle = plan.vehicle();
        let loaded = Performance::in_draw(&vehicle.propulsion, draw);
        let outcome = Outcome {
            rows_kg: [0.0; ROWS.len()],
            unloads: 0.0,
            wear: Wear::none(vehicle.propulsion.thrusters.len()),
            used_kg: Vec::with_capacity(plan.strata().len()),
            life_s: None,
            shortest_interval_s: None,
            unserved: 0.0,
            left_kg: 0.0,
            too_large: None,
        };
        let left_kg = vehicle.tank.loaded_kg + vehicle.tank.loading_error_kg.in_draw(draw);
        Self {
            plan,
            lifetime: draw,
            draw: Cow::Borrowed(draw),
            phase: None,
            lost: 0,
            shift: None,
            performance: loaded.clone(),
            loaded,
            pressed: (1.0, 1.0),
            books: Books { outcome, entries: None, done: Vec::new(), left_kg },
        }
    }

    /// Enters a stratum: what is drawn for each phase, which thrusters are left, where the centre of mass lies.
    pub(super) fn enter(&mut self, stratum: usize) {
        let plan = self.plan;
        let phase = plan.strata()[stratum].phase;
        if self.phase != Some(phase) {
            self.phase = Some(phase);
            self.books.done = vec![0.0; plan.scenario().mission.phases[phase].events.len()];
            if plan.scenario().parameters.any(Anew::Phase) {
                self.draw = plan.scenario().parameters.in_phase(self.lifetime, phase);
                self.loaded = Performance::in_draw(&plan.vehicle().propulsion, &self.draw);
                self.performance = self.loaded.times(self.pressed.0, self.pressed.1);
            }
        }
        self.lost = plan.lost(stratum, &self.draw);
        self.shift = plan.shift(stratum, self.lost, &self.draw);
    }

    /// Whether a stratum is flown twice: in blowdown a first time at the feed pressure of its start tells how much leaves, the
    /// second time the pressure is that when half of it has left.
    pub(super) fn twice(&self) -> bool {
        self.plan.vehicle().tank.feed != Feed::Regulated
    }

    /// Sets thrust and exhaust speed by the feed pressure after `more_kg` have left.
    pub(super) fn press(&mut self, more_kg: f64) {
        let vehicle = self.plan.vehicle();
        let used_kg = vehicle.tank.loaded_kg - self.books.left_kg + more_kg;
        self.pressed = vehicle.propulsion.pressure_law.factors(vehicle.tank.feed.pressure_ratio(used_kg.min(vehicle.tank.loaded_kg)));
        self.performance = self.loaded.times(self.pressed.0, self.pressed.1);
    }

    /// Closes a stratum.
    pub(super) fn close(&mut self) {
        let outcome = &mut self.books.outcome;
        let used_kg = ROWS.into_iter().filter(|row| row.leaves_the_tank()).map(|row| outcome.row(row)).sum();
        outcome.used_kg.push(used_kg);
    }

    pub(super) fn finish(mut self) -> Outcome {
        self.books.outcome.left_kg = self.books.left_kg;
        self.books.outcome
    }

    /// The layout about the centre of mass of a stratum, without what is lost.
    pub(super) fn pricer(&self, stratum: usize) -> &'a Pricer {
        self.plan.layouts[self.lost].pricer(stratum)
    }

    /// Takes propellant for a row.
    pub(super) fn take(&mut self, row: Row, kg: f64) {
        self.books.outcome.rows_kg[row.index()] += kg;
        self.books.left_kg -= kg;
    }

    /// Gives an angular impulse (N·m·s, body frame) `times` times.
    pub(super) fn fire(&mut self, row: Row, stratum: usize, impulse: &Vector3<f64>, times: f64) {
        match self.cost(stratum, impulse, times) {
            Some(kg) => {
                self.take(row, kg);
                self.note(row, stratum, What::Impulse(*impulse), times, kg);
            }
            None => self.books.outcome.unserved += times,
        }
    }

    fn cost(&mut self, stratum: usize, impulse: &Vector3<f64>, times: f64) -> Option<f64> {
        let pricer = self.pricer(stratum);
        let wear = &mut self.books.outcome.wear;
        let Some(shift) = &self.shift else { return pricer.cost(impulse, times, &self.performance, wear) };
        pricer.cost(&pricer.aimed(impulse, shift)?, times, &self.performance, wear)
    }

    /// Writes an entry into the books, if they are asked for.
    pub(super) fn note(&mut self, row: Row, stratum: usize, what: What, times: f64, kg: f64) {
        let plan = self.plan;
        if let Some(entries) = &mut self.books.entries {
            let price_kg = match &what {
                What::Impulse(impulse) => plan.price(stratum, impulse),
                _ => None,
            };
            entries.push(Entry { row, stratum, what, times, kg, price_kg });
        }
    }

    /// Counts the unloads of a stratum.
    pub(super) fn count(&mut self, rate: &UnloadRate) {
        let outcome = &mut self.books.outcome;
        outcome.unloads += rate.count;
        let shortest = outcome.shortest_interval_s.map_or(rate.interval_s, |other| other.min(rate.interval_s));
        outcome.shortest_interval_s = Some(shortest);
    }

    /// Unloads of a stratum.
    pub(super) fn unload(&mut self, stratum: usize, windows: &[Vector3<f64>], rate: &UnloadRate) {
        let impulses: Vec<_> = windows.iter().map(|momentum| momentum * -rate.repeat).collect();
        if self.plan.timing(stratum) == Timing::Cheapest {
            if let Some(impulse) = cheapest(self.pricer(stratum), &impulses) {
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
        self.books.left_kg.max(0.0)
    }

    /// Mass properties of this draw after `used_kg` more have left.
    pub(super) fn mass(&self, used_kg: f64) -> MassState {
        self.plan.vehicle().mass_in_draw(&self.draw, (self.books.left_kg - used_kg).max(0.0))
    }
}
