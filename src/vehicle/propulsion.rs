//! Thrusters: where they stand, which way they push, and how well they do it in pulses.

use nalgebra::{Unit, UnitVector3, Vector3};

use super::{Failure, Faults, PressureLaw, STANDARD_GRAVITY};
use crate::config::{self, NetForceChoice, SmallUnload, Spec, SpreadQuantity};
use crate::uncertain::{Draw, Parameters, Spread, Uncertain};
use crate::units::{Kind, kind};

/// Steady exhaust speed, written either as such or as specific impulse (u = g0·Isp).
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct ExhaustSpeed {
    written: Uncertain,
    factor: f64,
}

impl ExhaustSpeed {
    /// Nominal value, m/s.
    #[must_use]
    pub fn nominal(&self) -> f64 {
        self.written.nominal() * self.factor
    }

    /// Value in a draw, m/s.
    #[must_use]
    pub fn in_draw(&self, draw: &Draw) -> f64 {
        self.written.in_draw(draw) * self.factor
    }

    /// Whether it is uncertain.
    #[must_use]
    pub fn is_uncertain(&self) -> bool {
        self.written.parameter().is_some()
    }
}

/// One thruster.
#[derive(Debug, Clone)]
pub struct Thruster {
    /// Name.
    pub name: String,
    /// Name of its string.
    pub string: String,
    /// Position in the body frame, m.
    pub position_m: Vector3<f64>,
    /// Direction in which it pushes the spacecraft, body frame.
    pub push: UnitVector3<f64>,
    /// Thrust before the loss to the plume, N.
    thrust: Uncertain,
    /// Share of the thrust that is left where the plume meets the spacecraft.
    left: f64,
    /// Steady exhaust speed.
    pub exhaust_speed: ExhaustSpeed,
}

impl Thruster {
    /// Nominal thrust on the spacecraft, N.
    #[must_use]
    pub fn thrust_n(&self) -> f64 {
        self.thrust.nominal() * self.left
    }

    /// Thrust on the spacecraft in a draw, N.
    #[must_use]
    pub fn thrust_in_draw_n(&self, draw: &Draw) -> f64 {
        self.thrust.in_draw(draw) * self.left
    }

    /// Nominal impulse on the spacecraft per propellant, m/s: the exhaust speed less what the plume loses.
    #[must_use]
    pub fn effective_speed_m_per_s(&self) -> f64 {
        self.exhaust_speed.nominal() * self.left
    }

    /// The same in a draw, m/s.
    #[must_use]
    pub fn effective_speed_in_draw_m_per_s(&self, draw: &Draw) -> f64 {
        self.exhaust_speed.in_draw(draw) * self.left
    }
}

/// What valves can do, and what a pulse loses.
#[derive(Debug, Clone)]
pub struct PulseLimits {
    /// Shortest on-time, s.
    pub shortest_s: f64,
    /// Longest on-time, s.
    pub longest_s: f64,
    /// Largest share of the time on.
    pub duty_cycle: f64,
    /// On-time, s, and the share of the steady exhaust speed reached; rising on-times.
    pub performance: Vec<(f64, f64)>,
}

impl PulseLimits {
    /// Share of the steady exhaust speed that a pulse of this on-time reaches: straight lines
    /// between the points given, constant beyond them, 1 without any.
    #[must_use]
    pub fn share(&self, on_time_s: f64) -> f64 {
        let table = &self.performance;
        let above = table.partition_point(|(time, _)| *time < on_time_s);
        match (above.checked_sub(1).and_then(|below| table.get(below)), table.get(above)) {
            (Some((t0, s0)), Some((t1, s1))) => s0 + (s1 - s0) * (on_time_s - t0) / (t1 - t0),
            (Some((_, share)), None) | (None, Some((_, share))) => *share,
            (None, None) => 1.0,
        }
    }
}

