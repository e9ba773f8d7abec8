//! What the configuration says about air, wind and light from the body.

use crate::config;
use crate::environment::{Exponential, Gas};
use crate::uncertain::{Parameters, Spread, Uncertain};
use crate::vehicle::Faults;

/// Unified atomic mass unit, kg. Source: CODATA 2018.
const ATOMIC_MASS_KG: f64 = 1.660_539_066_60e-27;

/// How molecules leave the facets.
#[derive(Debug, Clone, Copy)]
pub struct Accommodation {
    /// Accommodation of normal momentum, 0 to 1.
    pub normal: Uncertain,
    /// Accommodation of tangential momentum, 0 to 1.
    pub tangential: Uncertain,
    /// Temperature of the facets, K.
    pub wall_k: f64,
}

/// Albedo and infrared of the body that is orbited, where the configuration gives them.
#[derive(Debug, Clone, Copy)]
pub struct BodyLightShares {
    /// Share of sunlight that it reflects.
    pub albedo: Option<Uncertain>,
    /// Infrared that leaves its surface, W/m².
    pub infrared_w_per_m2: Option<Uncertain>,
}

pub(super) fn accommodation(written: &config::Environment, parameters: &mut Parameters, faults: &mut Faults) -> Option<Accommodation> {
    let own = written.accommodation.as_ref()?;
    let at = |key: &str| format!("environment.accommodation.{key}");
    let mut share = |key: &str, spread: Spread| {
        let spread = faults.spread(&at(key), spread, 0.0, 1.0, "an accommodation")?;
        Some(parameters.register(at(key), "", spread))
    };
    let (normal, tangential) = (share("normal", own.normal.0.clone()), share("tangential", own.tangential.0.clone()));
    let wall_k = faults.positive(&at("wall_temperature"), own.wall_temperature.map_or(300.0, |wall| wall.0), "a temperature");
    Some(Accommodation { normal: normal?, tangential: tangential?, wall_k: wall_k? })
}

pub(super) fn wind(written: &config::Environment, parameters: &mut Parameters) -> [Uncertain; 2] {
    let Some(wind) = &written.wind else { return [Uncertain::fixed(0.0); 2] };
    let mut one = |key: &str, spread: Option<Spread>| {
        parameters.register(format!("environment.wind.{key}"), "m/s", spread.unwrap_or(Spread::Fixed(0.0)))
    };
    [one("east", wind.east.clone().map(|east| east.0)), one("north", wind.north.clone().map(|north| north.0))]
}

pub(super) fn atmosphere(written: &config::Environment, faults: &mut Faults) -> Option<Exponential> {
    let own = written.atmosphere.as_ref()?;
    let at = |key: &str| format!("environment.atmosphere.{key}");
    let density = faults.positive(&at("density"), own.density.0, "a density");
    let scale = faults.positive(&at("scale_height"), own.scale_height.0, "a height");
    let temperature = faults.positive(&at("temperature"), own.temperature.map_or(200.0, |t| t.0), "a temperature");
    let molecule = faults.positive(&at("molecular_mass"), own.molecular_mass.map_or(44.0, |mass| mass.0), "a mass");
    let gas = Gas { density_kg_per_m3: density?, temperature_k: temperature?, molecular_mass_kg: molecule? * ATOMIC_MASS_KG };
    Some(Exponential { gas, altitude_m: own.altitude.0, scale_height_m: scale? })
}

pub(super) fn body_light(written: &config::Environment, parameters: &mut Parameters, faults: &mut Faults) -> BodyLightShares {
    let mut read = |key: &str, unit: &'static str, spread: Option<Spread>, most: f64, what: &str| {
        let key = format!("environment.{key}");
        let spread = faults.spread(&key, spread?, 0.0, most, what)?;
        Some(parameters.register(key, unit, spread))
    };
    BodyLightShares {
        albedo: read("albedo", "", written.albedo.clone().map(|albedo| albedo.0), 1.0, "a share of light"),
        infrared_w_per_m2: read("infrared", "W/m2", written.infrared.clone().map(|flux| flux.0), 1e5, "an irradiance"),
    }
}
