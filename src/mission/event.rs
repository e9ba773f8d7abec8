//! What takes propellant besides unloading.

use nalgebra::Vector3;

use crate::config::{self, Hold, Spec, did_you_mean};
use crate::environment::Epoch;
use crate::uncertain::{Parameters, Spread, Uncertain};
use crate::vehicle::{Faults, register_triple};

/// One event of a phase.
#[derive(Debug, Clone)]
pub struct Event {
    /// Name.
    pub name: String,
    /// When it happens.
    pub when: When,
    /// What happens.
    pub kind: EventKind,
}

/// When an event happens.
#[derive(Debug, Clone, PartialEq)]
pub enum When {
    /// At the start of the phase.
    Start,
    /// At its end.
    End,
    /// Spread evenly over it.
    Spread,
    /// At these times after the start of the mission, s.
    At(Vec<f64>),
}

/// What pushes in a burn.
#[derive(Debug, Clone, PartialEq, Eq)]
pub enum BurnSource {
    /// Index of an engine.
    Engine(usize),
    /// Indices of thrusters that burn together.
    Thrusters(Vec<usize>),
}

/// Thrusters that hold the attitude within a band.
#[derive(Debug, Clone)]
pub struct Band {
    /// Half its width, rad.
    pub half_width_rad: f64,
    /// Disturbance torque about x, y, z, N·m.
    pub disturbance_n_m: [Uncertain; 3],
}

/// What happens in an event.
#[derive(Debug, Clone)]
pub enum EventKind {
    /// Body rates are damped, rad/s.
    RateDamping {
        /// Rates about x, y, z.
        rates_rad_per_s: [Uncertain; 3],
    },
    /// Rest-to-rest slews on thrusters.
    Slews {
        /// Axis in the body frame, unit.
        axis: Vector3<f64>,
        /// Angle of one, rad.
        angle_rad: f64,
        /// Highest rate, rad/s.
        rate_rad_per_s: f64,
        /// How many in the phase.
        count: Uncertain,
    },
    /// Orbit burns.
    Burn {
        /// Δv of one, m/s.
        delta_v_m_per_s: Uncertain,
        /// How many in the phase.
        count: Uncertain,
        /// What pushes.
        source: BurnSource,
        /// How the attitude is held.
        hold: Hold,
    },
    /// Attitude held within a band.
    Deadband {
        /// How long in the phase, s.
        time_s: Uncertain,
        /// The band.
        band: Band,
    },
    /// A change of the spin.
    Spin {
        /// Axis in the body frame, unit.
        axis: Vector3<f64>,
        /// Rates before and after, rad/s.
        rates_rad_per_s: [f64; 2],
        /// How often in the phase.
        count: Uncertain,
    },
    /// Turns of the axis of a spin.
    AxisTurn {
        /// Axis of the spin in the body frame, unit.
        axis: Vector3<f64>,
        /// Rate of the spin, rad/s.
        rate_rad_per_s: f64,
        /// Angle of one turn, rad.
        angle_rad: f64,
        /// Angle by which the body turns during a pulse, rad.
        arc_rad: f64,
        /// How many in the phase.
        count: Uncertain,
    },
    /// Safe mode, held within a band.
    SafeMode {
        /// Days a year.
        days_per_year: Uncertain,
        /// The band.
        band: Band,
    },
}

impl EventKind {
    /// How often it happens in the phase, for those that are counted.
    #[must_use]
    pub const fn count(&self) -> Option<&Uncertain> {
        match self {
            Self::Slews { count, .. } | Self::Burn { count, .. } | Self::Spin { count, .. } | Self::AxisTurn { count, .. } => Some(count),
            Self::RateDamping { .. } | Self::Deadband { .. } | Self::SafeMode { .. } => None,
        }
    }
}

/// What an event is read with.
pub(super) struct Reading<'a> {
    pub(super) spec: &'a Spec,
    /// Name of the phase.
    pub(super) phase: &'a str,
    /// Start of the mission.
    pub(super) start: Epoch,
    /// Start of the phase after it, and length, s.
    pub(super) span_s: (f64, f64),
    pub(super) parameters: &'a mut Parameters,
    pub(super) faults: &'a mut Faults,
}

