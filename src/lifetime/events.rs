//! What the events of a phase take.

use std::borrow::Cow;

use nalgebra::Vector3;

use super::flight::{Flight, Place};
use super::timing::cheapest;
use super::{TooLarge, What};
use crate::config::Hold;
use crate::mission::{Band, BurnSource, Event, EventKind, When};
use crate::propellant::{Burn, DeadbandAxis, Row, axis_turn_momentum, damping_momentum, propellant_of_burn, slew_momentum, spin_momentum};
use crate::uncertain::{Anew, Uncertain};

const YEAR_DAYS: f64 = 365.25;
/// Phases up to this length, s, have their spread events at their middle: a third of a year.
const SHORT_S: f64 = 365.25 / 3.0 * 86_400.0;
/// Directions across a spin axis that are tried for the cheapest pulse.
const ACROSS: u32 = 24;

impl Flight<'_> {
    /// The events of a stratum: those that come before its unloads, or those after.
    pub(super) fn events(&mut self, place: &Place, before: bool) {
        let plan = self.plan;
        let phase = &plan.scenario().mission.phases[plan.strata()[place.stratum].phase];
        for (index, event) in phase.events.iter().enumerate() {
            if (event.when == When::End) == before {
                continue;
            }
            let share = self.share(event, place);
            if share > 0.0 {
                self.each(index, event, place.stratum, share);
            }
        }
    }

    /// An event whose quantities are drawn anew each time it happens is flown one by one: its occurrences are numbered over
    /// the phase, and one that a stratum holds in part counts by that part.
    fn each(&mut self, index: usize, event: &Event, stratum: usize, share: f64) {
        let parameters = &self.plan.scenario().parameters;
        if !parameters.any(Anew::Event) {
            self.event(index, event, stratum, share);
            return;
        }
        let count = event.kind.count().map_or(1.0, |count| count.in_draw(&self.draw));
        let Some(done) = self.books.done.get_mut(index) else { return };
        let from = *done;
        *done += share * count;
        let to = *done;
        let phase = self.plan.strata()[stratum].phase;
        let of_phase = self.draw.clone();
        #[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "counts are checked not to be negative, and saturate")]
        let numbers = from.floor() as u64..to.ceil() as u64;
        for number in numbers {
            let part = to.min(number as f64 + 1.0) - from.max(number as f64);
            self.draw = Cow::Owned(parameters.in_event(&of_phase, (phase, index), number).into_owned());
            self.event(index, event, stratum, part / count);
        }
        self.draw = of_phase;
    }

    /// Share of a phase's events of this kind that falls in a stratum.
    fn share(&self, event: &Event, place: &Place) -> f64 {
        let stratum = &self.plan.strata()[place.stratum];
        match &event.when {
            When::At(times) => {
                // The last stratum of a phase has its end too.
                let within = |time: &&f64| {
                    **time >= stratum.start_s
                        && (**time < self.plan.strata().get(place.stratum + 1).map_or(f64::INFINITY, |next| next.start_s) || place.last)
                };
                times.iter().filter(within).count() as f64
            }
            When::Start => f64::from(u8::from(place.first)),
            When::End => f64::from(u8::from(place.last)),
            When::Spread => {
                let phase = &self.plan.scenario().mission.phases[stratum.phase];
                if phase.duration_s > SHORT_S {
                    return stratum.duration_s / phase.duration_s;
                }
                // In a short phase little changes: all at its middle.
                f64::from(u8::from(self.plan.middle_of(stratum.phase) == place.stratum))
            }
        }
    }

    fn event(&mut self, index: usize, event: &Event, stratum: usize, share: f64) {
        match &event.kind {
            EventKind::RateDamping { rates_rad_per_s } => {
                let rates = self.vector(rates_rad_per_s);
                self.fire(Row::RateDamping, stratum, &damping_momentum(&rates, &self.mass(0.0)), share);
            }
            EventKind::Slews { axis, angle_rad, rate_rad_per_s, count } => {
                let times = count.in_draw(&self.draw) * share;
                let authority = self.pricer(stratum).authority();
                match slew_momentum(axis, *angle_rad, *rate_rad_per_s, &self.mass(0.0), authority) {
                    Some(slew) => {
                        self.fire(Row::Slews, stratum, &slew.start_n_m_s, times);
                        self.fire(Row::Slews, stratum, &-slew.start_n_m_s, times);
                    }
                    None => self.books.outcome.unserved += times,
                }
            }
            EventKind::Burn { delta_v_m_per_s, count, source, hold } => {
                let times = count.in_draw(&self.draw) * share;
                let duty = self.plan.duty(stratum, index);
                let left_kg = self.left_kg();
                let asks_kg = self.orbit_burn(stratum, delta_v_m_per_s.in_draw(&self.draw), times, (source, *hold, duty));
                if asks_kg > left_kg && self.books.outcome.too_large.is_none() {
                    self.books.outcome.too_large = Some(TooLarge { place: (stratum, index), asks_kg, left_kg });
                }
            }
            EventKind::Deadband { time_s, band } => self.hold_band(Row::Deadband, stratum, band, time_s.in_draw(&self.draw) * share),
            EventKind::Spin { axis, rates_rad_per_s: [from, to], count } => {
                let impulse = spin_momentum(axis, *from, *to, &self.mass(0.0));
                self.fire(Row::Spin, stratum, &impulse, count.in_draw(&self.draw) * share);
            }
            EventKind::AxisTurn { axis, rate_rad_per_s, angle_rad, arc_rad, count } => {
                let momentum = axis_turn_momentum(axis, *rate_rad_per_s, *angle_rad, *arc_rad, &self.mass(0.0));
                let across = self.cheapest_across(stratum, axis);
                self.fire(Row::Spin, stratum, &(across * momentum), count.in_draw(&self.draw) * share);
            }
            EventKind::SafeMode { days_per_year, band } => {
                let duration_s = self.plan.scenario().mission.phases[self.plan.strata()[stratum].phase].duration_s;
                self.hold_band(Row::SafeMode, stratum, band, days_per_year.in_draw(&self.draw) / YEAR_DAYS * duration_s * share);
            }
        }
    }

    fn vector(&self, components: &[Uncertain; 3]) -> Vector3<f64> {
        Vector3::from(components.each_ref().map(|component| component.in_draw(&self.draw)))
    }

    /// The direction across a spin axis about which the thrusters turn for least: once a revolution it is the right one.
    fn cheapest_across(&self, stratum: usize, axis: &Vector3<f64>) -> Vector3<f64> {
        let other = if axis.z.abs() < 0.9 { Vector3::z() } else { Vector3::x() };
        let first = axis.cross(&other).normalize();
        let second = axis.cross(&first);
        let at = |k: u32| {
            let (s, c) = (std::f64::consts::TAU * f64::from(k) / f64::from(ACROSS)).sin_cos();
            first * c + second * s
        };
        let directions: Vec<Vector3<f64>> = (0..ACROSS).map(at).collect();
        cheapest(self.pricer(stratum), &directions).unwrap_or(first)
    }

    /// Holds the attitude within a band for a time, each axis by itself.
    fn hold_band(&mut self, row: Row, stratum: usize, band: &Band, time_s: f64) {
        let (mass, torque) = (self.mass(0.0), self.vector(&band.disturbance_n_m));
        for axis in 0..3 {
            let unit = Vector3::ith(axis, 1.0);
            // Firings against the disturbance, and with it.
            let against = if torque[axis] > 0.0 { -unit } else { unit };
            let pricer = self.pricer(stratum);
            let aimed = |direction: Vector3<f64>| self.shift.map_or(Some(direction), |shift| pricer.aimed(&direction, &shift));
            let both = [against, -against].map(|direction| pricer.smallest(&aimed(direction)?, &self.performance));
            let [Some(first), Some(second)] = both else {
                self.books.outcome.unserved += 1.0;
                continue;
            };
            let rates = DeadbandAxis {
                inertia_kg_m2: mass.inertia_kg_m2[(axis, axis)],
                half_width_rad: band.half_width_rad,
                bit_n_m_s: f64::midpoint(first.bit_n_m_s, second.bit_n_m_s),
                disturbance_n_m: torque[axis],
            }
            .pulse_rates();
            for (firing, per_s) in [(&first, rates.against_per_s), (&second, rates.with_per_s)] {
                let pulses = per_s * time_s;
                self.take(row, firing.propellant_kg * pulses);
                self.note(row, stratum, What::Pulses(axis, firing.bit_n_m_s), pulses, firing.propellant_kg * pulses);
                for (thruster, kg) in &firing.thrusters {
                    self.books.outcome.wear.add(*thruster, pulses, kg * pulses);
                }
            }
        }
    }

    /// Burns of a stratum, and what holds the attitude during them; propellant of the burns, kg.
    fn orbit_burn(&mut self, stratum: usize, delta_v: f64, times: f64, (source, hold, duty): (&BurnSource, Hold, Option<&[f64]>)) -> f64 {
        let Some(push) = self.push(source, None) else {
            self.books.outcome.unserved += times;
            return 0.0;
        };
        let speed = push.force_n.norm() / push.flow_kg_per_s;
        let before = self.mass(0.0);
        let whole_kg = propellant_of_burn(delta_v * times, speed, before.mass_kg);
        // The mean burn of the stratum stands in the middle of them.
        let one_kg = if times > 0.0 { whole_kg / times } else { 0.0 };
        let used_kg = ((whole_kg - one_kg) / 2.0).max(0.0);
        match (hold, duty) {
            (Hold::None, _) => {}
            (Hold::Thrusters, _) => {
                let burn = Burn { propellant_kg: one_kg, ..push };
                let momentum = burn.momentum_n_m_s(|used| self.mass(used_kg + used).centre_of_mass_m);
                self.fire(Row::BurnHold, stratum, &-momentum, times);
            }
            (Hold::OffModulation, duty) => match self.push(source, duty) {
                Some(modulated) => {
                    let slower = modulated.force_n.norm() / modulated.flow_kg_per_s;
                    let more_kg = propellant_of_burn(delta_v * times, slower, before.mass_kg) - whole_kg;
                    self.take(Row::BurnHold, more_kg.max(0.0));
                    let what = What::Burn { delta_v_m_per_s: delta_v * times, mass_kg: before.mass_kg, speed_m_per_s: slower };
                    self.note(Row::BurnHold, stratum, what, times, more_kg.max(0.0));
                }
                None => self.books.outcome.unserved += times,
            },
        }
        self.take(Row::OrbitBurns, whole_kg);
        let what = What::Burn { delta_v_m_per_s: delta_v * times, mass_kg: before.mass_kg, speed_m_per_s: speed };
        self.note(Row::OrbitBurns, stratum, what, times, whole_kg);
        if let BurnSource::Thrusters(list) = source {
            for index in list {
                if self.is_lost(*index) {
                    continue;
                }
                let (thrust, speed) = self.performance.of(*index);
                self.books.outcome.wear.add(*index, times, whole_kg * thrust / speed / push.flow_kg_per_s);
            }
        }
        whole_kg
    }

    fn is_lost(&self, thruster: usize) -> bool {
        let failures = self.plan.vehicle().propulsion.failures.iter().enumerate();
        failures.filter(|(bit, _)| self.lost >> bit & 1 == 1).any(|(_, failure)| failure.thrusters.contains(&thruster))
    }

    /// Push of an engine or of thrusters, each on for a share of the time; no propellant yet.
    fn push(&self, source: &BurnSource, duty: Option<&[f64]>) -> Option<Burn> {
        let vehicle = self.plan.vehicle();
        let (thrust_factor, speed_factor) = self.pressed;
        let mut burn = Burn { torque_n_m: Vector3::zeros(), force_n: Vector3::zeros(), flow_kg_per_s: 0.0, propellant_kg: 0.0 };
        match source {
            BurnSource::Engine(index) => {
                let engine = vehicle.engines.get(*index)?;
                let thrust = engine.thrust_n.in_draw(&self.draw) * thrust_factor;
                burn.force_n = engine.push_in_draw(&self.draw) * thrust;
                burn.torque_n_m = engine.position_m.cross(&burn.force_n);
                burn.flow_kg_per_s = thrust / (engine.exhaust_speed.in_draw(&self.draw) * speed_factor);
            }
            BurnSource::Thrusters(list) => {
                for (place, index) in list.iter().enumerate().filter(|(_, index)| !self.is_lost(**index)) {
                    let thruster = vehicle.propulsion.thrusters.get(*index)?;
                    let (thrust, speed) = self.performance.of(*index);
                    let on = duty.map_or(1.0, |duty| duty.get(place).copied().unwrap_or(0.0));
                    let force = thruster.push.into_inner() * (thrust * on);
                    burn.force_n += force;
                    burn.torque_n_m += thruster.position_m.cross(&force);
                    burn.flow_kg_per_s += thrust * on / speed;
                }
            }
        }
        (burn.force_n.norm() > 0.0).then_some(burn)
    }
}