/// The thrusters and what they share.
#[derive(Debug, Clone)]
pub struct Propulsion {
    /// The thrusters; at least one.
    pub thrusters: Vec<Thruster>,
    /// Pulses.
    pub pulses: PulseLimits,
    /// Half-angle of the cone in which a push lies, rad.
    pub alignment_rad: f64,
    /// How far a thrust may lie from nominal, as a share.
    pub thrust_tolerance: f64,
    /// Half-angle, rad, and range, m, of a plume.
    pub plume: Option<(f64, f64)>,
    /// Whether an unload may leave a net force.
    pub net_force: NetForceChoice,
    /// What happens where an unload asks for less than a shortest pulse.
    pub small_unload: SmallUnload,
    /// Pulses that one thruster is qualified for.
    pub qualified_pulses: Option<f64>,
    /// Propellant that one thruster is qualified to pass, kg.
    pub qualified_throughput_kg: Option<f64>,
    /// How thrust and exhaust speed follow the feed pressure.
    pub pressure_law: PressureLaw,
    /// Thrusters that may be lost.
    pub failures: Vec<Failure>,
}

impl Propulsion {
    pub(super) fn new(spec: &Spec, parameters: &mut Parameters, faults: &mut Faults) -> Option<Self> {
        let pulses = pulse_limits(&spec.propulsion, faults);
        if spec.thrusters.is_empty() {
            faults.push("thrusters", "expected at least one thruster, got an empty list", "describe the thrusters");
        }
        faults.unique("thrusters", spec.thrusters.iter().map(|thruster| thruster.name.as_str()));
        let shared_written = &spec.propulsion;
        let shared_thrust = match &shared_written.thrust {
            Some(thrust) => faults
                .positive_spread("propulsion.thrust", thrust.0.clone(), "a thrust")
                .map(|spread| parameters.register("propulsion.thrust", kind::Force::UNIT, spread)),
            None => None,
        };
        let both = (shared_written.isp.as_ref(), shared_written.exhaust_speed.as_ref());
        let shared_speed = exhaust_speed("propulsion", "propulsion", both, parameters, faults);
        let mut thrusters = Vec::new();
        for (index, written) in spec.thrusters.iter().enumerate() {
            thrusters.extend(thruster(index, written, shared_written, shared_thrust, shared_speed, parameters, faults));
        }
        for (key, value, what) in [
            ("propulsion.qualified_pulses", shared_written.qualified_pulses.map(|pulses| pulses.0), "a number of pulses"),
            ("propulsion.qualified_throughput", shared_written.qualified_throughput.map(|mass| mass.0), "a mass"),
        ] {
            value.map(|value| faults.positive(key, value, what));
        }
        let qualified_pulses = shared_written.qualified_pulses.map(|pulses| pulses.0);
        let most = std::f64::consts::FRAC_PI_2;
        let alignment = shared_written.alignment.map_or(0.0, |angle| angle.0);
        let alignment = faults.within("propulsion.alignment", alignment, 0.0, most, "an angle in rad");
        let tolerance = shared_written.thrust_tolerance.map_or(0.0, |share| share.0);
        let tolerance = faults.within("propulsion.thrust_tolerance", tolerance, 0.0, 1.0, "a share of the thrust");
        let plume = match &shared_written.plume {
            Some(plume) => {
                let half_angle = faults.within("propulsion.plume.half_angle", plume.half_angle.0, 0.0, most, "an angle in rad");
                let range = faults.positive("propulsion.plume.range", plume.range.0, "a length");
                half_angle.zip(range)
            }
            None => None,
        };
        let net_force = spec.propulsion.net_force;
        Some(Self {
            thrusters,
            pulses: pulses?,
            alignment_rad: alignment?,
            thrust_tolerance: tolerance?,
            plume,
            net_force,
            small_unload: spec.propulsion.small_unload,
            qualified_pulses,
            qualified_throughput_kg: spec.propulsion.qualified_throughput.map(|mass| mass.0),
            pressure_law: pressure_law(spec, faults)?,
            failures: super::failure::read(spec, parameters, faults)?,
        })
    }
}

