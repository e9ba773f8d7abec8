//! The propellant tank.

use nalgebra::Vector3;

use super::Faults;
use crate::config;
use crate::uncertain::{Parameters, Spread, Uncertain};

/// The propellant tank; its feed pressure is taken as constant.
#[derive(Debug, Clone)]
pub struct Tank {
    /// Propellant loaded, kg.
    pub loaded_kg: f64,
    /// Centre in the body frame, m.
    pub position_m: Vector3<f64>,
    /// Share of the load that cannot be used.
    pub residual: Uncertain,
    /// Loss through valves, kg/s.
    pub leakage_kg_per_s: Uncertain,
}

impl Tank {
    pub(super) fn new(written: &config::Tank, parameters: &mut Parameters, faults: &mut Faults) -> Option<Self> {
        let loaded = faults.positive("tank.loaded", written.loaded.0, "a mass");
        let residual = written.residual.map_or(Spread::Fixed(0.0), |share| share.0);
        let residual = faults.spread("tank.residual", residual, 0.0, 1.0, "a share of the load");
        let leakage = written.leakage.map_or(Spread::Fixed(0.0), |rate| rate.0);
        let leakage = faults.spread("tank.leakage", leakage, 0.0, f64::INFINITY, "a loss");
        Some(Self {
            loaded_kg: loaded?,
            position_m: Vector3::from(written.position.0),
            residual: parameters.register("tank.residual", "", residual?),
            leakage_kg_per_s: parameters.register("tank.leakage", "kg/s", leakage?),
        })
    }
}
