//! Light on flat facets: what one beam does to all of them.

use nalgebra::Vector3;

use super::{Coefficient, Factor, Feature, force_features, with_arms};
use crate::vehicle::{Surface, Vehicle};

/// The facets and the optical shares of their materials.
#[derive(Debug, Clone)]
pub(super) struct Optics {
    surfaces: Vec<Surface>,
    /// Specular and diffuse share of each material.
    shares: Vec<[Coefficient; 2]>,
}

/// Force, and torque about the body origin.
#[derive(Debug, Clone, Copy, Default)]
pub(super) struct Load {
    force: Vector3<f64>,
    torque: Vector3<f64>,
}

impl Load {
    fn add(&mut self, force: Vector3<f64>, at: &Vector3<f64>) {
        self.force += force;
        self.torque += at.cross(&force);
    }
}

/// A beam: direction towards its origin, unit, and pressure on an absorbing plate that faces it, Pa.
#[derive(Debug, Clone, Copy)]
pub(super) struct Beam {
    pub(super) towards: Vector3<f64>,
    pub(super) pressure_pa: f64,
}

impl Optics {
    pub(super) fn new(vehicle: &Vehicle) -> Self {
        let shares = vehicle.materials.iter().map(|m| [Coefficient::from(&m.specular), Coefficient::from(&m.diffuse)]).collect();
        Self { surfaces: vehicle.surfaces.clone(), shares }
    }

    /// No load yet: the absorbing part, then the specular and the diffuse part of each material.
    pub(super) fn loads(&self) -> Vec<Load> {
        vec![Load::default(); 1 + 2 * self.shares.len()]
    }

    /// The features of [`Optics::write`], each times `factor`: for each load about the body origin and per component of
    /// the centre of mass.
    pub(super) fn features(&self, factor: Option<Factor>) -> Vec<Feature> {
        let shares = self.shares.iter().flatten().map(|share| share.factor);
        let times = |share: Option<Factor>| with_arms(&[share, factor].into_iter().flatten().collect::<Vec<Factor>>());
        std::iter::once(None).chain(shares).flat_map(times).collect()
    }

    /// Normal of each facet when the Sun stands along `sun`.
    pub(super) fn normals(&self, sun: &Vector3<f64>) -> Vec<Vector3<f64>> {
        self.surfaces.iter().map(|surface| surface.normal_facing(sun)).collect()
    }

    /// Whether sunlight reaches each facet, as far as the user has said.
    pub(super) fn sunlit(&self, normals: &[Vector3<f64>], sun: &Vector3<f64>) -> Vec<bool> {
        let lit = |surface: &Surface| {
            let Some(shade) = surface.shade else { return true };
            let [from, to] = shade.sun_angle_rad;
            let angle = normals.get(shade.by).map_or(std::f64::consts::PI, |normal| normal.angle(sun));
            !(from..=to).contains(&angle)
        };
        self.surfaces.iter().map(lit).collect()
    }

    /// Adds what a beam does to the lit side of each facet that `reaches` does not leave out.
    pub(super) fn shine(&self, beam: &Beam, normals: &[Vector3<f64>], reaches: Option<&[bool]>, loads: &mut [Load]) {
        let Some((absorbed, reflected)) = loads.split_first_mut() else { return };
        for (index, (surface, normal)) in self.surfaces.iter().zip(normals).enumerate() {
            if reaches.is_some_and(|reaches| reaches.get(index) == Some(&false)) {
                continue;
            }
            let cos = normal.dot(&beam.towards);
            if cos <= 0.0 && !surface.both_sides {
                continue;
            }
            let (lit, cos) = if cos < 0.0 { (-normal, -cos) } else { (*normal, cos) };
            let push = -beam.pressure_pa * surface.area_m2 * cos;
            absorbed.add(push * beam.towards, &surface.centre_m);
            if let Some([specular, diffuse]) = reflected.get_mut(2 * surface.material..2 * surface.material + 2) {
                specular.add(push * (2.0 * cos * lit - beam.towards), &surface.centre_m);
                diffuse.add(push * (2.0 / 3.0) * lit, &surface.centre_m);
            }
        }
    }

    /// Writes loads times `scale` as the features of [`Optics::features`].
    pub(super) fn write(&self, loads: &[Load], scale: f64, out: &mut [Vector3<f64>]) {
        let shares = std::iter::once(1.0).chain(self.shares.iter().flatten().map(|share| share.scale));
        for ((load, share), place) in loads.iter().zip(shares).zip(out.chunks_mut(4)) {
            force_features(load.torque * (share * scale), load.force * (share * scale), place);
        }
    }
}