/// How thrust and exhaust speed follow the feed pressure; a table counts from the pressure as loaded.
fn pressure_law(spec: &Spec, faults: &mut Faults) -> Option<PressureLaw> {
    const AT: &str = "propulsion.pressure_law";
    let Some(written) = &spec.propulsion.pressure_law else { return Some(PressureLaw::Powers(1.0, 0.0)) };
    let Some(blowdown) = &spec.tank.blowdown else {
        faults.push(AT, "the feed pressure is constant, so nothing follows it", "describe `tank.blowdown`, or leave `pressure_law` out");
        return None;
    };
    let powers = written.thrust_power.is_some() || written.exhaust_speed_power.is_some();
    if written.table.is_empty() {
        let thrust = faults.within(&format!("{AT}.thrust_power"), written.thrust_power.map_or(1.0, |power| power.0), 0.0, 3.0, "a power");
        let speed = written.exhaust_speed_power.map_or(0.0, |power| power.0);
        let speed = faults.within(&format!("{AT}.exhaust_speed_power"), speed, 0.0, 1.0, "a power");
        return Some(PressureLaw::Powers(thrust?, speed?));
    }
    if powers {
        faults.push(AT, "expected powers or a table, got both", "keep one");
        return None;
    }
    let mut rows: Vec<(f64, f64, f64)> = Vec::new();
    for (index, point) in written.table.iter().enumerate() {
        let at = format!("{AT}.table[{index}]");
        let pressure = faults.positive(&format!("{at}.pressure"), point.pressure.0, "a pressure")?;
        let thrust = faults.within(&format!("{at}.thrust"), point.thrust.0, 1e-3, 10.0, "a share of the thrust")?;
        let speed = faults.within(&format!("{at}.exhaust_speed"), point.exhaust_speed.0, 1e-3, 10.0, "a share of the exhaust speed")?;
        let ratio = pressure / blowdown.pressure.0;
        if rows.last().is_some_and(|(before, ..)| *before >= ratio) {
            faults.push(
                &format!("{at}.pressure"),
                "expected a higher pressure than in the entry before",
                "sort the entries by rising pressure",
            );
            return None;
        }
        rows.push((ratio, thrust, speed));
    }
    Some(PressureLaw::Table(rows))
}

fn pulse_limits(written: &config::Propulsion, faults: &mut Faults) -> Option<PulseLimits> {
    let shortest = faults.positive("propulsion.shortest_pulse", written.shortest_pulse.0, "an on-time");
    let longest = faults.positive("propulsion.longest_pulse", written.longest_pulse.0, "an on-time");
    let duty_cycle =
        faults.within("propulsion.duty_cycle", written.duty_cycle.map_or(0.1, |duty| duty.0), 1e-6, 1.0, "a share of the time");
    let mut performance: Vec<(f64, f64)> = Vec::new();
    for (index, point) in written.pulse_performance.iter().enumerate() {
        let at = format!("propulsion.pulse_performance[{index}]");
        let on_time = faults.positive(&format!("{at}.on_time"), point.on_time.0, "an on-time")?;
        let share = faults.within(&format!("{at}.share"), point.share.0, 1e-3, 1.0, "a share of the exhaust speed")?;
        if performance.last().is_some_and(|(before, _)| *before >= on_time) {
            faults.push(
                &format!("{at}.on_time"),
                "expected a longer on-time than in the entry before",
                "sort the entries by rising on-time",
            );
            return None;
        }
        performance.push((on_time, share));
    }
    let (shortest_s, longest_s) = (shortest?, longest?);
    if shortest_s > longest_s {
        faults.push_also(
            "propulsion.shortest_pulse",
            format!("the shortest pulse, {shortest_s} s, is longer than the longest, {longest_s} s"),
            "swap them or correct one",
            "propulsion.longest_pulse",
            "the longest",
        );
        return None;
    }
    Some(PulseLimits { shortest_s, longest_s, duty_cycle: duty_cycle?, performance })
}

