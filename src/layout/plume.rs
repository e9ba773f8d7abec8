//! Facets that stand in a plume.

use crate::vehicle::{Surface, Thruster, Vehicle};

/// A facet inside the plume of a thruster.
#[derive(Debug, Clone, PartialEq)]
pub struct Impingement {
    /// Name of the thruster.
    pub thruster: String,
    /// Name of the facet.
    pub surface: String,
    /// Angle between the plume's axis and the nearest edge of the facet, rad; 0 if the axis meets it.
    pub angle_rad: f64,
    /// Distance from the nozzle to the centre of the facet, m.
    pub distance_m: f64,
}

/// Nozzle and facet count as in one plane below this distance, m.
const IN_PLANE_M: f64 = 1e-3;

/// Every facet inside a plume's cone and range; empty if the configuration states no plume.
///
/// A facet counts as a disc of its area about its centre, seen square on. One that lies in the plane of the
/// nozzle, or whose back the plume meets while only its front is outside, is left out. A hinged facet
/// counts wherever it stands.
#[must_use]
pub fn impingements(vehicle: &Vehicle) -> Vec<Impingement> {
    let Some((half_angle, range)) = vehicle.propulsion.plume else { return Vec::new() };
    let pairs = vehicle.propulsion.thrusters.iter().flat_map(|thruster| vehicle.surfaces.iter().map(move |surface| (thruster, surface)));
    pairs.filter_map(|(thruster, surface)| impingement(thruster, surface, half_angle, range)).collect()
}

fn impingement(thruster: &Thruster, surface: &Surface, half_angle: f64, range: f64) -> Option<Impingement> {
    let to_centre = surface.centre_m - thruster.position_m;
    let plume = -thruster.push.into_inner();
    let distance = to_centre.norm();
    let radius = (surface.area_m2 / std::f64::consts::PI).sqrt();
    if surface.hinge.is_none() {
        let height = surface.normal.dot(&to_centre).abs();
        let from_behind = surface.normal.dot(&to_centre) > 0.0;
        if height < IN_PLANE_M || (from_behind && !surface.both_sides) {
            return None;
        }
    }
    let centre_angle = if distance > 0.0 { plume.angle(&to_centre) } else { 0.0 };
    let angle_rad = (centre_angle - radius.atan2(distance)).max(0.0);
    (angle_rad <= half_angle && distance - radius <= range).then(|| Impingement {
        thruster: thruster.name.clone(),
        surface: surface.name.clone(),
        angle_rad,
        distance_m: distance,
    })
}