pub(super) fn read(written: &config::Event, at: &str, with: &mut Reading<'_>) -> Option<Event> {
    let given = [
        written.rate_damping.is_some(),
        written.slews.is_some(),
        written.burn.is_some(),
        written.deadband.is_some(),
        written.spin.is_some(),
        written.axis_turn.is_some(),
        written.safe_mode.is_some(),
    ];
    let count = given.iter().filter(|given| **given).count();
    if count != 1 {
        let message = "expected one of `rate_damping`, `slews`, `burn`, `deadband`, `spin`, `axis_turn` and `safe_mode`";
        let message = if count == 0 { format!("{message}, got none") } else { format!("{message}, got {count}") };
        let none = "say what happens, such as `slews: {axis: 0 0 1, angle: 90 deg, rate: 0.2 deg/s, count: 4}`";
        with.faults.push(at, message, if count == 0 { none } else { "keep one of them, and write a second event for the other" });
        return None;
    }
    // With the phase: events of two phases may share a name, and must not share their draws.
    let name = &format!("{}.{}", with.phase, written.name);
    let kind = with
        .damping(name, written.rate_damping.as_ref())
        .or_else(|| with.slews(name, at, written.slews.as_ref()?))
        .or_else(|| with.burn(name, at, written.burn.as_ref()?))
        .or_else(|| with.deadband(name, at, written.deadband.as_ref()?))
        .or_else(|| with.spin(name, at, written.spin.as_ref()?))
        .or_else(|| with.axis_turn(name, at, written.axis_turn.as_ref()?))
        .or_else(|| with.safe_mode(name, at, written.safe_mode.as_ref()?))?;
    let first = matches!(kind, EventKind::RateDamping { .. } | EventKind::Spin { .. });
    let when = match &written.when {
        None if first => When::Start,
        None | Some(config::When::Spread) => When::Spread,
        Some(config::When::Start) => When::Start,
        Some(config::When::End) => When::End,
        Some(config::When::On(dates)) => When::At(with.dates(&format!("{at}.when.on"), dates)?),
    };
    Some(Event { name: written.name.clone(), when, kind })
}

