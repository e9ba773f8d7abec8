//! Facets of the outside and what they are made of.

use nalgebra::{Unit, UnitVector3, Vector3};

use super::Faults;
use crate::config::{self, Spec, did_you_mean};
use crate::uncertain::{Parameters, Spread, Uncertain};

/// How a kind of surface meets light and air.
#[derive(Debug, Clone)]
pub struct Material {
    /// Share of light reflected like a mirror.
    pub specular: Uncertain,
    /// Share of light reflected diffusely.
    pub diffuse: Uncertain,
    /// Drag coefficient of a plate square to the flow; `None` takes that of the environment.
    pub drag_coefficient: Option<Uncertain>,
}

/// Axis about which a facet turns to follow the Sun.
pub type Hinge = UnitVector3<f64>;

/// Where another surface takes the sunlight from a facet.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Shade {
    /// Index of that surface.
    pub by: usize,
    /// Least and largest angle between its normal and the Sun at which it does, rad.
    pub sun_angle_rad: [f64; 2],
}

/// One flat facet.
#[derive(Debug, Clone)]
pub struct Surface {
    /// Name.
    pub name: String,
    /// Area, m².
    pub area_m2: f64,
    /// Centre of pressure in the body frame, m.
    pub centre_m: Vector3<f64>,
    /// Outward normal in the body frame.
    pub normal: UnitVector3<f64>,
    /// Index of its material.
    pub material: usize,
    /// Whether its back counts too.
    pub both_sides: bool,
    /// How it follows the Sun, if it does.
    pub hinge: Option<Hinge>,
    /// What takes the sunlight from it, if anything does.
    pub shade: Option<Shade>,
}

impl Surface {
    /// Normal when the Sun stands along `sun` (unit, body frame).
    ///
    /// A facet with a hinge turns so that the part of its normal across the hinge points to the
    /// Sun's; with the Sun along the hinge it stays as it was described.
    #[must_use]
    pub fn normal_facing(&self, sun: &Vector3<f64>) -> Vector3<f64> {
        let normal = self.normal.into_inner();
        let Some(hinge) = self.hinge else { return normal };
        let across = |v: &Vector3<f64>| v - hinge.into_inner() * hinge.dot(v);
        match across(sun).try_normalize(1e-9) {
            Some(towards) => hinge.into_inner() * hinge.dot(&normal) + towards * across(&normal).norm(),
            None => normal,
        }
    }
}

pub(super) fn read(spec: &Spec, parameters: &mut Parameters, faults: &mut Faults) -> (Vec<Material>, Vec<Surface>) {
    faults.unique("materials", spec.materials.iter().map(|material| material.name.as_str()));
    faults.unique("surfaces", spec.surfaces.iter().map(|surface| surface.name.as_str()));
    let materials = (0..spec.materials.len()).filter_map(|index| material(spec, index, parameters, faults)).collect();
    let surfaces = (0..spec.surfaces.len()).filter_map(|index| facet(spec, index, faults)).collect();
    (materials, surfaces)
}

fn material(spec: &Spec, index: usize, parameters: &mut Parameters, faults: &mut Faults) -> Option<Material> {
    let written = spec.materials.get(index)?;
    let at = format!("materials[{index}]");
    let specular = faults.spread(&format!("{at}.specular"), written.specular.0.clone(), 0.0, 1.0, "a share of light");
    let diffuse = faults.spread(&format!("{at}.diffuse"), written.diffuse.0.clone(), 0.0, 1.0, "a share of light");
    let drag = match written.drag_coefficient.clone() {
        Some(drag) => Some(faults.positive_spread(&format!("{at}.drag_coefficient"), drag.0, "a drag coefficient")?),
        None => None,
    };
    let (specular, diffuse) = (specular?, diffuse?);
    let most = specular.support().1 + diffuse.support().1;
    if most > 1.0 + 1e-12 {
        faults.push(
            &format!("{at}.diffuse"),
            format!("`specular` and `diffuse` together reach {most:.3}, more than all the light"),
            "lower one of them or narrow its spread: their sum must stay at or under 1",
        );
        return None;
    }
    let name = |what: &str| format!("materials[{}].{what}", written.name);
    let mut register = |what: &str, spread: Spread| parameters.register(name(what), "", spread);
    Some(Material {
        specular: register("specular", specular),
        diffuse: register("diffuse", diffuse),
        drag_coefficient: drag.map(|drag| register("drag_coefficient", drag)),
    })
}

fn facet(spec: &Spec, index: usize, faults: &mut Faults) -> Option<Surface> {
    let written = spec.surfaces.get(index)?;
    let at = format!("surfaces[{index}]");
    let area_m2 = faults.positive(&format!("{at}.area"), written.area.0, "an area");
    let normal = faults.direction(&format!("{at}.normal"), written.normal.0);
    let hinge = match written.follows_sun_about {
        Some(axis) => Some(Unit::new_unchecked(faults.direction(&format!("{at}.follows_sun_about"), axis.0)?)),
        None => None,
    };
    let names = spec.materials.iter().map(|material| material.name.as_str());
    let Some(material) = names.clone().position(|name| name == written.material) else {
        let help = did_you_mean(&written.material, names).unwrap_or_else(|| "describe it under `materials`".to_owned());
        faults.push(
            &format!("{at}.material"),
            format!("names the material `{}`, which `materials` does not describe", written.material),
            help,
        );
        return None;
    };
    Some(Surface {
        name: written.name.clone(),
        area_m2: area_m2?,
        centre_m: Vector3::from(written.centre.0),
        normal: Unit::new_unchecked(normal?),
        material,
        both_sides: written.both_sides,
        hinge,
        shade: match &written.shaded {
            None => None,
            Some(shaded) => Some(shade(spec, index, shaded, &format!("{at}.shaded"), faults)?),
        },
    })
}

fn shade(spec: &Spec, own: usize, written: &config::Shaded, at: &str, faults: &mut Faults) -> Option<Shade> {
    let names = spec.surfaces.iter().map(|surface| surface.name.as_str());
    let by = names.clone().position(|name| name == written.by).filter(|by| *by != own);
    let Some(by) = by else {
        let others = names.enumerate().filter(|(k, _)| *k != own).map(|(_, name)| name);
        let help = did_you_mean(&written.by, others).unwrap_or_else(|| "name another of `surfaces`".to_owned());
        faults.push(&format!("{at}.by"), format!("`{}` is no other surface", written.by), help);
        return None;
    };
    let (from, to) = (written.from.map_or(0.0, |from| from.0), written.to.0);
    if !(0.0 <= from && from <= to && to <= std::f64::consts::PI) {
        let message = "expected angles with 0 ≤ `from` ≤ `to` ≤ 180 deg".to_owned();
        faults.push(at, message, "give the angles from the shading surface's normal between which it hides the Sun");
        return None;
    }
    Some(Shade { by, sun_angle_rad: [from, to] })
}
