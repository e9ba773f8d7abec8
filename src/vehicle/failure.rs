//! Thrusters that may be lost during the mission.

use super::Faults;
use crate::config::{self, NetForceChoice, Spec, did_you_mean};
use crate::uncertain::{Draw, Parameters, Spread, Uncertain};

/// Most failures of one configuration: the layout is priced for each set of them.
const MOST: usize = 4;

/// A thruster or a string that may be lost.
#[derive(Debug, Clone)]
pub struct Failure {
    /// Name.
    pub name: String,
    /// Indices of the thrusters that are lost.
    pub thrusters: Vec<usize>,
    /// Time after the start of the mission from which on they are lost, s.
    from_s: Uncertain,
    /// 1 if it happens, 0 if it does not.
    happens: Uncertain,
    /// Whether unloads may leave a net force from then on.
    pub net_force: NetForceChoice,
}

impl Failure {
    /// Whether the thrusters are lost at a time after the start of the mission, s.
    #[must_use]
    pub fn lost_in_draw(&self, draw: &Draw, time_s: f64) -> bool {
        self.happens.in_draw(draw) > 0.5 && time_s >= self.from_s.in_draw(draw)
    }
}

/// Validates what the user wrote; registers what is uncertain.
pub(super) fn read(spec: &Spec, parameters: &mut Parameters, faults: &mut Faults) -> Option<Vec<Failure>> {
    let written = &spec.propulsion.failures;
    faults.unique("propulsion.failures", written.iter().map(|failure| failure.name.as_str()));
    if written.len() > MOST {
        let help = "keep the most probable ones; the layout is priced for every set of them";
        faults.push("propulsion.failures", format!("expected at most {MOST} failures, got {}", written.len()), help);
        return None;
    }
    let all: Vec<Option<Failure>> =
        written.iter().enumerate().map(|(index, failure)| one(spec, index, failure, parameters, faults)).collect();
    all.into_iter().collect()
}

fn one(spec: &Spec, index: usize, written: &config::Failure, parameters: &mut Parameters, faults: &mut Faults) -> Option<Failure> {
    let at = format!("propulsion.failures[{index}]");
    let of = |thruster: &config::Thruster| thruster.name == written.out || thruster.string.as_deref() == Some(written.out.as_str());
    let thrusters: Vec<usize> = (0..spec.thrusters.len()).filter(|k| spec.thrusters.get(*k).is_some_and(of)).collect();
    if thrusters.is_empty() {
        let names = spec.thrusters.iter().map(|thruster| thruster.name.as_str());
        let known = names.chain(spec.thrusters.iter().filter_map(|thruster| thruster.string.as_deref()));
        let help = did_you_mean(&written.out, known).unwrap_or_else(|| "name one of `thrusters`, or a string of them".to_owned());
        faults.push(&format!("{at}.out"), format!("`{}` is no thruster and no string", written.out), help);
        return None;
    }
    let probability = faults.within(&format!("{at}.probability"), written.probability.0, 0.0, 1.0, "a probability")?;
    let from = written.from.as_ref().map_or(Spread::Fixed(0.0), |from| from.0.clone());
    let from = faults.spread(&format!("{at}.from"), from, 0.0, f64::INFINITY, "a time after the start of the mission")?;
    let pairs: Vec<(f64, f64)> = [(0.0, 1.0 - probability), (1.0, probability)].into_iter().filter(|(_, p)| *p > 0.0).collect();
    let happens = Spread::discrete(&pairs).map_err(|error| faults.push(&at, error.message, error.help)).ok()?;
    let key = format!("propulsion.failures[{}]", written.name);
    Some(Failure {
        name: written.name.clone(),
        thrusters,
        from_s: parameters.register(format!("{key}.from"), "s", from),
        happens: parameters.register(format!("{key}.happens"), "", happens),
        net_force: written.net_force.unwrap_or(spec.propulsion.net_force),
    })
}
