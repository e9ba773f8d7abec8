//! The propellant: in one tank or several, and what presses it out.

use nalgebra::Vector3;

use super::{Faults, Feed};
use crate::config;
use crate::uncertain::{Parameters, Spread, Uncertain};

/// One tank.
#[derive(Debug, Clone, PartialEq)]
pub struct OneTank {
    /// Propellant loaded, kg.
    pub loaded_kg: f64,
    /// Centre in the body frame, m.
    pub position_m: Vector3<f64>,
}

/// The propellant of the spacecraft.
#[derive(Debug, Clone)]
pub struct Tank {
    /// Propellant loaded in all tanks, kg.
    pub loaded_kg: f64,
    /// The tanks, in the order in which they are drained.
    pub tanks: Vec<OneTank>,
    /// What presses it out.
    pub feed: Feed,
    /// Error of the mass loaded, kg.
    pub loading_error_kg: Uncertain,
    /// Share of the load that cannot be used.
    pub residual: Uncertain,
    /// Loss through valves, kg/s.
    pub leakage_kg_per_s: Uncertain,
}

impl Tank {
    pub(super) fn new(spec: &config::Spec, parameters: &mut Parameters, faults: &mut Faults) -> Option<Self> {
        let written = &spec.tank;
        let tanks = tanks(written, faults);
        let loaded_kg = tanks.as_ref().map(|tanks| tanks.iter().map(|tank| tank.loaded_kg).sum());
        let residual = written.residual.clone().map_or(Spread::Fixed(usual_residual(spec)), |share| share.0);
        let residual = faults.spread("tank.residual", residual, 0.0, 1.0, "a share of the load");
        let leakage = written.leakage.clone().map_or(Spread::Fixed(0.0), |rate| rate.0);
        let leakage = faults.spread("tank.leakage", leakage, 0.0, f64::INFINITY, "a loss");
        let feed = match (&written.blowdown, loaded_kg) {
            (None, _) => Some(Feed::Regulated),
            (Some(blowdown), Some(loaded_kg)) => self::feed(blowdown, loaded_kg, faults),
            (Some(_), None) => None,
        };
        let error = written.loading_error.clone().map_or(Spread::Fixed(0.0), |error| error.0);
        let loading_error_kg = parameters.register("tank.loading_error", "kg", error);
        Some(Self {
            loaded_kg: loaded_kg?,
            tanks: tanks?,
            feed: feed?,
            loading_error_kg,
            residual: parameters.register("tank.residual", "", residual?),
            leakage_kg_per_s: parameters.register("tank.leakage", "kg/s", leakage?),
        })
    }

    /// Mass, kg, and centre, m, of the propellant in each tank when this much is left in all, kg: the first of the list is
    /// drained first.
    pub fn contents(&self, propellant_kg: f64) -> impl Iterator<Item = (f64, Vector3<f64>)> + '_ {
        let mut used = self.loaded_kg - propellant_kg;
        let last = self.tanks.len().saturating_sub(1);
        self.tanks.iter().enumerate().map(move |(k, tank)| {
            // More than was loaded stands in the last one; less than nothing nowhere.
            let from_this = if k == last { used.min(tank.loaded_kg) } else { used.clamp(0.0, tank.loaded_kg) };
            used -= from_this;
            (tank.loaded_kg - from_this, tank.position_m)
        })
    }
}

/// Residual where none is stated: that of the margin rule.
fn usual_residual(spec: &config::Spec) -> f64 {
    if spec.budget.margin_rule == config::MarginRule::EsaAssessment { 0.02 } else { 0.0 }
}

fn tanks(written: &config::Tank, faults: &mut Faults) -> Option<Vec<OneTank>> {
    match (written.loaded, written.position, written.tanks.is_empty()) {
        (Some(loaded), Some(position), true) => {
            let loaded_kg = faults.positive("tank.loaded", loaded.0, "a mass")?;
            Some(vec![OneTank { loaded_kg, position_m: Vector3::from(position.0) }])
        }
        (None, None, false) => {
            faults.unique("tank.tanks", written.tanks.iter().map(|tank| tank.name.as_str()));
            let one = |(index, tank): (usize, &config::OneTank)| {
                let loaded_kg = faults.positive(&format!("tank.tanks[{index}].loaded"), tank.loaded.0, "a mass")?;
                Some(OneTank { loaded_kg, position_m: Vector3::from(tank.position.0) })
            };
            written.tanks.iter().enumerate().map(one).collect()
        }
        _ => {
            let help = "give `loaded: 34 kg` and `position: 0 0 0.5 m`, or a list `tanks` with both for each";
            faults.push("tank", "expected one tank with `loaded` and `position`, or a list of `tanks`", help);
            None
        }
    }
}

fn feed(written: &config::Blowdown, loaded_kg: f64, faults: &mut Faults) -> Option<Feed> {
    let at = |key: &str| format!("tank.blowdown.{key}");
    let start_pa = faults.positive(&at("pressure"), written.pressure.0, "a pressure");
    let density = faults.positive(&at("propellant_density"), written.propellant_density.0, "a density");
    let exponent = faults.within(&at("exponent"), written.exponent.map_or(1.0, |exponent| exponent.0), 1.0, 5.0 / 3.0, "an exponent");
    let liquid_m3 = loaded_kg / density?;
    let gas_m3 = match (written.volume, written.ratio) {
        (Some(volume), None) if volume.0 > liquid_m3 => volume.0 - liquid_m3,
        (Some(volume), None) => {
            let message = format!("{:.4} m3 do not hold the propellant, {liquid_m3:.4} m3, and a gas", volume.0);
            faults.push(&at("volume"), message, "give the volume of all tanks together");
            return None;
        }
        // V0 / (V0 + liquid) = 1 / ratio.
        (None, Some(ratio)) if ratio.0 > 1.0 => liquid_m3 / (ratio.0 - 1.0),
        (None, Some(ratio)) => {
            faults.push(
                &at("ratio"),
                format!("expected a ratio above 1, got {}", ratio.0),
                "give the pressure as loaded over that when empty",
            );
            return None;
        }
        _ => {
            faults.push("tank.blowdown", "expected one of `volume` and `ratio`", "keep one: `volume: 0.048 m3`, or `ratio: 4`");
            return None;
        }
    };
    Some(Feed::Blowdown { start_pa: start_pa?, gas_m3, density_kg_per_m3: density?, exponent: exponent? })
}
