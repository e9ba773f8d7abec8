//! The spacecraft as it can be: mass properties, surfaces, thrusters, wheels and tank, validated, SI.
//!
//! In: the configuration as written. Out: a [`Vehicle`] that nothing after it checks again, and
//! the registry of its uncertain parameters. Knows nothing of orbits or disturbances.

mod engine;
mod failure;
mod faults;
mod feed;
mod mass;
mod propulsion;
mod surface;
mod tank;
mod wheels;

pub use engine::Engine;
pub use failure::Failure;
pub use faults::Faults;
pub use feed::{Feed, PressureLaw};
pub use mass::{INERTIA_ELEMENTS, MassProperties, MassState, symmetric};
pub use propulsion::{ExhaustSpeed, Propulsion, PulseLimits, Thruster};
pub use surface::{Hinge, Material, Shade, Surface};
pub use tank::{OneTank, Tank};
pub use wheels::{Wheel, Wheels};

use crate::config::Spec;
use crate::uncertain::{Parameters, Uncertain};

/// Standard gravity, m/s², exact (3rd General Conference on Weights and Measures, 1901).
pub const STANDARD_GRAVITY: f64 = 9.80665;

/// A validated spacecraft.
#[derive(Debug, Clone)]
pub struct Vehicle {
    /// Name for reports.
    pub name: String,
    /// Mass properties without propellant.
    pub dry: MassProperties,
    /// Residual dipole in the body frame, A·m².
    pub residual_dipole_a_m2: [Uncertain; 3],
    /// Constant torque of the spacecraft on itself in the body frame, N·m.
    pub body_torque_n_m: [Uncertain; 3],
    /// Kinds of surface.
    pub materials: Vec<Material>,
    /// Facets.
    pub surfaces: Vec<Surface>,
    /// Thrusters and what they share.
    pub propulsion: Propulsion,
    /// Wheel array, if there is one.
    pub wheels: Option<Wheels>,
    /// Engines for orbit burns.
    pub engines: Vec<Engine>,
    /// Propellant.
    pub tank: Tank,
}

impl Vehicle {
    /// Validates what the user wrote; registers what is uncertain.
    ///
    /// Returns `None` after pushing at least one fault.
    pub fn new(spec: &Spec, parameters: &mut Parameters, faults: &mut Faults) -> Option<Self> {
        let before = faults.count();
        let dry = MassProperties::new(&spec.spacecraft, parameters, faults);
        let residual_dipole_a_m2 = match &spec.spacecraft.residual_dipole {
            Some(written) => register_triple("spacecraft.residual_dipole", "A m2", written.0.clone(), parameters),
            None => [Uncertain::fixed(0.0); 3],
        };
        let body_torque_n_m = match &spec.spacecraft.body_torque {
            Some(written) => register_triple("spacecraft.body_torque", "N m", written.0.clone(), parameters),
            None => [Uncertain::fixed(0.0); 3],
        };
        let (materials, surfaces) = surface::read(spec, parameters, faults);
        let propulsion = Propulsion::new(spec, parameters, faults);
        let wheels = spec.wheels.as_ref().map(|written| Wheels::new(written, faults));
        let engines = engine::read(spec, parameters, faults);
        let tank = Tank::new(spec, parameters, faults);
        if faults.count() > before {
            return None;
        }
        Some(Self {
            name: spec.spacecraft.name.clone(),
            dry: dry?,
            residual_dipole_a_m2,
            body_torque_n_m,
            materials,
            surfaces,
            propulsion: propulsion?,
            wheels: match wheels {
                Some(read) => Some(read?),
                None => None,
            },
            engines,
            tank: tank?,
        })
    }

    /// Mass properties of a draw with this much propellant on board, kg.
    #[must_use]
    pub fn mass_in_draw(&self, draw: &crate::uncertain::Draw, propellant_kg: f64) -> MassState {
        self.dry.in_draw(draw, self.tank.contents(propellant_kg))
    }

    /// Nominal mass properties with this much propellant on board, kg.
    #[must_use]
    pub fn mass_state(&self, propellant_kg: f64) -> MassState {
        self.dry.with_propellant(self.tank.contents(propellant_kg))
    }
}

/// Registers the components of a vector under `key.x`, `key.y`, `key.z`.
pub(crate) fn register_triple(
    key: &str,
    unit: &'static str,
    spreads: [crate::uncertain::Spread; 3],
    parameters: &mut Parameters,
) -> [Uncertain; 3] {
    let mut axes = ["x", "y", "z"].into_iter();
    spreads.map(|spread| parameters.register(format!("{key}.{}", axes.next().unwrap_or_default()), unit, spread))
}
