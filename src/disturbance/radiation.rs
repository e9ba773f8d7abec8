//! Torque of solar radiation on flat facets.

use nalgebra::Vector3;

use super::optics::{Beam, Optics};
use super::{Feature, Source, Surroundings};
use crate::vehicle::Vehicle;

/// Radiation pressure on the lit side of each facet; facets hide nothing from one another unless one is declared to.
///
/// ```text
/// F = −P A cosθ [(1 − ρs) ŝ + 2 (ρs cosθ + ρd / 3) n̂]
/// ```
///
/// with `ŝ` the direction to the Sun, `n̂` the normal of the lit side, θ between them, `ρs`, `ρd` the
/// specular and diffuse shares. Source: D. A. Vallado, Fundamentals of Astrodynamics and
/// Applications, 8.6.4 (from memory).
#[derive(Debug, Clone)]
pub struct Radiation {
    optics: Optics,
}

impl Radiation {
    /// The facets of a vehicle.
    #[must_use]
    pub fn new(vehicle: &Vehicle) -> Self {
        Self { optics: Optics::new(vehicle) }
    }
}

impl Source for Radiation {
    fn name(&self) -> &'static str {
        "radiation"
    }

    fn features(&self) -> Vec<Feature> {
        self.optics.features(None)
    }

    fn torques(&self, surroundings: &Surroundings, out: &mut [Vector3<f64>]) {
        let mut loads = self.optics.loads();
        let beam = Beam { towards: surroundings.sun, pressure_pa: surroundings.radiation_pressure_pa };
        if beam.pressure_pa > 0.0 {
            let normals = self.optics.normals(&beam.towards);
            let reaches = self.optics.sunlit(&normals, &beam.towards);
            self.optics.shine(&beam, &normals, Some(&reaches), &mut loads);
        }
        self.optics.write(&loads, 1.0, out);
    }
}