pub(super) type Written<'a> = (Option<&'a SpreadQuantity<kind::Time>>, Option<&'a SpreadQuantity<kind::Speed>>);

pub(super) fn exhaust_speed(
    at: &str,
    name: &str,
    written: Written<'_>,
    parameters: &mut Parameters,
    faults: &mut Faults,
) -> Option<ExhaustSpeed> {
    let (key, spread, factor, unit): (&str, Spread, f64, &'static str) = match written {
        (Some(isp), None) => ("isp", isp.0.clone(), STANDARD_GRAVITY, kind::Time::UNIT),
        (None, Some(speed)) => ("exhaust_speed", speed.0.clone(), 1.0, kind::Speed::UNIT),
        (None, None) => return None,
        (Some(_), Some(_)) => {
            let other = format!("{at}.isp");
            faults.push_also(&format!("{at}.exhaust_speed"), "given together with `isp`", "keep one of the two", &other, "here");
            return None;
        }
    };
    let spread = faults.positive_spread(&format!("{at}.{key}"), spread, "an exhaust speed")?;
    Some(ExhaustSpeed { written: parameters.register(format!("{name}.{key}"), unit, spread), factor })
}

fn thruster(
    index: usize,
    written: &config::Thruster,
    shared: &config::Propulsion,
    shared_thrust: Option<Uncertain>,
    shared_speed: Option<ExhaustSpeed>,
    parameters: &mut Parameters,
    faults: &mut Faults,
) -> Option<Thruster> {
    let at = format!("thrusters[{index}]");
    let name = format!("thrusters[{}]", written.name);
    let push = push_direction(&at, written, faults);
    let thrust_n = match &written.thrust {
        Some(thrust) => faults
            .positive_spread(&format!("{at}.thrust"), thrust.0.clone(), "a thrust")
            .map(|spread| parameters.register(format!("{name}.thrust"), kind::Force::UNIT, spread)),
        None => shared_thrust,
    };
    if thrust_n.is_none() && written.thrust.is_none() && shared.thrust.is_none() {
        faults.push(&at, "expected a thrust, here or as `propulsion.thrust`", "add `thrust: 1 N` under `propulsion`");
    }
    let own = exhaust_speed(&at, &name, (written.isp.as_ref(), written.exhaust_speed.as_ref()), parameters, faults);
    let speed = own.or(shared_speed);
    let here = written.isp.is_some() || written.exhaust_speed.is_some();
    if !here && shared.isp.is_none() && shared.exhaust_speed.is_none() {
        faults.push(&at, "expected `isp` or `exhaust_speed`, here or under `propulsion`", "add `isp: 215 s` under `propulsion`");
    }
    let loss = written.plume_loss.map_or(0.0, |loss| loss.0);
    let loss = faults.within(&format!("{at}.plume_loss"), loss, 0.0, 0.99, "a share of the thrust");
    Some(Thruster {
        name: written.name.clone(),
        string: written.string.clone().unwrap_or_else(|| written.name.clone()),
        position_m: Vector3::from(written.position.0),
        push: push?,
        thrust: thrust_n?,
        left: 1.0 - loss?,
        exhaust_speed: speed?,
    })
}

fn push_direction(at: &str, written: &config::Thruster, faults: &mut Faults) -> Option<UnitVector3<f64>> {
    match (&written.push, &written.plume) {
        (Some(push), None) => faults.direction(&format!("{at}.push"), push.0).map(Unit::new_unchecked),
        (None, Some(plume)) => faults.direction(&format!("{at}.plume"), plume.0).map(|plume| Unit::new_unchecked(-plume)),
        (Some(_), Some(_)) => {
            let other = format!("{at}.push");
            faults.push_also(
                &format!("{at}.plume"),
                "given together with `push`",
                "keep one of the two: the plume leaves against the push",
                &other,
                "here",
            );
            None
        }
        (None, None) => {
            faults.push(at, "expected a direction, `push` or `plume`", "add `push: 0 0 1`, the way it pushes the spacecraft");
            None
        }
    }
}
