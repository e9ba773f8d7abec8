//! Torque of solar radiation on flat facets.

use nalgebra::Vector3;

use super::{Coefficient, Factor, Feature, Source, Surroundings, force_features, with_arms};
use crate::vehicle::{Surface, Vehicle};

/// Radiation pressure on the lit side of each facet; facets hide nothing from one another.
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
    surfaces: Vec<Surface>,
    /// Specular and diffuse share of each material.
    optics: Vec<[Coefficient; 2]>,
}

impl Radiation {
    /// The facets of a vehicle.
    #[must_use]
    pub fn new(vehicle: &Vehicle) -> Self {
        let optics = vehicle.materials.iter().map(|m| [Coefficient::from(&m.specular), Coefficient::from(&m.diffuse)]).collect();
        Self { surfaces: vehicle.surfaces.clone(), optics }
    }
}

/// Force and torque about the body origin.
#[derive(Debug, Clone, Copy, Default)]
struct Load {
    force: Vector3<f64>,
    torque: Vector3<f64>,
}

impl Load {
    fn add(&mut self, force: Vector3<f64>, at: &Vector3<f64>) {
        self.force += force;
        self.torque += at.cross(&force);
    }
}

impl Source for Radiation {
    fn name(&self) -> &'static str {
        "radiation"
    }

    /// The absorbing part, then the specular and the diffuse part of each material; each about the
    /// body origin and per component of the centre of mass.
    fn features(&self) -> Vec<Feature> {
        let shares = self.optics.iter().flatten().map(|share| share.factor);
        std::iter::once(None).chain(shares).flat_map(|factor| with_arms(&factor.into_iter().collect::<Vec<Factor>>())).collect()
    }

    fn torques(&self, surroundings: &Surroundings, out: &mut [Vector3<f64>]) {
        let (sun, pressure) = (surroundings.sun, surroundings.radiation_pressure_pa);
        let mut absorbed = Load::default();
        // Two groups of four features follow the first group for each material; cleared, then summed.
        out.fill(Vector3::zeros());
        let (first, rest) = out.split_at_mut(4);
        let mut reflected = [Load::default(); 2];
        for (material, (optics, places)) in self.optics.iter().zip(rest.chunks_mut(8)).enumerate() {
            reflected.fill(Load::default());
            for surface in self.surfaces.iter().filter(|surface| surface.material == material) {
                let normal = surface.normal_facing(&sun);
                let cos = normal.dot(&sun);
                if cos <= 0.0 && !surface.both_sides {
                    continue;
                }
                let (lit, cos) = if cos < 0.0 { (-normal, -cos) } else { (normal, cos) };
                let push = -pressure * surface.area_m2 * cos;
                absorbed.add(push * sun, &surface.centre_m);
                reflected[0].add(push * (2.0 * cos * lit - sun), &surface.centre_m);
                reflected[1].add(push * (2.0 / 3.0) * lit, &surface.centre_m);
            }
            for ((load, share), place) in reflected.iter().zip(optics).zip(places.chunks_mut(4)) {
                force_features(load.torque * share.scale, load.force * share.scale, place);
            }
        }
        force_features(absorbed.torque, absorbed.force, first);
    }
}