impl Reading<'_> {
    fn damping(&mut self, name: &str, written: Option<&config::RateDamping>) -> Option<EventKind> {
        let rates_rad_per_s = register_triple(&format!("{name}.rates"), "rad/s", written?.rates.0.clone(), self.parameters);
        Some(EventKind::RateDamping { rates_rad_per_s })
    }

    /// Dates within the phase as times after the start of the mission, s.
    fn dates(&mut self, at: &str, written: &[String]) -> Option<Vec<f64>> {
        let (from_s, length_s) = self.span_s;
        if written.is_empty() {
            self.faults.push(at, "expected at least one date, got an empty list", "write `on: [2030-05-01]`, or leave `when` out");
            return None;
        }
        let mut times = Vec::new();
        for (index, text) in written.iter().enumerate() {
            let at = format!("{at}[{index}]");
            match Epoch::parse(text) {
                Err(error) => self.faults.push(&at, error.to_string(), "write a date such as `2030-05-01` or `2030-05-01T12:00:00Z`"),
                Ok(epoch) => {
                    let time_s = epoch.tt_seconds() - self.start.tt_seconds();
                    if (from_s..=from_s + length_s).contains(&time_s) {
                        times.push(time_s);
                    } else {
                        let (from, to) = (self.start.plus_seconds(from_s), self.start.plus_seconds(from_s + length_s));
                        self.faults.push(
                            &at,
                            format!("{epoch} lies outside the phase, {from} to {to}"),
                            "move the event to the phase it belongs to",
                        );
                    }
                }
            }
        }
        (times.len() == written.len()).then_some(times)
    }

    /// A count that is one unless it is given.
    fn count(&mut self, name: &str, at: &str, written: Option<Spread>) -> Option<Uncertain> {
        let spread = written.unwrap_or(Spread::Fixed(1.0));
        let count = self.faults.spread(&format!("{at}.count"), spread, 0.0, f64::INFINITY, "a count")?;
        Some(self.parameters.register(format!("{name}.count"), "", count))
    }

    fn slews(&mut self, name: &str, at: &str, written: &config::Slews) -> Option<EventKind> {
        let at = format!("{at}.slews");
        let axis = self.faults.direction(&format!("{at}.axis"), written.axis.0);
        let angle = self.faults.positive(&format!("{at}.angle"), written.angle.0, "an angle");
        let rate = self.faults.positive(&format!("{at}.rate"), written.rate.0, "a rate");
        let count = self.count(name, &at, Some(written.count.0.clone()));
        Some(EventKind::Slews { axis: axis?, angle_rad: angle?, rate_rad_per_s: rate?, count: count? })
    }

    fn burn(&mut self, name: &str, at: &str, written: &config::Burn) -> Option<EventKind> {
        let at = format!("{at}.burn");
        let source = self.source(&at, written);
        let delta_v = self.faults.spread(&format!("{at}.delta_v"), written.delta_v.0.clone(), 0.0, f64::INFINITY, "a Δv");
        let count = self.count(name, &at, written.count.clone().map(|count| count.0));
        let source = source?;
        if written.hold == Hold::OffModulation && matches!(source, BurnSource::Engine(_)) {
            let help = "name the `thrusters` that burn, or hold with `thrusters`";
            self.faults.push(&format!("{at}.hold"), "one engine cannot be modulated against its own torque", help);
            return None;
        }
        let delta_v_m_per_s = self.parameters.register(format!("{name}.delta_v"), "m/s", delta_v?);
        Some(EventKind::Burn { delta_v_m_per_s, count: count?, source, hold: written.hold })
    }

    fn source(&mut self, at: &str, written: &config::Burn) -> Option<BurnSource> {
        let engines = self.spec.engines.iter().map(|engine| engine.name.as_str());
        let thrusters = self.spec.thrusters.iter().map(|thruster| thruster.name.as_str());
        match (&written.engine, written.thrusters.is_empty()) {
            (Some(engine), true) => {
                let found = engines.clone().position(|name| name == engine);
                if found.is_none() {
                    let help = did_you_mean(engine, engines).unwrap_or_else(|| "describe it under `engines`".to_owned());
                    self.faults.push(
                        &format!("{at}.engine"),
                        format!("names the engine `{engine}`, which `engines` does not describe"),
                        help,
                    );
                }
                found.map(BurnSource::Engine)
            }
            // Told already, and once is enough.
            (None, false) if self.spec.thrusters.is_empty() => None,
            (None, false) => {
                let mut found = Vec::new();
                for (k, wanted) in written.thrusters.iter().enumerate() {
                    if written.thrusters.iter().take(k).any(|other| other == wanted) {
                        self.faults.push(
                            &format!("{at}.thrusters[{k}]"),
                            format!("`{wanted}` stands here twice"),
                            "name each thruster once",
                        );
                    } else if let Some(index) = thrusters.clone().position(|name| name == wanted) {
                        found.push(index);
                    } else {
                        let help = did_you_mean(wanted, thrusters.clone()).unwrap_or_else(|| "name one of `thrusters`".to_owned());
                        self.faults.push(&format!("{at}.thrusters[{k}]"), format!("`{wanted}` is no thruster"), help);
                    }
                }
                (found.len() == written.thrusters.len()).then_some(BurnSource::Thrusters(found))
            }
            _ => {
                self.faults.push(
                    at,
                    "expected one of `engine` and `thrusters`",
                    "name what pushes: `engine: main`, or `thrusters: [A1, A4]`",
                );
                None
            }
        }
    }

    fn band(&mut self, name: &str, at: &str, half_width: f64, disturbance: Option<[Spread; 3]>) -> Option<Band> {
        let half_width_rad = self.faults.positive(&format!("{at}.half_width"), half_width, "half the width of a band")?;
        let torque = disturbance.unwrap_or([const { Spread::Fixed(0.0) }; 3]);
        Some(Band { half_width_rad, disturbance_n_m: register_triple(&format!("{name}.disturbance"), "N m", torque, self.parameters) })
    }

    fn deadband(&mut self, name: &str, at: &str, written: &config::Deadband) -> Option<EventKind> {
        let at = format!("{at}.deadband");
        let time = self.faults.spread(&format!("{at}.time"), written.time.0.clone(), 0.0, f64::INFINITY, "a time");
        let band = self.band(name, &at, written.half_width.0, written.disturbance.as_ref().map(|torque| torque.0.clone()));
        Some(EventKind::Deadband { time_s: self.parameters.register(format!("{name}.time"), "s", time?), band: band? })
    }

    fn spin(&mut self, name: &str, at: &str, written: &config::SpinChange) -> Option<EventKind> {
        let at = format!("{at}.spin");
        let axis = self.faults.direction(&format!("{at}.axis"), written.axis.0);
        let count = self.count(name, &at, written.count.clone().map(|count| count.0));
        let rates_rad_per_s = [written.from.map_or(0.0, |rate| rate.0), written.to.0];
        Some(EventKind::Spin { axis: axis?, rates_rad_per_s, count: count? })
    }

    fn axis_turn(&mut self, name: &str, at: &str, written: &config::AxisTurn) -> Option<EventKind> {
        let at = format!("{at}.axis_turn");
        let axis = self.faults.direction(&format!("{at}.axis"), written.axis.0);
        let rate = self.faults.positive(&format!("{at}.rate"), written.rate.0, "a rate");
        let angle = self.faults.positive(&format!("{at}.angle"), written.angle.0, "an angle");
        let arc = written.arc.map_or(0.0, |arc| arc.0);
        let arc = self.faults.within(&format!("{at}.arc"), arc, 0.0, std::f64::consts::PI, "an angle in rad");
        let count = self.count(name, &at, Some(written.count.0.clone()));
        Some(EventKind::AxisTurn { axis: axis?, rate_rad_per_s: rate?, angle_rad: angle?, arc_rad: arc?, count: count? })
    }

    fn safe_mode(&mut self, name: &str, at: &str, written: &config::SafeMode) -> Option<EventKind> {
        let at = format!("{at}.safe_mode");
        let days = self.faults.spread(&format!("{at}.days_per_year"), written.days_per_year.0.clone(), 0.0, 365.25, "a number of days");
        let band = self.band(name, &at, written.half_width.0, written.disturbance.as_ref().map(|torque| torque.0.clone()));
        Some(EventKind::SafeMode { days_per_year: self.parameters.register(format!("{name}.days_per_year"), "", days?), band: band? })
    }
}
